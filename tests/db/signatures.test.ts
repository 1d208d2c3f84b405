import { createHash } from "node:crypto";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { beginEntry, readEntry } from "../../db/entries.ts";
import { MEANINGS } from "../../db/manifest.ts";
import { contentToSign, signAsAuthor } from "../../db/signatures.ts";
import { markWhole, openRevision } from "../../db/witnessing.ts";
import { libraryDatabase, signIn, type TestDatabase } from "../support/database.ts";
import {
  addBlock,
  countRows,
  eventsOf,
  firstLine,
  type Lab,
  makeDraft,
  makeLab,
  openJws,
  openWriter,
  rowOf,
  seal,
  sign,
  sql,
} from "../support/laboratory.ts";

let store: TestDatabase;
let lab: Lab;
beforeAll(async () => {
  store = await libraryDatabase();
  lab = await makeLab(store.db);
});
afterAll(() => store.close());

const ready = async (revisionId: string, author = lab.author) => {
  const { sha256 } = await contentToSign(store.db, author, revisionId);
  await openRevision(store.db, author, { revisionId });
  await markWhole(store.db, author, { revisionId, contentSha256: sha256 });
  return { revisionId, shownHash: sha256, meaning: MEANINGS.author, seal };
};

describe("signing as the author", () => {
  it("seals the shown content with name, meaning, time, previous revision and audit heads (SGN-01, SGN-18)", async () => {
    const { id, label, revisionId, writer } = await makeDraft(store.db, lab);
    const row = await rowOf(store.db, "r1", "reagent:sodium-chloride", "0.100");
    await writer.write((page) => addBlock(page, "blk", [{ ...row, unit: "mol/L" }], { title: "Bath" }));
    const shown = await contentToSign(store.db, lab.author, revisionId);
    expect(createHash("sha256").update(shown.content).digest("hex")).toBe(shown.sha256);
    expect(shown.view.hindrances).toEqual([]);
    const [block] = shown.view.content.blocks;
    expect(block?.inputs.rows[0]?.amount).toBe("0.100");
    expect(block?.key).toMatch(/^[0-9a-f]{64}$/);
    expect(block?.outcome.ok && block.outcome.value.pH).toBeCloseTo(7, 0);

    const signature = await signAsAuthor(store.db, lab.author, await ready(revisionId));
    const read = await readEntry(store.db, lab.author, label);
    const stored = read.signatures[0];
    expect(read.revision.state).toBe("signed");
    expect(read.signed?.sha256).toBe(shown.sha256);
    const manifest = openJws(stored?.jws ?? "");
    expect(JSON.parse(stored?.manifest ?? "")).toEqual(manifest);
    expect(manifest).toMatchObject({
      kind: "author",
      entry: { id, label },
      revision: { id: revisionId, number: 1 },
      content: { sha256: shown.sha256, version: 1 },
      previousContentSha256: null,
      signer: { id: lab.author.id, printedName: "A. Author", role: "researcher" },
      meaning: MEANINGS.author,
      at: signature.at.toISOString(),
      audit: {
        store: { hash: expect.stringMatching(/^[0-9a-f]{64}$/) },
        entry: { hash: expect.stringMatching(/^[0-9a-f]{64}$/) },
      },
    });
    const event = (await eventsOf(store.db, id)).at(-1);
    expect(event).toMatchObject({
      action: "revision.signed",
      personId: lab.author.id,
      detail: { signature: signature.id, contentSha256: shown.sha256 },
    });
  });

  it("is refused with what changed when somebody typed meanwhile, and nothing is half signed (SGN-01)", async () => {
    const { id, label, revisionId } = await makeDraft(store.db, lab);
    const input = await ready(revisionId);
    const other = await openWriter(store.db, lab.colleague, revisionId);
    await other.write((page, head) => {
      firstLine(page).insert(0, "Not quite: ");
      head.set("title", "Another bath");
    });
    await expect(signAsAuthor(store.db, lab.author, input)).rejects.toMatchObject({
      code: "revision.changed",
      detail: {
        changes: {
          added: ["Another bath", "Not quite: Mixed the bath."],
          gone: ["Descaling bath", "Mixed the bath."],
          values: [{ label: "Title", was: "Descaling bath", now: "Another bath" }],
          by: ["C. Colleague"],
        },
      },
    });
    expect((await readEntry(store.db, lab.author, label)).revision.state).toBe("draft");
    expect(await countRows(store.db, "signatures", revisionId)).toBe(0);
    expect(await countRows(store.db, "signed_contents", revisionId)).toBe(0);
    expect((await eventsOf(store.db, id)).some((event) => event.action === "revision.signed")).toBe(false);
    await sign(store.db, lab.author, revisionId);
  });

  it("is refused until the whole of exactly this content was opened in this very session (SGN-12)", async () => {
    const { revisionId } = await makeDraft(store.db, lab);
    const { sha256 } = await contentToSign(store.db, lab.author, revisionId);
    const input = { revisionId, shownHash: sha256, meaning: MEANINGS.author, seal };
    await expect(signAsAuthor(store.db, lab.author, input)).rejects.toMatchObject({
      code: "revision.not-whole",
      detail: { opened: false },
    });
    await openRevision(store.db, lab.author, { revisionId });
    await expect(signAsAuthor(store.db, lab.author, input)).rejects.toMatchObject({
      code: "revision.not-whole",
      detail: { opened: true },
    });
    await markWhole(store.db, lab.author, { revisionId, contentSha256: sha256 });
    const elsewhere = await signIn(store.db, lab.author.id);
    await expect(signAsAuthor(store.db, elsewhere, input)).rejects.toMatchObject({ code: "revision.not-whole" });
    await signAsAuthor(store.db, lab.author, input);
  });

  it("names what is missing: title, day of the work, the reason of a late record (REC-08)", async () => {
    const { revisionId } = await beginEntry(store.db, lab.author, { notebookId: lab.notebookId });
    const writer = await openWriter(store.db, lab.author, revisionId);
    await writer.type("words");
    await expect(signAsAuthor(store.db, lab.author, await ready(revisionId))).rejects.toMatchObject({
      code: "revision.not-complete",
      detail: { missing: [{ path: "head.title" }, { path: "head.doneOn" }] },
    });
    await writer.write((_, head) => {
      head.set("title", "Late");
      head.set("doneOn", "2020-02-29");
    });
    await expect(signAsAuthor(store.db, lab.author, await ready(revisionId))).rejects.toMatchObject({
      code: "revision.not-complete",
      detail: { missing: [{ path: "head.lateReason" }] },
    });
    await writer.write((_, head) => head.set("lateReason", "Written up from the bench book."));
    await signAsAuthor(store.db, lab.author, await ready(revisionId));
  });

  it("has one meaning, and no other words are taken (SGN-13)", async () => {
    const { revisionId } = await makeDraft(store.db, lab);
    const input = await ready(revisionId);
    await expect(signAsAuthor(store.db, lab.author, { ...input, meaning: "Approved." })).rejects.toMatchObject({
      code: "request.invalid",
    });
  });

  it("leaves nothing behind when the seal fails", async () => {
    const { id, label, revisionId } = await makeDraft(store.db, lab);
    const input = await ready(revisionId);
    const broken = async () => {
      throw new Error("the key does not open");
    };
    await expect(signAsAuthor(store.db, lab.author, { ...input, seal: broken })).rejects.toThrow(
      "the key does not open",
    );
    expect((await readEntry(store.db, lab.author, label)).revision.state).toBe("draft");
    expect((await eventsOf(store.db, id)).some((event) => event.action === "revision.signed")).toBe(false);
    await signAsAuthor(store.db, lab.author, input);
  });
});

