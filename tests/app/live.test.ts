import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { Awareness, encodeAwarenessUpdate } from "y-protocols/awareness";
import * as Y from "yjs";
import { openStreams } from "../../app/_server/live.ts";
import { POST as authenticate } from "../../app/api/auth/[...all]/route.ts";
import { GET as events } from "../../app/api/revisions/[id]/events/route.ts";
import { POST as presence } from "../../app/api/revisions/[id]/presence/route.ts";
import { newId } from "../../db/ids.ts";
import { removeMember } from "../../db/notebooks.ts";
import { revokeRole } from "../../db/people.ts";
import { appendUpdate, pageState } from "../../db/updates.ts";
import { ask, type House, openHouse, PASSWORD, signInCookie, type Visitor } from "./house.ts";
import { addParagraph, openPage, wordsOf } from "./page.ts";

let house: House;
let author: Visitor;
let second: Visitor;
let revisionId: string;
const open: AbortController[] = [];

beforeAll(async () => {
  house = await openHouse();
  author = await house.visitor("R. Okafor", ["researcher"], true);
  second = await house.visitor("L. Brandt", ["researcher"], true);
  revisionId = (await house.draft(author)).revisionId;
});
afterAll(async () => {
  for (const each of open) each.abort();
  await house.close();
});

type Told = { event: string; data: Record<string, unknown> };
type Listener = {
  status: number;
  next(event: string): Promise<Told>;
  told: Told[];
  ended: Promise<void>;
  leave(): void;
};

async function listen(visitor: Pick<Visitor, "cookie">, id = revisionId): Promise<Listener> {
  const controller = new AbortController();
  open.push(controller);
  const answer = await ask(events, `/api/revisions/${id}/events`, {
    cookie: visitor.cookie,
    params: { id },
    signal: controller.signal,
  });
  const told: Told[] = [];
  const waiting = new Set<() => void>();
  const ended = read(answer, (each) => {
    told.push(each);
    for (const wake of waiting) wake();
  });
  let at = 0;
  return {
    status: answer.status,
    told,
    ended,
    leave: () => controller.abort(),
    async next(event) {
      const until = Date.now() + 10_000;
      for (;;) {
        for (; at < told.length; at += 1) {
          const each = told[at];
          if (each?.event === event) {
            at += 1;
            return each;
          }
        }
        if (Date.now() > until) throw new Error(`no ${event} came; ${told.map((each) => each.event).join(", ")}`);
        await new Promise<void>((done) => {
          const timer = setTimeout(done, 500);
          waiting.add(() => {
            clearTimeout(timer);
            done();
          });
        });
      }
    },
  };
}

async function read(answer: Response, tell: (told: Told) => void): Promise<void> {
  if (answer.status !== 200 || answer.body === null) return;
  let text = "";
  const reader = answer.body.pipeThrough(new TextDecoderStream()).getReader();
  for (;;) {
    const { done, value } = await reader.read();
    if (done) return;
    text += value;
    const blocks = text.split("\n\n");
    text = blocks.pop() ?? "";
    for (const block of blocks) {
      const event = /^event: (.*)$/m.exec(block)?.[1];
      const data = /^data: (.*)$/m.exec(block)?.[1];
      if (event !== undefined && data !== undefined) tell({ event, data: JSON.parse(data) });
    }
  }
}

async function type(visitor: Visitor, words: string): Promise<number> {
  const { state } = await pageState(house.store.db, visitor.actor, revisionId);
  const bytes = openPage(state).change((doc) => addParagraph(doc, words));
  return (await appendUpdate(house.store.db, visitor.actor, { revisionId, updateId: newId(), bytes })).seq;
}

const bytesOf = (told: Told, name: string) => Buffer.from(String(told.data[name]), "base64");

