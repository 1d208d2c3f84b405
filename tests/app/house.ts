// A server without its sockets: the real store in memory, the real routes, real people who sign in through the real door.
import { expect } from "vitest";
import { readSettings } from "../../app/_server/env.ts";
import { hashPassword } from "../../app/_server/secrets.ts";
import { closeAll } from "../../app/_server/shutdown.ts";
import { beginEntry } from "../../db/entries.ts";
import { enrolPerson } from "../../db/invitations.ts";
import { addMember, createNotebook } from "../../db/notebooks.ts";
import { actorOfPerson } from "../../db/people.ts";
import type { Actor, Role } from "../../db/policy.ts";
import { libraryDatabase, type TestDatabase } from "../support/database.ts";

export const ORIGIN = "https://notebook.example";
export const PASSWORD = "a password of the tests";

export type Visitor = { name: string; email: string; cookie: string; actor: Actor };
export type House = {
  store: TestDatabase;
  notebookId: string;
  /** signs a person up with the roles, makes them a member when `member` is set, and signs them in */
  visitor(name: string, roles: Role[], member: boolean): Promise<Visitor>;
  /** a new draft of the person's, in the house's notebook */
  draft(visitor: Visitor): Promise<{ id: string; revisionId: string; label: string }>;
  close(): Promise<void>;
};

const COUNTED = { people: 0 };

export async function openHouse(): Promise<House> {
  globalThis.counterleafSettings = readSettings({
    COUNTERLEAF_SECRET: "a secret that is used by tests only, and long enough",
    COUNTERLEAF_URL: ORIGIN,
    COUNTERLEAF_DATA: "unused",
  });
  const store = await libraryDatabase();
  globalThis.counterleafStore = Promise.resolve(store);
  const passwordHash = await hashPassword(PASSWORD);
  const root = await person(["administrator"], "Root", passwordHash);
  const notebook = await createNotebook(store.db, root, { code: "TST", title: "Tests", about: "" });

  async function person(roles: Role[], printedName: string, hash: string): Promise<Actor> {
    COUNTED.people += 1;
    const { personId } = await enrolPerson(store.db, null, {
      email: `p${COUNTED.people}@tests.invalid`,
      printedName,
      roles,
      passwordHash: hash,
    });
    const actor = await actorOfPerson(store.db, personId, "tests");
    if (actor === null) throw new Error("no such person");
    return actor;
  }

  return {
    store,
    notebookId: notebook.id,
    async visitor(name, roles, member) {
      const made = await person(roles, name, passwordHash);
      if (member) await addMember(store.db, root, { notebookId: notebook.id, personId: made.id, reason: "for a test" });
      const cookie = await signInCookie(made.email, PASSWORD);
      const actor = await actorOfPerson(store.db, made.id, await sessionOf(cookie));
      if (actor === null) throw new Error("no such person");
      return { name, email: made.email, cookie, actor };
    },
    draft: (visitor) => beginEntry(store.db, visitor.actor, { notebookId: notebook.id }),
    async close() {
      await closeAll();
      await store.close();
      globalThis.counterleafStore = undefined;
      globalThis.counterleafAuth = undefined;
      globalThis.counterleafHub = undefined;
      globalThis.counterleafSeal = undefined;
      globalThis.counterleafProcess = undefined;
    },
  };
}

type Handler = (
  request: Request,
  context: { params: Promise<Record<string, string | string[] | undefined> | undefined> },
) => Promise<Response>;
export type Question = {
  cookie?: string;
  method?: string;
  json?: unknown;
  body?: BodyInit;
  headers?: Record<string, string>;
  params?: Record<string, string | string[]>;
  signal?: AbortSignal;
  /** null: a request that names no origin */
  origin?: string | null;
};

/** Asks a route handler as a browser on one of our pages would. */
export function ask(handler: Handler, path: string, question: Question = {}): Promise<Response> {
  const { cookie, json, body, params, signal, origin = ORIGIN } = question;
  const headers = new Headers(question.headers);
  if (cookie !== undefined) headers.set("cookie", cookie);
  if (json !== undefined) headers.set("content-type", "application/json");
  const method = question.method ?? (json === undefined && body === undefined ? "GET" : "POST");
  if (method !== "GET" && method !== "HEAD" && origin !== null) headers.set("origin", origin);
  const request = new Request(ORIGIN + path, {
    method,
    headers,
    body: json === undefined ? body : JSON.stringify(json),
    signal,
  });
  return handler(request, { params: Promise.resolve(params) });
}

/** Signs in over the route and returns what the browser would send back. */
export async function signInCookie(email: string, password: string): Promise<string> {
  const { POST } = await import("../../app/api/auth/[...all]/route.ts");
  const answer = await ask(POST, "/api/auth/sign-in", { json: { email, password }, params: { all: ["sign-in"] } });
  expect(answer.status, await answer.clone().text()).toBe(200);
  return answer.headers
    .getSetCookie()
    .map((line) => line.split(";")[0])
    .join("; ");
}

async function sessionOf(cookie: string): Promise<string> {
  const { findActor } = await import("../../app/_server/actor.ts");
  return (await findActor(new Headers({ cookie })))?.sessionId ?? "";
}
