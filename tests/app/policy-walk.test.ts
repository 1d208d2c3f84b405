// Every route and every action × every role × member or not. The files are read from disk: one that is not in the table fails.
import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it, vi } from "vitest";
import type { Answer } from "../../app/_server/answer.ts";
import * as forgotten from "../../app/(auth)/forgotten/actions.ts";
import * as join_ from "../../app/(auth)/join/actions.ts";
import * as reset from "../../app/(auth)/reset-password/actions.ts";
import * as door from "../../app/(auth)/sign-in/actions.ts";
import * as account from "../../app/(notebook)/account/actions.ts";
import * as everywhere from "../../app/(notebook)/actions.ts";
import * as notebooksAdministration from "../../app/(notebook)/administration/notebooks/actions.ts";
import * as peopleAdministration from "../../app/(notebook)/administration/people/actions.ts";
import * as entryPage from "../../app/(notebook)/entries/_page/actions.ts";
import * as signing from "../../app/(notebook)/entries/_page/signing-actions.ts";
import * as attachment from "../../app/api/attachments/[id]/route.ts";
import * as strike from "../../app/api/attachments/[id]/strike/route.ts";
import * as authenticate from "../../app/api/auth/[...all]/route.ts";
import * as compounds from "../../app/api/compounds/route.ts";
import * as health from "../../app/api/health/route.ts";
import * as ingest from "../../app/api/ingest/[...key]/route.ts";
import * as keys from "../../app/api/keys/route.ts";
import * as kept from "../../app/api/results/kept/route.ts";
import * as results from "../../app/api/results/route.ts";
import * as events from "../../app/api/revisions/[id]/events/route.ts";
import * as presence from "../../app/api/revisions/[id]/presence/route.ts";
import * as stray from "../../app/api/revisions/[id]/stray/route.ts";
import * as updates from "../../app/api/revisions/[id]/updates/route.ts";
import * as csv from "../../app/api/search/csv/route.ts";
import * as uploads from "../../app/api/uploadthing/route.ts";
import { storeAttachment } from "../../db/attachments.ts";
import { newId } from "../../db/ids.ts";
import { enrolPerson } from "../../db/invitations.ts";
import type { Role } from "../../db/policy.ts";
import { pageState } from "../../db/updates.ts";
import { ask, type House, ORIGIN, openHouse, PASSWORD, type Question, signInCookie, type Visitor } from "./house.ts";
import { addParagraph, openPage } from "./page.ts";
import { scope } from "./scope.ts";

vi.mock("next/headers", async () => {
  const { scope: now } = await import("./scope.ts");
  return { headers: async () => now.headers, cookies: async () => ({ set: () => undefined }) };
});

const PEOPLE = {
  nobody: null,
  author: { roles: ["researcher"], member: true },
  colleague: { roles: ["researcher"], member: true },
  outsider: { roles: ["researcher"], member: false },
  witness: { roles: ["witness"], member: true },
  "outside witness": { roles: ["witness"], member: false },
  supervisor: { roles: ["supervisor"], member: true },
  "outside supervisor": { roles: ["supervisor"], member: false },
  administrator: { roles: ["administrator"], member: true },
  "outside administrator": { roles: ["administrator"], member: false },
  "member without a role": { roles: [], member: true },
} as const satisfies Record<string, { roles: readonly Role[]; member: boolean } | null>;
type Who = keyof typeof PEOPLE;
const EVERYBODY: readonly Who[] = [
  "nobody",
  "author",
  "colleague",
  "outsider",
  "witness",
  "outside witness",
  "supervisor",
  "outside supervisor",
  "administrator",
  "outside administrator",
  "member without a role",
];

let house: House;
const visitors = new Map<Who, Visitor>();
let draft: { id: string; revisionId: string; label: string };

beforeAll(async () => {
  house = await openHouse();
  for (const who of EVERYBODY) {
    const kind = PEOPLE[who];
    if (kind !== null) visitors.set(who, await house.visitor(who, [...kind.roles], kind.member));
  }
  draft = await house.draft(visitor("author"));
}, 120_000);
afterAll(() => house.close());

function visitor(who: Who): Visitor {
  const found = visitors.get(who);
  if (found === undefined) throw new Error(`${who} has no account`);
  return found;
}

type Try = (who: Who) => Promise<string>;
/** `is` names whose answer differs from `else`; whoever is not signed in gets `session.ended` unless it says otherwise. */
type Row = { try: Try; is?: Partial<Record<Who, string>>; else: string };