describe("the event stream", () => {
  it("begins with the page as it is and goes on with every update in order (COL-01)", async () => {
    await type(author, "before anybody listens");
    const listener = await listen(second);
    const snapshot = await listener.next("snapshot");
    const doc = new Y.Doc();
    Y.applyUpdate(doc, bytesOf(snapshot, "state"));
    expect(wordsOf(doc)).toContain("before anybody listens");
    expect(Y.encodeStateVector(doc)).toEqual(new Uint8Array(bytesOf(snapshot, "vector")));
    const first = await type(author, "one");
    await type(second, "two");
    await type(author, "three");
    const seqs: unknown[] = [];
    for (let count = 0; count < 3; count += 1) {
      const update = await listener.next("update");
      Y.applyUpdate(doc, bytesOf(update, "bytes"));
      seqs.push(update.data.seq);
    }
    expect(seqs).toEqual([first, first + 1, first + 2]);
    expect(wordsOf(doc)).toMatch(/one.*two.*three/s);
    listener.leave();
  });

  it("loses nothing that is typed while it opens", async () => {
    const typing = Promise.all(Array.from({ length: 10 }, (_, index) => type(author, `in between ${index}`)));
    const listener = await listen(second);
    await typing;
    const last = await type(author, "the last word");
    const doc = new Y.Doc();
    Y.applyUpdate(doc, bytesOf(await listener.next("snapshot"), "state"));
    for (;;) {
      const update = await listener.next("update");
      Y.applyUpdate(doc, bytesOf(update, "bytes"));
      if (update.data.seq === last) break;
    }
    for (let index = 0; index < 10; index += 1) expect(wordsOf(doc)).toContain(`in between ${index}`);
    listener.leave();
  });

  it("is refused like a read to whoever may not read, and to strangers", async () => {
    const outsider = await house.visitor("K. Amsel", ["researcher"], false);
    const administrator = await house.visitor("T. Lindqvist", ["administrator"], true);
    expect((await listen(outsider)).status).toBe(404);
    expect((await listen(administrator)).status).toBe(404);
    expect((await listen({ cookie: "" })).status).toBe(401);
  });

  it("ends within seconds when membership, role or session end (ADM-02)", async () => {
    const root = await house.visitor("T. Lindqvist", ["administrator"], false);
    const witness = await house.visitor("M. Ferrante", ["witness"], true);
    const supervisor = await house.visitor("P. Novak", ["supervisor"], true);
    const third = await house.visitor("H. Sato", ["witness"], true);
    const [one, two, three] = await Promise.all([listen(witness), listen(supervisor), listen(third)]);
    for (const each of [one, two, three]) await each.next("snapshot");
    const { db } = house.store;
    await removeMember(db, root.actor, { notebookId: house.notebookId, personId: witness.actor.id, reason: "moved" });
    expect((await one.next("end")).data).toEqual({ reason: "rights" });
    await revokeRole(db, root.actor, { personId: supervisor.actor.id, role: "supervisor", reason: "moved" });
    expect((await two.next("end")).data).toEqual({ reason: "rights" });
    await ask(authenticate, "/api/auth/sign-out", { cookie: third.cookie, json: {}, params: { all: ["sign-out"] } });
    expect((await three.next("end")).data).toEqual({ reason: "session" });
    await Promise.all([one.ended, two.ended, three.ended]);
  });

  it("is tidied up when its reader goes, and a person opens only so many", async () => {
    const cookie = await signInCookie(author.email, PASSWORD);
    const before = await openStreams();
    const many: Listener[] = [];
    for (let count = 0; count < 13; count += 1) many.push(await listen({ cookie }));
    expect(many.map((each) => each.status).filter((status) => status === 200).length).toBeLessThanOrEqual(12);
    expect(many.at(-1)?.status).toBe(429);
    for (const each of many) each.leave();
    await Promise.all(many.map((each) => each.ended));
    expect(await openStreams()).toBeLessThanOrEqual(before);
  });
});

describe("presence", () => {
  function word(state: Record<string, unknown>): string {
    const awareness = new Awareness(new Y.Doc());
    awareness.setLocalState(state);
    const bytes = encodeAwarenessUpdate(awareness, [awareness.clientID]);
    awareness.destroy();
    return Buffer.from(bytes).toString("base64");
  }
  const tell = (visitor: Visitor, bytes: string) =>
    ask(presence, `/api/revisions/${revisionId}/presence`, {
      cookie: visitor.cookie,
      json: { bytes },
      params: { id: revisionId },
    });

  it("is told to the page's readers, in the name that the server knows (COL-11)", async () => {
    const listener = await listen(second);
    await listener.next("snapshot");
    expect((await tell(author, word({ user: { name: "P. Novak", colour: "blue" }, cursor: 7 }))).status).toBe(200);
    const text = bytesOf(await listener.next("presence"), "bytes").toString("utf8");
    expect(text).toContain('"name":"R. Okafor"');
    expect(text).toContain('"colour":"blue"');
    expect(text).not.toContain("Novak");
    const later = await listen(second);
    expect(bytesOf(await later.next("presence"), "bytes").toString("utf8")).toContain("R. Okafor");
    listener.leave();
    later.leave();
  });

  it("refuses what speaks for others, is too long, or is nothing", async () => {
    for (const bytes of [
      Buffer.from([2, 1, 1, 1]).toString("base64"),
      Buffer.alloc(5000).toString("base64"),
      "AAAA",
      "not base64!",
    ]) {
      expect((await tell(author, bytes)).status).toBeGreaterThanOrEqual(400);
    }
  });
});
