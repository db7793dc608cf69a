/** Who a test speaks as: a session cookie, a token, or nobody. */
export interface Credentials {
  cookie?: string;
  token?: string;
}

export interface Call {
  as?: Credentials;
  json?: unknown;
  body?: string | Uint8Array<ArrayBuffer> | FormData;
  headers?: Record<string, string>;
}

/** Returns the address of the server under test. */
export function testUrl(): string {
  const url = process.env.STRANDLINE_TEST_URL;
  if (!url) throw new Error("STRANDLINE_TEST_URL is not set; `npm test` sets it");
  return url.replace(/\/$/, "");
}

/** Makes one call of the API; never follows a redirect. */
export function call(method: string, path: string, { as = {}, json, body, headers = {} }: Call = {}): Promise<Response> {
  return fetch(testUrl() + path, {
    method,
    redirect: "manual",
    headers: {
      ...(json !== undefined && { "content-type": "application/json" }),
      ...(as.token !== undefined && { authorization: `Bearer ${as.token}` }),
      ...(as.cookie !== undefined && { cookie: as.cookie }),
      ...headers,
    },
    body: json === undefined ? body : JSON.stringify(json),
  });
}

/** Makes a call that must succeed and returns its JSON. */
export async function callJson<T>(method: string, path: string, options: Call = {}): Promise<T> {
  const response = await call(method, path, options);
  if (!response.ok) throw new Error(`${method} ${path} answered ${response.status}: ${await response.text()}`);
  return (await response.json()) as T;
}

export interface ProblemBody {
  type: string;
  title: string;
  status: number;
  detail: string;
  errors?: { where: string; message: string }[];
}

/** Returns the problem in an answer, after checking that it is one. */
export async function problemIn(response: Response): Promise<ProblemBody> {
  const type = response.headers.get("content-type") ?? "";
  if (!type.startsWith("application/problem+json")) throw new Error(`answered ${response.status} as ${type}, not a problem`);
  const body = (await response.json()) as ProblemBody;
  if (body.status !== response.status) throw new Error(`the problem says ${body.status}, the answer ${response.status}`);
  return body;
}

/** Signs in as a browser does and returns the cookie. */
export async function signedIn(email: string, password: string): Promise<Credentials> {
  const response = await call("POST", "/api/v1/session", { json: { email, password } });
  const cookie = response.headers.getSetCookie().find((text) => text.startsWith("strandline_session="));
  if (!response.ok || !cookie) throw new Error(`sign-in answered ${response.status}`);
  return { cookie: cookie.split(";")[0] };
}

/** Makes a token of the signed-in member's own. */
export async function tokenOf(as: Credentials, scopes: string[]): Promise<Credentials> {
  const made = await callJson<{ token: string }>("POST", "/api/v1/tokens", { as, json: { name: "test", scopes, expiresInDays: 1 } });
  return { token: made.token };
}
