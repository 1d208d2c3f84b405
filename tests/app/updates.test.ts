import { afterAll, beforeAll, describe, expect, it } from "vitest";
import * as Y from "yjs";
import { POST as tell } from "../../app/api/revisions/[id]/presence/route.ts";
import { GET as stray } from "../../app/api/revisions/[id]/stray/route.ts";
import { POST as post } from "../../app/api/revisions/[id]/updates/route.ts";
import { newId } from "../../db/ids.ts";
import { pageState } from "../../db/updates.ts";
import { ask, type House, openHouse, type Question, type Visitor } from "./house.ts";
import { addParagraph, openPage, wordsOf } from "./page.ts";

let house: House;
let author: Visitor;
let witness: Visitor;
let outsider: Visitor;
let revisionId: string;

beforeAll(async () => {
  house = await openHouse();
  author = await house.visitor("R. Okafor", ["researcher"], true);
  witness = await house.visitor("M. Ferrante", ["witness"], true);
  outsider = await house.visitor("K. Amsel", ["researcher"], false);
  revisionId = (await house.draft(author)).revisionId;
});
afterAll(() => house.close());

async function change(words: string): Promise<Uint8Array<ArrayBuffer>> {
  const { state } = await pageState(house.store.db, author.actor, revisionId);
  return new Uint8Array(openPage(state).change((doc) => addParagraph(doc, words)));
}

function send(bytes: Uint8Array<ArrayBuffer>, question: Question = {}, id = revisionId): Promise<Response> {
  const headers = { "content-type": "application/octet-stream", "x-update-id": newId(), ...question.headers };
  return ask(post, `/api/revisions/${id}/updates`, {
    cookie: author.cookie,
    body: bytes,
    params: { id },
    ...question,
    headers,
  });
}

async function pageNow(): Promise<string> {
  const doc = new Y.Doc();
  Y.applyUpdate(doc, (await pageState(house.store.db, author.actor, revisionId)).state);
  return wordsOf(doc);
}

describe("posting an update", () => {
  it("answers the number under which it was committed, and a repeat with the same one (COL-01)", async () => {
    const bytes = await change("weighed twice");
    const headers = { "x-update-id": "the-same-id" };
    const first = await send(bytes, { headers });
    expect(first.status).toBe(200);
    const { seq } = await first.json();
    expect(await (await send(bytes, { headers })).json()).toEqual({ seq });
    expect((await pageNow()).match(/weighed twice/g)).toHaveLength(1);
  });

  it("carries headers under which a browser runs, frames and keeps nothing of it (ADM-06)", async () => {
    const answer = await send(await change("headers"));
    expect(answer.headers.get("content-security-policy")).toContain("default-src 'none'");
    expect(answer.headers.get("x-content-type-options")).toBe("nosniff");
    expect(answer.headers.get("cache-control")).toBe("no-store");
    expect(answer.headers.get("strict-transport-security")).toMatch(/max-age=\d{8}/);
    expect(answer.headers.get("x-request-id")).toMatch(/^[0-9a-f-]{36}$/);
  });

  it("is refused without a session, from another site, and to whoever may not write (ADM-01, ADM-07)", async () => {
    const bytes = await change("not to be taken");
    const before = await pageNow();
    const answers = [
      [await send(bytes, { cookie: "" }), 401, "session.ended"],
      [await send(bytes, { origin: "https://evil.example" }), 403, "request.cross-site"],
      [await send(bytes, { origin: null }), 403, "request.cross-site"],
      [await send(bytes, { headers: { "sec-fetch-site": "cross-site" } }), 403, "request.cross-site"],
      [await send(bytes, { cookie: witness.cookie }), 403, "revision.forbidden"],
      [await send(bytes, { cookie: outsider.cookie }), 404, "entry.not-found"],
    ] as const;
    for (const [answer, status, code] of answers) {
      expect(answer.status, code).toBe(status);
      expect(answer.headers.get("content-type")).toBe("application/problem+json");
      expect(await answer.json()).toMatchObject({
        status,
        code,
        type: `/problems/${code}`,
        requestId: expect.any(String),
      });
    }
    expect(await pageNow()).toBe(before);
  });

  it("of a page that another person had open is not taken in this one's name (COL-07)", async () => {
    const bytes = await change("by the one before");
    const before = await pageNow();
    const answers = [
      await send(bytes, { headers: { "x-person": witness.actor.id } }),
      await ask(stray, `/api/revisions/${revisionId}/stray`, {
        cookie: author.cookie,
        headers: { "x-person": witness.actor.id },
        params: { id: revisionId },
      }),
      await ask(tell, `/api/revisions/${revisionId}/presence`, {
        cookie: author.cookie,
        headers: { "x-person": witness.actor.id },
        json: { bytes: "AQEBBG51bGw=" },
        params: { id: revisionId },
      }),
    ];
    for (const answer of answers) {
      expect(answer.status).toBe(401);
      expect(await answer.json()).toMatchObject({ code: "session.ended" });
    }
    expect(await pageNow()).toBe(before);
    expect((await send(bytes, { headers: { "x-person": author.actor.id } })).status).toBe(200);
    expect(await pageNow()).toContain("by the one before");
  });

  it("tells no difference between a hidden page, a missing one and an address that is none (ADM-04)", async () => {
    const bytes = await change("hidden");
    const seen: object[] = [];
    for (const [id, cookie] of [
      [revisionId, outsider.cookie],
      [newId(), author.cookie],
      ["../../secret", author.cookie],
    ] as const) {
      const answer = await send(bytes, { cookie }, id);
      const { requestId: _, ...body } = await answer.json();
      seen.push({ status: answer.status, ...body });
    }
    expect(seen[1]).toEqual(seen[0]);
    expect(seen[2]).toEqual(seen[0]);
  });

  it("refuses what is forged, oversized, unreadable or not an update, and the page stays as it is (COL-08)", async () => {
    const before = await pageNow();
    const { state } = await pageState(house.store.db, author.actor, revisionId);
    const wild = openPage(state).change((doc) => {
      const script = new Y.XmlElement("script");
      script.insert(0, [new Y.XmlText("alert(1)")]);
      doc.getXmlFragment("page").insert(0, [script]);
    });
    const tries: [Promise<Response>, number, string][] = [
      [send(new Uint8Array(wild)), 422, "page.invalid"],
      [send(new Uint8Array([1, 2, 3, 4, 250, 251])), 422, "update.invalid"],
      [send(new Uint8Array(1024 * 1024 + 1)), 413, "request.too-large"],
      [send(await change("x"), { headers: { "x-update-id": "no id at all!" } }), 400, "request.invalid"],
      [send(await change("x"), { headers: { "content-type": "text/plain" } }), 415, "request.unsupported"],
    ];
    for (const [asked, status, code] of tries) {
      const answer = await asked;
      expect([answer.status, (await answer.json()).code]).toEqual([status, code]);
    }
    expect(await pageNow()).toBe(before);
  });

  it("lists what was kept apart for its writer only, and nothing for a draft", async () => {
    const answer = await ask(stray, `/api/revisions/${revisionId}/stray`, {
      cookie: author.cookie,
      params: { id: revisionId },
    });
    expect(await answer.json()).toEqual({ updates: [] });
    const hidden = await ask(stray, `/api/revisions/${revisionId}/stray`, {
      cookie: outsider.cookie,
      params: { id: revisionId },
    });
    expect(hidden.status).toBe(404);
  });
});
