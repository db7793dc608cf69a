import type { ThemeName } from "@/components/shell/theme-choice";
import type { MapGround } from "./diverging-colours";

/** Colours and font of a chart. On screen they are CSS variables; in files they are written out. */
export interface ChartTheme {
  ground: MapGround;
  ink: string;
  muted: string;
  hairline: string;
  rule: string;
  paper: string;
  /** The front, and nothing else. */
  front: string;
  accent: string;
  bright: string;
  dark: string;
  font: string;
}

const FONT = "Source Sans 3, Source Sans Pro, Seravek, Ubuntu, Calibri, sans-serif";

/** Returns the theme for charts on a page: it follows the page's own theme. */
export function screenTheme(name: ThemeName): ChartTheme {
  return {
    ground: name,
    ink: "var(--ink)",
    muted: "var(--muted)",
    hairline: "var(--hairline)",
    rule: "var(--rule)",
    paper: "var(--paper)",
    front: "var(--front)",
    accent: "var(--accent)",
    bright: "var(--bright)",
    dark: "var(--dark)",
    font: "inherit",
  };
}

/** Themes for files: the same colours as on the page, except that paper figures have a white ground. */
export const FILE_THEMES: Record<ThemeName, ChartTheme> = {
  paper: {
    ground: "white",
    ink: "#1b2a4a",
    muted: "#566079",
    hairline: "#d9d4c8",
    rule: "#8d8675",
    paper: "#ffffff",
    front: "#d94a33",
    accent: "#23508f",
    bright: "#9a5a10",
    dark: "#2f5f9e",
    font: FONT,
  },
  night: {
    ground: "night",
    ink: "#ece4d2",
    muted: "#a3aec6",
    hairline: "#2c3854",
    rule: "#5f6d8f",
    paper: "#101829",
    front: "#ff8065",
    accent: "#8fbaf2",
    bright: "#eca552",
    dark: "#7fb0ee",
    font: FONT,
  },
};
