// What a request says about itself, and how much of it is believed.
import "server-only";
import { z } from "zod";
import { Refused, type RefusedCode } from "../../db/errors.ts";

const JSON_LIMIT = 65_536;

/** What does not fit the schema, with a sentence for each field. */
export class BadInput extends Error {
  override name = "BadInput";
  constructor(readonly fields: Record<string, string>) {
    super("request.invalid");
  }
}

/**
 * Whether a change comes from our own pages. A browser sends Origin with every request that is not a GET, and a page of another
 * site cannot alter it; where the browser says Sec-Fetch-Site as well, it has to agree.
 */
export function isFromOwnPage(headers: Headers, origins: readonly string[]): boolean {
  const site = headers.get("sec-fetch-site");
  const origin = headers.get("origin");
  return (site === null || site === "same-origin") && origin !== null && origins.includes(origin);
}

/** The address of the browser as the outermost of our own proxies saw it; null when nobody trustworthy says so. */
export function clientAddress(headers: Headers, proxyHops: number): string | null {
  if (proxyHops === 0) return null;
  const chain = (headers.get("x-forwarded-for") ?? "").split(",").map((part) => part.trim());
  const address = chain[chain.length - proxyHops];
  return address === undefined || !/^[0-9a-fA-F.:]{2,45}$/.test(address) ? null : address;
}

/** Checks by the schema; what does not fit is named field by field. */
export function parse<S extends z.ZodType>(schema: S, raw: unknown): z.output<S> {
  const parsed = schema.safeParse(raw);
  if (parsed.success) return parsed.data;
  throw new BadInput(Object.fromEntries(parsed.error.issues.map((issue) => [issue.path.join("."), issue.message])));
}

/** The query of an address; a name given twice is refused, because one of the two would be ignored. */
export function parseQuery<S extends z.ZodType>(schema: S, url: string): z.output<S> {
  const { searchParams } = new URL(url);
  const names = [...searchParams.keys()];
  const twice = names.find((name, index) => names.indexOf(name) !== index);
  if (twice !== undefined) throw new BadInput({ [twice]: "Given twice." });
  return parse(schema, Object.fromEntries(searchParams));
}

/** The id in an address. What cannot be an id of ours names nothing, and is answered like an id that names nothing. */
export function pathId(params: Record<string, string | string[]>, missing: RefusedCode): string {
  const parsed = z.uuid().safeParse(params.id);
  if (!parsed.success) throw new Refused(missing);
  return parsed.data;
}

export async function readJson<S extends z.ZodType>(
  request: Request,
  schema: S,
  limit = JSON_LIMIT,
): Promise<z.output<S>> {
  if (!/^application\/json\s*(;|$)/i.test(request.headers.get("content-type") ?? ""))
    throw new Refused("request.unsupported", { expected: "application/json" });
  const text = new TextDecoder().decode(await readBytes(request, limit));
  return parse(schema, parseText(text));
}

/** The same request with its body read and counted, for a library that reads bodies without a limit. */
export async function refuseLong(request: Request, limit: number): Promise<Request> {
  const body = await readBytes(request, limit);
  return new Request(request.url, { method: request.method, headers: request.headers, body });
}

export async function readOctets(request: Request, limit: number): Promise<Uint8Array<ArrayBuffer>> {
  const type = request.headers.get("content-type") ?? "";
  if (!/^application\/octet-stream\s*(;|$)/i.test(type))
    throw new Refused("request.unsupported", { expected: "application/octet-stream" });
  return readBytes(request, limit);
}

/** The body, counted while it comes: what a header announces is only believed when it is too much already. */
async function readBytes(request: Request, limit: number): Promise<Uint8Array<ArrayBuffer>> {
  if (Number(request.headers.get("content-length") ?? "0") > limit) throw new Refused("request.too-large", { limit });
  const reader = request.body?.getReader();
  const chunks: Uint8Array[] = [];
  let length = 0;
  while (reader !== undefined) {
    const { done, value } = await reader.read();
    if (done) break;
    length += value.byteLength;
    if (length > limit) {
      await reader.cancel();
      throw new Refused("request.too-large", { limit });
    }
    chunks.push(value);
  }
  return new Uint8Array(Buffer.concat(chunks));
}

function parseText(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch {
    throw new BadInput({ "": "This is not JSON." });
  }
}
