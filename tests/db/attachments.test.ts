import { createHash } from "node:crypto";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import {
  LARGEST_FILE_BYTES,
  listAttachments,
  readAttachment,
  storeAttachment,
  strikeAttachment,
  sweepUploads,
} from "../../db/attachments.ts";
import { readEntry } from "../../db/entries.ts";
import { newId } from "../../db/ids.ts";
import { countersign, openRevision, returnToAuthor } from "../../db/witnessing.ts";
import { type TestDatabase, testDatabase } from "../support/database.ts";
import {
  countRows,
  eventsOf,
  type Lab,
  makeDraft,
  makeLab,
  prepareToWitness,
  seal,
  sign,
  sql,
} from "../support/laboratory.ts";

let store: TestDatabase;
let lab: Lab;
beforeAll(async () => {
  store = await testDatabase();
  lab = await makeLab(store.db);
});
afterAll(() => store.close());

async function* pieces(bytes: Uint8Array, size = 65_536): AsyncGenerator<Uint8Array> {
  for (let from = 0; from < bytes.length; from += size) yield bytes.subarray(from, from + size);
}
const text = (words: string) => new TextEncoder().encode(words);
const upload = (
  revisionId: string,
  name: string,
  bytes: Uint8Array,
  more: { type?: string; size?: number; who?: Lab["author"] } = {},
) =>
  storeAttachment(store.db, more.who ?? lab.author, {
    revisionId,
    name,
    announcedType: more.type ?? "",
    announcedSize: more.size ?? bytes.length,
    stream: pieces(bytes),
  });
const sha256 = (bytes: Uint8Array) => createHash("sha256").update(bytes).digest("hex");
const nothingRemains = async () => {
  expect(await countRows(store.db, "uploads")).toBe(0);
  const orphans = sql`select 1 from attachment_chunks c where not exists (select 1 from attachments a where a.id = c.attachment_id)`;
  const chunks = await store.db.execute(sql`create temporary table if not exists orphans as ${orphans}`);
  expect(chunks).toBeDefined();
  expect(await countRows(store.db, "orphans")).toBe(0);
  await store.db.execute(sql`drop table orphans`);
};

const PNG = Uint8Array.from(
  Buffer.from(
    "iVBORw0KGgoAAAANSUhEUgAAAAEAAAABCAYAAAAfFcSJAAAADUlEQVR42mNk+M9QDwADhgGAWjR9awAAAABJRU5ErkJggg==",
    "base64",
  ),
);

