export const THEME_COOKIE = "strandline-theme";

export type ThemeName = "paper" | "night";

/** Returns the chosen theme, or undefined to follow the system's. */
export function readThemeChoice(cookie: string | undefined): ThemeName | undefined {
  return cookie === "paper" || cookie === "night" ? cookie : undefined;
}
