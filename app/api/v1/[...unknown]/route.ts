import { problemResponse } from "@/lib/http/answers";
import { problem } from "@/lib/problem";

/** Every other path under the API: a problem, not a page. */
const unknown = () => problemResponse(problem("not-found", "The API has no such path; /api/v1/openapi.json lists all of them."));

export { unknown as GET, unknown as POST, unknown as PUT, unknown as PATCH, unknown as DELETE };
