import type { Config } from "tailwindcss";

const token = (name: string) => `var(--${name})`;

const config: Config = {
  content: [],
  theme: {
    extend: {
      colors: {
        paper: token("paper"),
        well: token("well"),
        hairline: token("hairline"),
        rule: token("rule"),
        ink: token("ink"),
        muted: token("muted"),
        front: token("front"),
        accent: token("accent"),
        warning: token("warning"),
        error: token("error"),
        good: token("good"),
      },
      fontFamily: {
        sans: ["var(--font-text)", "var(--font-greek)", "Seravek", "Gill Sans Nova", "Ubuntu", "Calibri", "sans-serif"],
      },
    },
  },
};

export default config;
