import type { Endpoint } from "@/lib/http/endpoint";
import { call, type Credentials } from "./client";
import type { PreparedIds } from "./prepared-rows";

/** Calls an endpoint with its own example, on the given things; what the body refers to may be others. */
export function callEndpoint(endpoint: Endpoint, ids: PreparedIds, as: Credentials, referredTo = ids): Promise<Response> {
  return call(endpoint.method, pathOn(endpoint, ids), { as, ...exampleBody(endpoint, referredTo) });
}

/** Calls an endpoint with a body that cannot be read. */
export function callWithBrokenBody(endpoint: Endpoint, ids: PreparedIds, as: Credentials): Promise<Response> {
  return call(endpoint.method, pathOn(endpoint, ids), { as, body: "{", headers: { "content-type": "application/json" } });
}

/** Returns whether the path names a thing that belongs to a group. */
export function namesAThing(endpoint: Endpoint): boolean {
  return endpoint.path.includes("{");
}

/** Returns whether the example's body refers to a prepared thing. */
export function refersToAThing({ example }: Endpoint): boolean {
  return typeof example === "object" && example !== null && "detectionId" in example;
}

function pathOn(endpoint: Endpoint, ids: PreparedIds): string {
  const path = endpoint.path.replace("/figures/{figure}", "/figures/front.svg").replaceAll(/\/(\w+)\/\{(\w+)\}/g, (_whole, collection: string, parameter: string) => {
    if (!isPrepared(collection, ids)) throw new Error(`${endpoint.path}: prepare an id for {${parameter}} in prepared-rows.ts`);
    return `/${collection}/${ids[collection]}`;
  });
  if (path.includes("{")) throw new Error(`${endpoint.path}: say in endpoint-call.ts what stands for its parameter`);
  const query = new URLSearchParams(endpoint.exampleQuery).toString();
  return query ? `${path}?${query}` : path;
}

function exampleBody(endpoint: Endpoint, ids: PreparedIds): { json?: unknown; body?: string } {
  if (endpoint.streamedBody) return { body: String(endpoint.example) };
  if (endpoint.body === null) return {};
  if (endpoint.example === undefined) throw new Error(`${endpoint.method} ${endpoint.path} needs an example`);
  return { json: withPreparedIds(endpoint.example, ids) };
}

/** A body's reference, such as `detectionId`, is put on the prepared thing. */
function withPreparedIds(example: unknown, ids: PreparedIds): unknown {
  return typeof example === "object" && example !== null && "detectionId" in example ? { ...example, detectionId: ids.detections } : example;
}

function isPrepared(collection: string, ids: PreparedIds): collection is keyof PreparedIds {
  return collection in ids;
}