describe("a file that arrives", () => {
  it("is kept byte for byte in rows of 1 MiB with its SHA-256, and makes its sender a contributor (FIL-01)", async () => {
    const { id, label, revisionId } = await makeDraft(store.db, lab);
    const bytes = Uint8Array.from({ length: 2_500_000 }, (_, index) => (index * 31) % 253);
    const file = await upload(revisionId, "run 1.dat", bytes, { who: lab.colleague });
    expect(file).toEqual({ id: file.id, name: "run 1.dat", size: 2_500_000, sha256: sha256(bytes), type: null });
    const read = await readAttachment(store.db, lab.witness, file.id);
    const chunks: Uint8Array[] = [];
    for await (const chunk of read.chunks) chunks.push(chunk);
    expect(chunks.map((chunk) => chunk.length)).toEqual([1_048_576, 1_048_576, 402_848]);
    expect(sha256(Buffer.concat(chunks))).toBe(file.sha256);
    const entry = await readEntry(store.db, lab.author, label);
    expect(entry.attachments).toMatchObject([
      { name: "run 1.dat", sha256: file.sha256, struck: null, by: { printedName: "C. Colleague" } },
    ]);
    expect(entry.contributors.map((person) => person.id)).toContain(lab.colleague.id);
    expect((await eventsOf(store.db, id)).at(-1)).toMatchObject({
      action: "attachment.stored",
      personId: lab.colleague.id,
      detail: { sha256: file.sha256, size: 2_500_000 },
    });
    await nothingRemains();
  });

  it("has a name that is data only", async () => {
    const { revisionId } = await makeDraft(store.db, lab);
    expect((await upload(revisionId, "../../etc/pass\u0000wd\u202E.txt", text("a"))).name).toBe("passwd.txt");
    await expect(upload(revisionId, "///", text("a"))).rejects.toMatchObject({ code: "attachment.invalid" });
  });

  const disguised: [string, string, Uint8Array, string][] = [
    [
      "a program under a picture's name",
      "photo.png",
      Uint8Array.from([0x4d, 0x5a, 0x90, 0, 3, 0, 0, 0, 4, 0, 0, 0, 0xff, 0xff]),
      "program",
    ],
    ["a program of another system", "reading", Uint8Array.from([0x7f, 0x45, 0x4c, 0x46, 2, 1, 1, 0]), "program"],
    ["a file with a program's ending", "setup.exe", text("hello"), "program"],
    ["a script", "data.csv", text("#!/bin/sh\nrm -rf /\n"), "script"],
    ["a web page under a picture's name", "photo.jpg", text("<!DOCTYPE html><script>alert(1)</script>"), "disguised"],
    ["a web page under a text's name", "notes.txt", text("\n <!-- hi --><html><body>"), "disguised"],
    [
      "a drawing with scripts under a text's name",
      "notes.txt",
      text('<?xml version="1.0"?><svg xmlns="http://www.w3.org/2000/svg">'),
      "disguised",
    ],
    ["a picture under another's name", "scan.pdf", PNG, "disguised"],
    ["a text under a picture's name", "photo.png", text("no picture at all"), "disguised"],
    ["a picture under a table's name", "data.csv", PNG, "disguised"],
  ];
  it.each(disguised)("is refused when it is %s (FIL-02)", async (_, name, bytes, why) => {
    const { id, revisionId } = await makeDraft(store.db, lab);
    const before = await eventsOf(store.db, id);
    await expect(upload(revisionId, name, bytes)).rejects.toMatchObject({
      code: "attachment.type-refused",
      detail: { why },
    });
    expect(await countRows(store.db, "revision_attachments", revisionId)).toBe(0);
    expect(await eventsOf(store.db, id)).toEqual(before);
    await nothingRemains();
  });

  it("is refused when its sender calls it another picture (FIL-02)", async () => {
    const { revisionId } = await makeDraft(store.db, lab);
    await expect(upload(revisionId, "photo", PNG, { type: "image/jpeg" })).rejects.toMatchObject({
      code: "attachment.type-refused",
    });
    expect(await upload(revisionId, "photo.png", PNG, { type: "image/png" })).toMatchObject({ type: "image/png" });
    expect(
      await upload(revisionId, "plot.svg", text("<svg xmlns='http://www.w3.org/2000/svg'/>"), {
        type: "image/svg+xml",
      }),
    ).toMatchObject({ type: "image/svg+xml" });
    expect(await upload(revisionId, "data.csv", text("pH,mV\n1.70,310\n"), { type: "text/csv" })).toMatchObject({
      type: null,
    });
  });

  it.each([
    ["shorter than announced", 10, 4, "attachment.length-differs"],
    ["longer than announced", 4, 10, "attachment.length-differs"],
    ["empty", 0, 0, "attachment.empty"],
  ])("is refused when it is %s, and no half of it remains (FIL-06)", async (_, announced, sent, code) => {
    const { revisionId } = await makeDraft(store.db, lab);
    await expect(upload(revisionId, "a.dat", new Uint8Array(sent).fill(7), { size: announced })).rejects.toMatchObject({
      code,
    });
    await nothingRemains();
  });

  it("is refused over 32 MiB before a byte is read, and when it lies about that", async () => {
    const { revisionId } = await makeDraft(store.db, lab);
    await expect(upload(revisionId, "a.dat", text("a"), { size: 40 * 1024 * 1024 })).rejects.toMatchObject({
      code: "attachment.too-large",
      detail: { limit: LARGEST_FILE_BYTES },
    });
    await nothingRemains();
  });

  it("leaves nothing when the sender breaks off in the middle (FIL-06)", async () => {
    const { revisionId } = await makeDraft(store.db, lab);
    async function* broken(): AsyncGenerator<Uint8Array> {
      yield new Uint8Array(1_500_000).fill(1);
      throw new Error("the line went dead");
    }
    const stored = storeAttachment(store.db, lab.author, {
      revisionId,
      name: "a.dat",
      announcedType: "",
      announcedSize: 3_000_000,
      stream: broken(),
    });
    await expect(stored).rejects.toThrow("the line went dead");
    await nothingRemains();
  });

  it("leaves to be swept what a killed process had begun", async () => {
    const { revisionId } = await makeDraft(store.db, lab);
    const id = newId();
    const old = new Date(Date.now() - 2 * 3_600_000).toISOString();
    await store.db.execute(
      sql`insert into uploads (id, revision_id, person_id, started_at, last_at) values (${id}, ${revisionId}, ${lab.author.id}, ${old}, ${old})`,
    );
    await store.db.execute(
      sql`insert into attachment_chunks (attachment_id, index, bytes) values (${id}, 0, '\\x00'::bytea)`,
    );
    expect(await sweepUploads(store.db, new Date())).toBe(1);
    await nothingRemains();
  });
});

