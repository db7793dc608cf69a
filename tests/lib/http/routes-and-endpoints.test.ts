import { readdirSync, readFileSync } from "node:fs";
import path from "node:path";
import { describe, expect, it } from "vitest";
import { ENDPOINTS } from "@/app/api/v1/endpoints";

const API = path.resolve("app/api/v1");

/** `runs/[runId]/route.ts` → `/api/v1/runs/{runId}` */
function pathOf(file: string): string {
  return `/api/v1/${path.dirname(file)}`.replaceAll(/\[(\w+)\]/g, "{$1}");
}

/** All but the one that answers every other path: nothing is there to guard. */
const routeFiles = readdirSync(API, { recursive: true, encoding: "utf8" }).filter((file) => /\/route\.tsx?$/.test(file) && file !== "[...unknown]/route.ts");
const served = routeFiles.flatMap((file) => {
  const source = readFileSync(path.join(API, file), "utf8");
  return [...source.matchAll(/^export (?:const|async function|function) (GET|HEAD|POST|PUT|PATCH|DELETE|OPTIONS)\b(.*)$/gm)].map(
    ([, method, rest]) => ({ call: `${method} ${pathOf(file)}`, rest }),
  );
});

describe("the routes of the API", () => {
  it("and the endpoints are the same, so that none is without a rule", () => {
    expect(served.map(({ call }) => call).sort()).toEqual(ENDPOINTS.map(({ method, path: at }) => `${method} ${at}`).sort());
  });

  it("are all made by serve(), which asks the policy", () => {
    expect(served.filter(({ rest }) => !/^ = serve\(/.test(rest)).map(({ call }) => call)).toEqual([]);
  });
});

describe("an endpoint", () => {
  it.each(ENDPOINTS.filter(({ body }) => body !== null))("$method $path has an example that its own schema accepts", ({ body, example }) => {
    expect(body?.safeParse(example).error?.issues ?? []).toEqual([]);
  });

  it.each(ENDPOINTS.filter(({ path: at }) => at.includes("{")))("$method $path has a schema for each name in its path", ({ path: at, params }) => {
    const names = [...at.matchAll(/\{(\w+)\}/g)].map(([, name]) => name);
    expect(params.safeParse({}).error?.issues.map((issue) => issue.path[0]).sort()).toEqual(names.sort());
  });
});