const readers = { author: "ok", colleague: "ok", witness: "ok", supervisor: "ok" };
const writers = { author: "ok", colleague: "ok", witness: "revision.forbidden", supervisor: "revision.forbidden" };
/** On a draft the witness is told that it is none to witness yet; who holds another role, that it is not theirs. */
const witnesses = {
  author: "revision.forbidden",
  colleague: "revision.forbidden",
  witness: "revision.not-signed",
  supervisor: "revision.forbidden",
};
const NO_HASH = "0".repeat(64);
const administrators = { administrator: "ok", "outside administrator": "ok" };
const open = { nobody: "ok" };

const TABLE: Record<string, Row> = {
  // routes
  "GET /api/health": { try: (who) => outcome(who, health.GET, "/api/health"), is: open, else: "ok" },
  "GET /api/keys": { try: (who) => outcome(who, keys.GET, "/api/keys"), is: open, else: "ok" },
  "GET /api/auth/[...all]": {
    try: (who) => outcome(who, authenticate.GET, "/api/auth/session", { params: { all: ["session"] } }),
    is: open,
    else: "ok",
  },
  "POST /api/auth/[...all]": {
    try: (who) =>
      outcome(who, authenticate.POST, "/api/auth/sign-in", { params: { all: ["sign-in"] }, json: stranger() }),
    is: { nobody: "account.wrong-password" },
    else: "account.wrong-password",
  },
  "GET /api/compounds": { try: (who) => outcome(who, compounds.GET, "/api/compounds?q=citric"), else: "ok" },
  "GET /api/search/csv": { try: (who) => outcome(who, csv.GET, "/api/search/csv?words=nothing"), else: "ok" },
  "POST /api/results": {
    try: (who) =>
      outcome(who, results.POST, "/api/results", { json: { revisionId: draft.revisionId, block: {}, sweeps: false } }),
    // Whoever may read is told that the block is none; nobody else gets as far.
    is: { author: "block.invalid", colleague: "block.invalid", witness: "block.invalid", supervisor: "block.invalid" },
    else: "entry.not-found",
  },
  "GET /api/results/kept": {
    try: (who) => outcome(who, kept.GET, `/api/results/kept?revision=${draft.revisionId}&block=b1`),
    is: readers,
    else: "entry.not-found",
  },
  "GET /api/revisions/[id]/events": {
    try: async (who) => {
      const leave = new AbortController();
      const answered = await outcome(who, events.GET, page("events"), {
        params: { id: draft.revisionId },
        signal: leave.signal,
      });
      leave.abort();
      return answered;
    },
    is: readers,
    else: "entry.not-found",
  },
  "GET /api/revisions/[id]/stray": {
    try: (who) => outcome(who, stray.GET, page("stray"), { params: { id: draft.revisionId } }),
    is: readers,
    else: "entry.not-found",
  },
  "POST /api/revisions/[id]/presence": {
    // One tab, the first word of it, and that it is leaving.
    try: (who) =>
      outcome(who, presence.POST, page("presence"), {
        params: { id: draft.revisionId },
        json: { bytes: Buffer.from("\u0001\u0001\u0001\u0004null").toString("base64") },
      }),
    is: readers,
    else: "entry.not-found",
  },
  "POST /api/revisions/[id]/updates": { try: tryUpdate, is: writers, else: "entry.not-found" },
  "GET /api/uploadthing": { try: (who) => outcome(who, uploads.GET, "/api/uploadthing"), else: "ok" },
  "POST /api/uploadthing": {
    try: (who) =>
      outcome(who, uploads.POST, "/api/uploadthing?actionType=upload&slug=attachment", { json: announcement() }),
    is: { author: "ok", colleague: "ok", witness: "403", supervisor: "403" },
    else: "404",
  },
  "HEAD /api/ingest/[...key]": {
    try: async (who) => outcome(who, ingest.HEAD, await ticket(), { method: "HEAD" }),
    is: { author: "ok" },
    else: "request.not-found",
  },
  "PUT /api/ingest/[...key]": {
    try: async (who) => {
      const body = new FormData();
      body.set("file", new File(["x"], "a.txt", { type: "text/plain" }));
      return outcome(who, ingest.PUT, await ticket(), { method: "PUT", body });
    },
    is: { author: "ok" },
    else: "request.not-found",
  },
  "GET /api/attachments/[id]": {
    try: async (who) => {
      const id = await file();
      return outcome(who, attachment.GET, `/api/attachments/${id}`, { params: { id } });
    },
    is: readers,
    else: "attachment.not-found",
  },
  "POST /api/attachments/[id]/strike": {
    try: async (who) => {
      const id = await file();
      const json = { revisionId: draft.revisionId, reason: "for a test" };
      return outcome(who, strike.POST, `/api/attachments/${id}/strike`, { params: { id }, json });
    },
    is: writers,
    else: "entry.not-found",
  },
  // actions of whoever is not signed in yet
  "(auth)/sign-in enter": {
    try: act(door.enter, stranger),
    is: { nobody: "account.wrong-password" },
    else: "account.wrong-password",
  },
  "(auth)/forgotten askForLink": {
    try: act(forgotten.askForLink, () => ({ email: stranger().email })),
    is: open,
    else: "ok",
  },
  "(auth)/reset-password setPassword": {
    try: act(reset.setPassword, () => ({ token: newId(), newPassword: "five plain words for this" })),
    is: { nobody: "invitation.invalid" },
    else: "invitation.invalid",
  },
  "(auth)/join takePlace": {
    try: act(join_.takePlace, () => ({ code: newId(), password: "five plain words for this" })),
    is: { nobody: "invitation.invalid" },
    else: "invitation.invalid",
  },
  // actions
  "(notebook) leave": {
    // With a session of its own: it ends.
    try: async (who) =>
      action(everywhere.leave, undefined, who === "nobody" ? "" : await signInCookie(visitor(who).email, PASSWORD)),
    else: "ok",
  },
  "(notebook) begin": {
    try: act(everywhere.begin, () => ({ notebookId: house.notebookId })),
    is: { author: "ok", colleague: "ok", witness: "notebook.forbidden", supervisor: "notebook.forbidden" },
    else: "notebook.not-found",
  },
  "(notebook) confirmPerson": {
    try: act(everywhere.confirmPerson, async () => ({ personId: await somebody(), how: "seen in person" })),
    is: {
      supervisor: "person.not-held",
      "outside supervisor": "person.not-held",
      administrator: "person.not-held",
      "outside administrator": "person.not-held",
    },
    else: "administration.forbidden",
  },
  "(notebook)/account savePassword": {
    try: act(account.savePassword, () => ({ currentPassword: PASSWORD, newPassword: PASSWORD, again: PASSWORD })),
    else: "ok",
  },
  "(notebook)/account savePreferences": {
    try: act(account.savePreferences, () => ({ decimalSign: ",", timeZone: "Europe/Prague" })),
    else: "ok",
  },
  "(notebook)/account endOne": { try: act(account.endOne, () => ({ sessionId: newId() })), else: "session.not-found" },
  "(notebook)/account endOthers": { try: act(account.endOthers, () => undefined), else: "ok" },
  "(notebook)/administration/notebooks makeNotebook": {
    try: act(notebooksAdministration.makeNotebook, () => ({
      code: `N${number()}`,
      title: "Made in a test",
      about: "",
    })),
    is: administrators,
    else: "administration.forbidden",
  },
  "(notebook)/administration/notebooks takeIn": {
    try: act(notebooksAdministration.takeIn, async () => ({
      notebookId: house.notebookId,
      personId: await somebody(),
      reason: "for a test",
    })),
    is: administrators,
    else: "administration.forbidden",
  },
  "(notebook)/administration/notebooks takeOut": {
    try: act(notebooksAdministration.takeOut, async () => ({
      notebookId: house.notebookId,
      personId: await somebody(),
      reason: "for a test",
    })),
    is: { administrator: "notebook.not-member", "outside administrator": "notebook.not-member" },
    else: "administration.forbidden",
  },
  "(notebook)/administration/people invitePerson": {
    try: act(peopleAdministration.invitePerson, () => ({
      printedName: "Invited",
      email: stranger().email,
      roles: ["witness"],
    })),
    is: administrators,
    else: "administration.forbidden",
  },
  "(notebook)/administration/people giveRole": {
    try: act(peopleAdministration.giveRole, async () => ({
      personId: await somebody(),
      role: "witness",
      reason: "for a test",
    })),
    is: administrators,
    else: "administration.forbidden",
  },
  "(notebook)/administration/people takeRole": {
    try: act(peopleAdministration.takeRole, async () => ({
      personId: await somebody(),
      role: "researcher",
      reason: "for a test",
    })),
    is: administrators,
    else: "administration.forbidden",
  },
  "(notebook)/administration/people closeAccount": {
    try: act(peopleAdministration.closeAccount, async () => ({ personId: await somebody(), reason: "for a test" })),
    is: administrators,
    else: "administration.forbidden",
  },
  "(notebook)/administration/people startReset": {
    try: act(peopleAdministration.startReset, async () => ({ personId: await somebody(), reason: "for a test" })),
    is: administrators,
    else: "administration.forbidden",
  },
  "(notebook)/entries/_page/signing open": {
    // To open a draft for signing is its author's; readers see it on its page.
    try: act(signing.open, () => ({ revisionId: draft.revisionId })),
    is: {
      author: "ok",
      colleague: "revision.not-author",
      witness: "revision.forbidden",
      supervisor: "revision.forbidden",
    },
    else: "entry.not-found",
  },
  "(notebook)/entries/_page/signing readToTheEnd": {
    // Readers, but nobody has a content of this hash open.
    try: act(signing.readToTheEnd, () => ({ revisionId: draft.revisionId, contentSha256: NO_HASH })),
    is: {
      author: "revision.not-whole",
      colleague: "revision.not-whole",
      witness: "revision.not-whole",
      supervisor: "revision.not-whole",
    },
    else: "entry.not-found",
  },
  "(notebook)/entries/_page/signing signNow": {
    // The author gets as far as the content, which is not the one that was shown.
    try: act(signing.signNow, () => ({ revisionId: draft.revisionId, shownHash: NO_HASH, password: PASSWORD })),
    is: {
      author: "revision.changed",
      colleague: "revision.not-author",
      witness: "revision.forbidden",
      supervisor: "revision.forbidden",
    },
    else: "entry.not-found",
  },
  "(notebook)/entries/_page/signing check": {
    try: act(signing.check, () => ({ revisionId: draft.revisionId })),
    is: witnesses,
    else: "entry.not-found",
  },
  "(notebook)/entries/_page/signing countersignNow": {
    try: act(signing.countersignNow, () => ({
      revisionId: draft.revisionId,
      shownHash: NO_HASH,
      findingId: newId(),
      acknowledgement: "",
      password: PASSWORD,
    })),
    is: witnesses,
    else: "entry.not-found",
  },
  "(notebook)/entries/_page/signing giveBack": {
    try: act(signing.giveBack, () => ({ revisionId: draft.revisionId, reason: "for a test" })),
    is: witnesses,
    else: "entry.not-found",
  },
  "(notebook)/entries/_page assign": {
    try: act(entryPage.assign, () => ({ entryId: draft.id, witnessId: visitor("witness").actor.id })),
    is: { author: "entry.forbidden", colleague: "entry.forbidden", witness: "entry.forbidden", supervisor: "ok" },
    else: "entry.not-found",
  },
};