describe("who may sign", () => {
  it.each([
    ["colleague", "revision.not-author"],
    ["witness", "revision.forbidden"],
    ["supervisor", "revision.forbidden"],
    ["outsider", "entry.not-found"],
  ] as const)("not the %s: %s", async (who, code) => {
    const { revisionId } = await makeDraft(store.db, lab);
    const input = await ready(revisionId);
    await expect(contentToSign(store.db, lab[who], revisionId)).rejects.toMatchObject({ code });
    await expect(signAsAuthor(store.db, lab[who], input)).rejects.toMatchObject({ code });
    expect(await countRows(store.db, "signatures", revisionId)).toBe(0);
  });

  it("not an author whose password an administrator had reset, until somebody confirmed who it is (SGN-07)", async () => {
    const own = await makeLab(store.db);
    const { revisionId } = await makeDraft(store.db, own);
    const input = await ready(revisionId, own.author);
    await store.db.execute(sql`update "user" set signing_held_at = now() where id = ${own.author.id}`);
    await expect(signAsAuthor(store.db, own.author, input)).rejects.toMatchObject({ code: "signing.held" });
  });
});

describe("what was signed", () => {
  it.each([
    ["signed_contents", sql`update signed_contents set content = '{}'`],
    ["signed_contents", sql`delete from signed_contents`],
    ["signatures", sql`update signatures set meaning = 'Approved'`],
    ["signatures", sql`truncate signatures cascade`],
    ["revisions", sql`update revisions set title = 'Another' where state = 'signed'`],
    ["revisions", sql`update revisions set state = 'draft' where state = 'signed'`],
    ["updates", sql`delete from updates`],
  ])("is refused any change by the database itself: %s (REC-05)", async (_, statement) => {
    const { revisionId } = await makeDraft(store.db, lab);
    await sign(store.db, lab.author, revisionId);
    await expect(store.db.execute(statement)).rejects.toThrow();
    expect(await countRows(store.db, "signatures", revisionId)).toBe(1);
  });
});
