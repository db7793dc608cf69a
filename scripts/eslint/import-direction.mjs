import path from "node:path";

/**
 * The floors of the house, from the roof down. A file may import from its own room and from the rooms listed for it;
 * everything else would turn the direction round.
 */
export const MAY_IMPORT = {
  app: ["components", "lib"],
  components: ["components", "lib/science", "lib/number-text", "lib/problem"],
  scripts: ["lib", "db"],
  "lib/science": ["lib/science"],
  "lib/formats": ["lib/formats", "lib/science", "lib/problem"],
  "lib/problem": [],
  "lib/number-text": ["lib/science"],
  "lib/http": ["lib/http", "lib/accounts", "lib/problem", "db"],
  "lib/accounts": ["lib/accounts", "lib/http", "lib/problem", "db"],
  "lib/health": ["lib/health", "lib/http", "db"],
  "lib/jobs": ["lib/jobs", "lib/runs", "lib/archives", "lib/analyses", "lib/detections", "lib/accounts", "lib/http", "lib/problem", "db"],
  "lib/archives": ["lib/archives", "lib/runs", "lib/jobs", "lib/accounts", "lib/http", "lib/formats", "lib/problem", "db"],
  "lib/runs": ["lib/runs", "lib/archives", "lib/jobs", "lib/accounts", "lib/http", "lib/formats", "lib/science", "lib/problem", "db"],
  "lib/detections": ["lib/detections", "lib/runs", "lib/jobs", "lib/accounts", "lib/http", "lib/science", "lib/problem", "db"],
  "lib/analyses": ["lib/analyses", "lib/detections", "lib/runs", "lib/archives", "lib/jobs", "lib/accounts", "lib/http", "lib/formats", "lib/science", "lib/problem", "lib/number-text", "db"],
  "lib/figures": ["lib/figures", "lib/analyses", "lib/detections", "lib/runs", "lib/accounts", "lib/http", "lib/science", "lib/problem", "lib/number-text", "db"],
  db: ["db", "lib/problem"],
};

/** Files that fill or prepare the database stand above it: they call the rooms' own functions. */
const ABOVE_THE_DATABASE = new Set(["db/prepare.ts", "db/seed.ts"]);

/** Returns the room of a repository path such as `lib/science/front/crossing.ts`, or null outside the house. */
export function roomOf(repositoryPath) {
  const parts = repositoryPath.replace(/\.(m?[jt]sx?)$/, "").split("/");
  const two = parts.slice(0, 2).join("/");
  if (two in MAY_IMPORT) return two;
  return parts[0] in MAY_IMPORT ? parts[0] : null;
}

/** Returns why `importer` may not import `imported` (both repository paths), or null when it may. */
export function directionFault(importer, imported) {
  const from = roomOf(importer);
  const to = roomOf(imported);
  if (from === null || to === null || from === to || ABOVE_THE_DATABASE.has(importer)) return null;
  const allowed = MAY_IMPORT[from].some((room) => to === room || to.startsWith(`${room}/`));
  return allowed ? null : `${from} may not import from ${to}: imports go down only. Move what is shared into a room that ${from} may use (${MAY_IMPORT[from].join(", ") || "none"}), or pass it in.`;
}

export const importDirection = {
  meta: { type: "problem", schema: [], docs: { description: "imports go down only" } },
  create(context) {
    const importer = path.relative(context.cwd, context.filename).split(path.sep).join("/");
    function check(node) {
      const source = node.source?.value;
      if (typeof source !== "string") return;
      const imported = resolveImport(importer, source);
      const fault = imported && directionFault(importer, imported);
      if (fault) context.report({ node: node.source, message: fault });
    }
    return { ImportDeclaration: check, ExportNamedDeclaration: check, ExportAllDeclaration: check, ImportExpression: check };
  },
};

function resolveImport(importer, source) {
  if (source.startsWith("@/")) return source.slice(2);
  if (source.startsWith(".")) return path.posix.join(path.posix.dirname(importer), source);
  return null;
}