describe("the table", () => {
  it("names every route and every action there is, and no other", () => {
    expect(Object.keys(TABLE).sort()).toEqual([...routesOnDisk(), ...actionsOnDisk()].sort());
  });
});

describe("who may what (ADM-03)", () => {
  // Eleven people, some of whose tries spend a password hash each.
  it.each(Object.entries(TABLE))("%s", { timeout: 120_000 }, async (_, row) => {
    const expected: Record<string, string> = {};
    const answered: Record<string, string> = {};
    for (const who of EVERYBODY) {
      expected[who] = row.is?.[who] ?? (who === "nobody" ? "session.ended" : row.else);
      answered[who] = await row.try(who);
    }
    expect(answered).toEqual(expected);
  });

  it("lets nobody change their own roles or close their own account (ADM-03)", async () => {
    const own = visitor("administrator");
    const over = { personId: own.actor.id, reason: "for a test" };
    const tries = [
      action(peopleAdministration.giveRole, { ...over, role: "researcher" }, own.cookie),
      action(peopleAdministration.takeRole, { ...over, role: "administrator" }, own.cookie),
      action(peopleAdministration.closeAccount, over, own.cookie),
      action(peopleAdministration.startReset, over, own.cookie),
    ];
    for (const tried of tries) expect(await tried).toBe("person.self");
  });

  it("takes no action from another site's page (ADM-07)", async () => {
    scope.headers = new Headers({ cookie: visitor("administrator").cookie, origin: "https://evil.example" });
    const answered = await peopleAdministration.closeAccount({
      personId: visitor("author").actor.id,
      reason: "for a test",
    });
    expect(answered).toMatchObject({ ok: false, problem: { code: "request.cross-site", status: 403 } });
  });

  it("has no route that changes something by GET (ADM-07)", () => {
    for (const path of filesNamed("route.ts")) {
      const [, get = ""] = /export const GET = ([\s\S]*?)\n(?:export|$)/.exec(readFileSync(path, "utf8")) ?? [];
      expect(get, path).not.toMatch(/\b(append|store|strike|sign|begin|grant|revoke|close|end|mark|tell)[A-Z]\w*\(/);
    }
  });
});

type Handler = Parameters<typeof ask>[0];

async function outcome(who: Who, handler: Handler, path: string, question: Question = {}): Promise<string> {
  const cookie = who === "nobody" ? undefined : visitor(who).cookie;
  const answer = await ask(handler, path, { ...question, ...(cookie === undefined ? {} : { cookie }) });
  if (answer.ok) {
    await answer.body?.cancel();
    return "ok";
  }
  const text = await answer.text();
  const code = /"code":"([^"]+)"/.exec(text)?.[1];
  return code ?? String(answer.status);
}

