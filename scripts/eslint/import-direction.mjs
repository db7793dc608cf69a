import path from "node:path";

/**
 * The capabilities by floor, from the roof down: figures are drawn of analyses, studies ask about them, an analysis stands on a detection, that on a
 * run, whose reading is a job, which a member asked for. Rooms of one floor may use each other: a run is read from its
 * archives and an archive belongs to a run; who asks is part of every request.
 */
const CAPABILITY_FLOORS = [["lib/figures"], ["lib/studies"], ["lib/analyses"], ["lib/detections"], ["lib/runs", "lib/archives"], ["lib/jobs"], ["lib/health"], ["lib/http", "lib/accounts"]];

/** What every capability may use. */
const GROUND = ["lib/science", "lib/formats", "lib/problem", "lib/number-text", "db"];

/** The files that tell a worker which work there is stand on the roof: what they start is below them, nothing starts them. */
const WORKER_FILES = new Set(["lib/jobs/worker-main", "lib/jobs/job-handlers", "lib/jobs/drain-queue"]);

/** Files that fill or prepare the database stand above it: they call the rooms' own functions. */
const ABOVE_THE_DATABASE = new Set(["db/prepare", "db/seed"]);

/** Which rooms a room's files may import from, its own room included. */
export const MAY_IMPORT = {
  app: ["app", "components", "lib"],
  components: ["components", "lib/science", "lib/number-text", "lib/problem"],
  scripts: ["scripts", "lib", "worker", "db"],
  worker: ["worker", "lib", "db"],
  ...Object.fromEntries(CAPABILITY_FLOORS.flatMap((floor, f) => floor.map((room) => [room, [...CAPABILITY_FLOORS.slice(f).flat(), ...GROUND]]))),
  "lib/formats": ["lib/formats", "lib/science", "lib/problem"],
  "lib/science": ["lib/science"],
  "lib/number-text": ["lib/number-text", "lib/science"],
  "lib/problem": ["lib/problem"],
  db: ["db", "lib/problem"],
};

/** Returns the room of a repository path such as `lib/science/front/crossing.ts`, or null outside the house. */
export function roomOf(repositoryPath) {
  const file = withoutEnding(repositoryPath);
  if (WORKER_FILES.has(file)) return "worker";
  const parts = file.split("/");
  if (parts[0] === "lib") return parts.slice(0, 2).join("/");
  return parts[0] in MAY_IMPORT ? parts[0] : null;
}

/** Returns why `importer` may not import `imported` (both repository paths), or null when it may. */
export function directionFault(importer, imported) {
  const from = roomOf(importer);
  const to = roomOf(imported);
  if (from === null || to === null || ABOVE_THE_DATABASE.has(withoutEnding(importer))) return null;
  if (!(from in MAY_IMPORT)) return `imports go down only, and ${from} has no floor yet: give it one in scripts/eslint/import-direction.mjs.`;
  const allowed = MAY_IMPORT[from].some((room) => to === room || to.startsWith(`${room}/`));
  return allowed ? null : `${from} may not import from ${to}: imports go down only. Move what is shared into a room that ${from} may use (${MAY_IMPORT[from].join(", ")}), or pass it in.`;
}

function withoutEnding(repositoryPath) {
  return repositoryPath.replace(/\.(m?[jt]sx?)$/, "");
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
