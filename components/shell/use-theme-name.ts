"use client";

import { useSyncExternalStore } from "react";
import { THEME_COOKIE, type ThemeName } from "./theme-choice";

const YEAR_S = 365 * 24 * 3600;

function currentTheme(): ThemeName {
  const chosen = document.documentElement.dataset.theme;
  if (chosen === "paper" || chosen === "night") return chosen;
  return window.matchMedia("(prefers-color-scheme: dark)").matches ? "night" : "paper";
}

function subscribe(changed: () => void): () => void {
  const system = window.matchMedia("(prefers-color-scheme: dark)");
  const observer = new MutationObserver(changed);
  observer.observe(document.documentElement, { attributeFilter: ["data-theme"] });
  system.addEventListener("change", changed);
  return () => {
    observer.disconnect();
    system.removeEventListener("change", changed);
  };
}

/** Returns the theme in force: the chosen one, else the system's. */
export function useThemeName(): ThemeName {
  return useSyncExternalStore(subscribe, currentTheme, () => "paper");
}

/** Chooses a theme for this browser and remembers it. */
export function chooseTheme(name: ThemeName): void {
  document.documentElement.dataset.theme = name;
  document.cookie = `${THEME_COOKIE}=${name}; path=/; max-age=${YEAR_S}; samesite=lax`;
}
