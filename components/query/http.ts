// Asking the server: JSON in, JSON out, and a refusal as the problem that it was answered with (RFC 9457).
import { z } from "zod";

const problemShape = z.looseObject({
  type: z.string().optional(),
  title: z.string(),
  status: z.number(),
  code: z.string(),
  detail: z.string().optional(),
  values: z.record(z.string(), z.unknown()).optional(),
  fields: z.record(z.string(), z.string()).optional(),
  requestId: z.string().optional(),
});
export type Problem = z.infer<typeof problemShape>;

/** The server's refusal. What `fetch` throws itself is something else: then the server was not reached. */
export class ProblemError extends Error {
  constructor(
    readonly problem: Problem,
    readonly retryAfterS: number | null = null,
  ) {
    super(problem.detail === undefined ? `${problem.title}.` : `${problem.title}. ${problem.detail}`);
    this.name = "ProblemError";
  }
}

/** Asks for JSON of a known shape. Throws `ProblemError` for a refusal, and what `fetch` throws when nobody answers. */
export async function getJson<T>(path: string, shape: z.ZodType<T>, signal?: AbortSignal): Promise<T> {
  return answerOf(await fetch(path, { headers: { accept: "application/json" }, signal }), shape);
}

/** Sends JSON and reads the answer. Throws like `getJson`. */
export async function postJson<T>(path: string, body: unknown, shape: z.ZodType<T>, signal?: AbortSignal): Promise<T> {
  const response = await fetch(path, {
    method: "POST",
    headers: { accept: "application/json", "content-type": "application/json" },
    body: JSON.stringify(body),
    signal,
  });
  return answerOf(response, shape);
}

async function answerOf<T>(response: Response, shape: z.ZodType<T>): Promise<T> {
  if (!response.ok) throw await problemOf(response);
  return shape.parse(await response.json());
}

/** The refusal in a response that is not "ok", whatever its body holds. */
export async function problemOf(response: Response): Promise<ProblemError> {
  const wait = Number.parseInt(response.headers.get("retry-after") ?? "", 10);
  const retryAfterS = Number.isFinite(wait) && wait >= 0 ? wait : null;
  const body: unknown = await response.json().catch(() => null);
  const parsed = problemShape.safeParse(body);
  if (parsed.success) return new ProblemError(parsed.data, retryAfterS);
  const title = response.status >= 500 ? "The server could not answer" : "The request was not taken";
  return new ProblemError({ title, status: response.status, code: `http.${response.status}` }, retryAfterS);
}
