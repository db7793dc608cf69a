import { fileURLToPath } from "node:url";
import { defineConfig } from "vitest/config";

const alias = {
  "server-only": fileURLToPath(new URL("./scripts/server-only-stand-in.mjs", import.meta.url)),
  "@": fileURLToPath(new URL("./", import.meta.url)).replace(/\/$/, ""),
};

export default defineConfig({
  resolve: { alias },
  test: {
    projects: [
      {
        resolve: { alias },
        test: {
          name: "unit",
          include: ["tests/{science,formats,lib,components,scripts}/**/*.test.{ts,tsx}"],
          environment: "node",
          testTimeout: 60_000,
        },
      },
      {
        resolve: { alias },
        test: {
          name: "served",
          include: ["tests/{api,jobs,browser}/**/*.test.ts"],
          environment: "node",
          testTimeout: 120_000,
          hookTimeout: 120_000,
          fileParallelism: false,
        },
      },
    ],
  },
});
