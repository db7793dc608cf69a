import { defineConfig, globalIgnores } from "eslint/config";
import nextTypeScript from "eslint-config-next/typescript";
import nextCoreWebVitals from "eslint-config-next/core-web-vitals";
import { importDirection } from "./scripts/eslint/import-direction.mjs";

const DEFAULT_EXPORTS = ["app/**/{page,layout,loading,error,not-found,global-error}.tsx", "*.config.{ts,mjs,mts}", "next.config.mjs", "scripts/closing-line-reporter.mjs"];

export default defineConfig([
  globalIgnores([".next/", ".data/", "node_modules/", "coverage/", "next-env.d.ts", "migrations/", "lib/science/*/kernel/", "**/*.generated.ts"]),
  ...nextCoreWebVitals,
  ...nextTypeScript,
  {
    plugins: { house: { rules: { "import-direction": importDirection } } },
    rules: {
      "house/import-direction": "error",
      "no-param-reassign": "error",
      "max-lines": ["error", { max: 300 }],
    },
  },
  {
    files: ["**/*.{ts,tsx,mts}"],
    rules: {
      "@typescript-eslint/no-explicit-any": "error",
      "@typescript-eslint/no-non-null-assertion": "error",
      "@typescript-eslint/consistent-type-imports": "error",
      "@typescript-eslint/no-unused-vars": ["error", { argsIgnorePattern: "^_" }],
    },
  },
  {
    files: ["{app,components,db,lib}/**/*.{ts,tsx}"],
    ignores: DEFAULT_EXPORTS,
    rules: {
      "no-restricted-syntax": [
        "error",
        { selector: "ExportDefaultDeclaration", message: "Export by name; only Next's own files and configurations have a default." },
        { selector: "ExportAllDeclaration", message: "No barrels: import from the file itself." },
        {
          selector: "CallExpression[callee.property.name=/^find(First|Many)$/] Property[key.name='with']",
          message: "MariaDB has no LATERAL: join explicitly or ask twice instead of `with`.",
        },
      ],
    },
  },
  {
    files: ["components/**/*.{ts,tsx}"],
    rules: {
      "no-restricted-imports": ["error", { patterns: [{ group: ["drizzle-orm*", "mysql2*", "@/db/*"], message: "Components get their data as props or from the API." }] }],
    },
  },
]);