type Action = (raw: unknown) => Promise<Answer<unknown>>;

function act(run: Action, input: () => unknown): Try {
  return async (who) => action(run, await input(), who === "nobody" ? "" : visitor(who).cookie);
}

async function action(run: Action, input: unknown, cookie: string): Promise<string> {
  scope.headers = new Headers({ cookie, origin: ORIGIN });
  const answered = await run(input);
  return answered.ok ? "ok" : answered.problem.code;
}

async function tryUpdate(who: Who): Promise<string> {
  const { state } = await pageState(house.store.db, visitor("author").actor, draft.revisionId);
  return outcome(who, updates.POST, page("updates"), {
    params: { id: draft.revisionId },
    body: new Uint8Array(openPage(state).change((doc) => addParagraph(doc, who))),
    headers: { "content-type": "application/octet-stream", "x-update-id": newId() },
  });
}

function page(what: string): string {
  return `/api/revisions/${draft.revisionId}/${what}`;
}

function announcement() {
  return {
    input: { revisionId: draft.revisionId },
    files: [{ name: "a.txt", type: "text/plain", size: 1, lastModified: 1 }],
  };
}

/** The signed address of an upload that the author was given. */
async function ticket(): Promise<string> {
  const answer = await ask(uploads.POST, "/api/uploadthing?actionType=upload&slug=attachment", {
    cookie: visitor("author").cookie,
    json: announcement(),
  });
  const [{ url }] = await answer.json();
  return url.slice(ORIGIN.length);
}

