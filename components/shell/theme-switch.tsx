"use client";

import { chooseTheme, useThemeName } from "./use-theme-name";

/** Switches between the paper and the night theme. */
export function ThemeSwitch() {
  const night = useThemeName() === "night";
  return (
    <button
      type="button"
      className="button button-quiet"
      aria-label={night ? "Switch to the paper theme" : "Switch to the night theme"}
      title={night ? "Paper theme" : "Night theme"}
      onClick={() => chooseTheme(night ? "paper" : "night")}
    >
      <svg viewBox="0 0 16 16" width="16" height="16" aria-hidden="true">
        <circle cx="8" cy="8" r="6.25" fill="none" stroke="currentColor" strokeWidth="1.25" />
        <path d="M8 1.75 a6.25 6.25 0 0 1 0 12.5 z" fill="currentColor" />
      </svg>
    </button>
  );
}