describe("who may", () => {
  it.each([
    ["witness", "revision.forbidden"],
    ["supervisor", "revision.forbidden"],
    ["outsider", "entry.not-found"],
  ] as const)("not the %s: %s", async (who, code) => {
    const { revisionId } = await makeDraft(store.db, lab);
    await expect(upload(revisionId, "a.txt", text("a"), { who: lab[who] })).rejects.toMatchObject({ code });
    const file = await upload(revisionId, "b.txt", text("b"));
    const strike = strikeAttachment(store.db, lab[who], { revisionId, attachmentId: file.id, reason: "no" });
    await expect(strike).rejects.toMatchObject({ code });
    await nothingRemains();
  });

  it("read: members alone, and hidden is as missing (FND-03)", async () => {
    const { revisionId } = await makeDraft(store.db, lab);
    const file = await upload(revisionId, "a.txt", text("a"));
    for (const id of [file.id, newId()]) {
      await expect(readAttachment(store.db, lab.outsider, id)).rejects.toMatchObject({
        code: "attachment.not-found",
        detail: {},
      });
    }
    expect((await readAttachment(store.db, lab.supervisor, file.id)).name).toBe("a.txt");
  });
});

describe("striking a file", () => {
  it("wants a reason, happens once, and removes nothing (REC-07)", async () => {
    const { id, revisionId } = await makeDraft(store.db, lab);
    const file = await upload(revisionId, "wrong.txt", text("wrong file"));
    const strike = (reason: string) =>
      strikeAttachment(store.db, lab.author, { revisionId, attachmentId: file.id, reason });
    await expect(strike(" ")).rejects.toMatchObject({ code: "attachment.reason-missing" });
    await strike("another sample's");
    await expect(strike("again")).rejects.toMatchObject({ code: "attachment.struck" });
    expect(await listAttachments(store.db, lab.witness, revisionId)).toMatchObject([
      { name: "wrong.txt", struck: { reason: "another sample's", by: { printedName: "A. Author" } } },
    ]);
    expect((await readAttachment(store.db, lab.witness, file.id)).size).toBe(10);
    expect((await eventsOf(store.db, id)).at(-1)).toMatchObject({
      action: "attachment.struck",
      detail: { reason: "another sample's" },
    });
  });
});

describe("a signed file", () => {
  it("neither comes nor goes after the signature, travels on at a return, and is hashed again for the witness (FIL-01)", async () => {
    const { label, revisionId } = await makeDraft(store.db, lab);
    const file = await upload(revisionId, "meter.csv", text("pH\n1.70\n"));
    await sign(store.db, lab.author, revisionId);
    await expect(upload(revisionId, "late.txt", text("late"))).rejects.toMatchObject({ code: "revision.not-draft" });
    const strike = strikeAttachment(store.db, lab.author, { revisionId, attachmentId: file.id, reason: "no" });
    await expect(strike).rejects.toMatchObject({ code: "revision.not-draft" });
    for (const change of [
      sql`update attachment_chunks set bytes = '\\x00'::bytea where attachment_id = ${file.id}`,
      sql`delete from attachment_chunks where attachment_id = ${file.id}`,
      sql`insert into attachment_chunks (attachment_id, index, bytes) values (${file.id}, 1, '\\x00'::bytea)`,
      sql`update attachments set sha256 = '0' where id = ${file.id}`,
    ]) {
      await expect(store.db.execute(change)).rejects.toThrow();
    }
    await openRevision(store.db, lab.witness, { revisionId });
    await returnToAuthor(store.db, lab.witness, { revisionId, reason: "again" });
    expect((await readEntry(store.db, lab.author, label)).attachments).toMatchObject([
      { id: file.id, sha256: file.sha256 },
    ]);
  });

  it("whose bytes were changed behind the application's back bars the countersignature", async () => {
    const { revisionId } = await makeDraft(store.db, lab);
    const file = await upload(revisionId, "meter.csv", text("pH\n1.70\n"));
    await sign(store.db, lab.author, revisionId);
    await store.db.transaction(async (tx) => {
      await tx.execute(sql`alter table attachment_chunks disable trigger user`);
      await tx.execute(
        sql`update attachment_chunks set bytes = ${Buffer.from("pH\n1.60\n")} where attachment_id = ${file.id}`,
      );
      await tx.execute(sql`alter table attachment_chunks enable trigger user`);
    });
    const ready = await prepareToWitness(store.db, lab.witness, revisionId);
    const attempt = countersign(store.db, lab.witness, { revisionId, ...ready, acknowledgement: "seen", seal });
    await expect(attempt).rejects.toMatchObject({ code: "revision.files-differ", detail: { files: ["meter.csv"] } });
    expect(await countRows(store.db, "signatures", revisionId)).toBe(1);
  });
});