async function file(): Promise<string> {
  async function* stream() {
    yield new TextEncoder().encode("words");
  }
  const input = {
    revisionId: draft.revisionId,
    name: "a.txt",
    announcedType: "text/plain",
    announcedSize: 5,
    stream: stream(),
  };
  return (await storeAttachment(house.store.db, visitor("author").actor, input)).id;
}

const counted = { number: 0 };

function number(): number {
  counted.number += 1;
  return counted.number;
}

function stranger() {
  return { email: `stranger${number()}@tests.invalid`, password: "not a password of anybody" };
}

/** Somebody new, who is a researcher and a member of nothing. */
async function somebody(): Promise<string> {
  const { email } = stranger();
  const person = { email, printedName: "Somebody", roles: ["researcher" as const], passwordHash: null };
  return (await enrolPerson(house.store.db, null, person)).personId;
}

function filesNamed(name: string): string[] {
  const found = readdirSync("app", { recursive: true, encoding: "utf8" });
  return found.filter((path) => path === name || path.endsWith(`/${name}`)).map((path) => join("app", path));
}

function routesOnDisk(): string[] {
  return filesNamed("route.ts").flatMap((path) => {
    const methods = [
      ...readFileSync(path, "utf8").matchAll(
        /^export (?:const|async function|function) (GET|HEAD|POST|PUT|PATCH|DELETE|OPTIONS)\b/gm,
      ),
    ];
    return methods.map(([, method]) => `${method} /${path.slice("app/".length, -"/route.ts".length)}`);
  });
}

/** A file of actions is one that says so, whatever its name. */
function actionsOnDisk(): string[] {
  const files = readdirSync("app", { recursive: true, encoding: "utf8" }).filter((path) => /[.]tsx?$/.test(path));
  return files.flatMap((path) => {
    const text = readFileSync(join("app", path), "utf8");
    if (!/^\s*["']use server["']/m.test(text)) return [];
    const names = [...text.matchAll(/^export (?:async function|const) (\w+)/gm)];
    return names.map(([, name]) => `${path.replace(/[/-]actions[.]ts$/, "")} ${name}`);
  });
}
