// What actions and route handlers have in common: origin, person, input, verb, and one translation of everything that goes wrong.
import "server-only";
import { headers } from "next/headers";
import { unstable_rethrow } from "next/navigation";
import type { z } from "zod";
import { recordRefusal } from "../../db/audit.ts";
import type { Db } from "../../db/client.ts";
import { type Detail, Refused } from "../../db/errors.ts";
import { newId } from "../../db/ids.ts";
import type { Actor } from "../../db/policy.ts";
import { takeFrom } from "../../db/rate.ts";
import { type Activity, requireActor } from "./actor.ts";
import { database } from "./database.ts";
import { settings } from "./env.ts";
import { log } from "./log.ts";
import { closingOf, faultOf, problemOf, type ShownProblem } from "./problem.ts";
import { counted, processState } from "./process-state.ts";
import { BadInput, isFromOwnPage, parse } from "./request.ts";
import { commonHeaders, ROUTE_POLICY } from "./security-headers.ts";

export type Answer<T> = { ok: true; value: T } | { ok: false; problem: ShownProblem };

/** What a route handler is given besides its actor. */
export type Asked = { request: Request; params: Record<string, string | string[]>; db: Db; requestId: string };
/** Where the address has no variable part, Next hands in no params. */
type RouteContext = { params: Promise<Record<string, string | string[] | undefined> | undefined> };
type RouteHandler = (request: Request, context: RouteContext) => Promise<Response>;

/** An action: the origin is ours, the input fits, somebody is signed in; then the verb, and a value or a problem. */
export async function answer<S extends z.ZodType, T>(
  schema: S,
  raw: unknown,
  act: (actor: Actor, input: z.output<S>, db: Db) => Promise<T>,
): Promise<Answer<T>> {
  const asked = await headers();
  return translated("action", async (say) => {
    demandOwnPage(asked);
    const input = parse(schema, raw);
    const actor = await requireActor(asked);
    say(actor);
    return act(actor, input, await database());
  });
}

/** An action of somebody who is not signed in yet. */
export async function answerStranger<S extends z.ZodType, T>(
  schema: S,
  raw: unknown,
  act: (input: z.output<S>, db: Db, asked: Headers) => Promise<T>,
): Promise<Answer<T>> {
  const asked = await headers();
  return translated("action", async () => {
    demandOwnPage(asked);
    return act(parse(schema, raw), await database(), asked);
  });
}

/** A route for members of the house. What is not a Response is sent as JSON. `activity: "none"` does not keep a session awake. */
export function route(
  handle: (actor: Actor, asked: Asked) => Promise<unknown>,
  activity: Activity = "touch",
): RouteHandler {
  return openRoute(async (asked, say) => {
    const actor = await requireActor(asked.request.headers, activity);
    demandSamePerson(actor, asked.request.headers);
    say(actor);
    return handle(actor, asked);
  });
}

/** A route that asks for nobody, or finds out by itself who it is. */
export function openRoute(handle: (asked: Asked, say: (actor: Actor) => void) => Promise<unknown>): RouteHandler {
  return async (request, context) => {
    const answered = await translated(`${request.method} ${new URL(request.url).pathname}`, async (say, requestId) => {
      if (!["GET", "HEAD"].includes(request.method)) demandOwnPage(request.headers);
      const params = Object.fromEntries(
        Object.entries((await context.params) ?? {}).flatMap(([name, value]) =>
          value === undefined ? [] : [[name, value]],
        ),
      );
      const value = await handle({ request, params, db: await database(), requestId }, say);
      return { value, requestId };
    });
    if (!answered.ok) return problemResponse(answered.problem);
    const { value, requestId } = answered.value;
    return value instanceof Response
      ? withHeaders(value, requestId)
      : withHeaders(Response.json(value ?? null), requestId);
  };
}

/** A problem as RFC 9457 wants it. */
export function problemResponse(problem: ShownProblem): Response {
  const response = new Response(JSON.stringify(problem), {
    status: problem.status,
    headers: { "content-type": "application/problem+json" },
  });
  if (problem.status === 429 || problem.status === 503) response.headers.set("retry-after", String(waitOf(problem)));
  return withHeaders(response, problem.requestId);
}

/**
 * A page says whose it is. On a shared device it may outlive its person's session: what it sends then is not the next person's
 * work, and is answered as the session's end (COL-07).
 */
function demandSamePerson(actor: Actor, asked: Headers): void {
  const person = asked.get("x-person");
  if (person !== null && person !== actor.id) throw new Refused("session.ended");
}

export function demandOwnPage(asked: Headers): void {
  if (!isFromOwnPage(asked, settings().origins)) throw new Refused("request.cross-site");
}

async function translated<T>(
  what: string,
  work: (say: (actor: Actor) => void, requestId: string) => Promise<T>,
): Promise<Answer<T>> {
  const requestId = newId();
  const began = performance.now();
  if (processState().closing) return { ok: false, problem: closingOf(requestId) };
  let actor: Actor | null = null;
  const told = (fields: object) => ({
    requestId,
    what,
    person: actor?.id,
    elapsedMs: Math.round(performance.now() - began),
    ...fields,
  });
  return counted(async () => {
    try {
      const value = await work((known) => {
        actor = known;
      }, requestId);
      log.debug(told({}), "answered");
      return { ok: true, value };
    } catch (error) {
      unstable_rethrow(error);
      if (error instanceof BadInput) {
        log.info(told({ code: "request.invalid", fields: Object.keys(error.fields) }), "refused");
        return { ok: false, problem: problemOf("request.invalid", requestId, {}, error.fields) };
      }
      if (error instanceof Refused) {
        log.info(told({ code: error.code }), "refused");
        await keepRefusal(actor, error, what, requestId);
        return { ok: false, problem: problemOf(error.code, requestId, error.detail, fieldsOf(error.detail)) };
      }
      log.error(told({ error }), "fault");
      return { ok: false, problem: faultOf(requestId) };
    }
  });
}

/** A refusal of rights is an event. The transaction of the refused verb is gone, so it is written in one of its own. */
async function keepRefusal(actor: Actor | null, refused: Refused, what: string, requestId: string): Promise<void> {
  if (
    actor === null ||
    !/[.](forbidden|self|author|contributor|not-author|held|not-found|assigned-to-another|began-reset)$/.test(
      refused.code,
    )
  )
    return;
  try {
    const db = await database();
    // Somebody who tries a thousand addresses writes thirty events a minute, not a thousand.
    if (!(await takeFrom(db, `refusals:${actor.id}`, 30, 60_000)).ok) return;
    await recordRefusal(db, actor, { code: refused.code, request: what });
  } catch (error) {
    // The answer is the same with or without the event; that it could not be written is for whoever runs the server.
    log.error({ requestId, error }, "a refusal could not be recorded");
  }
}

function fieldsOf(detail: Detail): Record<string, string> {
  return typeof detail.field === "string" && typeof detail.text === "string" ? { [detail.field]: detail.text } : {};
}

function waitOf(problem: ShownProblem): number {
  const wait = problem.values?.retryAfterS ?? problem.values?.seconds;
  const until = problem.values?.until;
  if (typeof wait === "number") return Math.max(1, Math.ceil(wait));
  if (typeof until === "string") return Math.max(1, Math.ceil((Date.parse(until) - Date.now()) / 1000));
  return problem.status === 503 ? 2 : 5;
}

function withHeaders(response: Response, requestId: string): Response {
  const own = {
    "cache-control": "no-store",
    "content-security-policy": ROUTE_POLICY,
    ...commonHeaders(settings().url.startsWith("https:")),
  };
  for (const [name, value] of Object.entries(own)) if (!response.headers.has(name)) response.headers.set(name, value);
  response.headers.set("x-request-id", requestId);
  return response;
}
