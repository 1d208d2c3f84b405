import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { desk } from "../../db/desk.ts";
import { assignWitness, beginEntry, readEntry } from "../../db/entries.ts";
import { newId } from "../../db/ids.ts";
import { readNotebook } from "../../db/notebooks.ts";
import { whenRecorded } from "../../db/recorded.ts";
import { openRevision, returnToAuthor } from "../../db/witnessing.ts";
import { type TestDatabase, testDatabase } from "../support/database.ts";
import {
  countRows,
  eventsOf,
  type Lab,
  makeDraft,
  makeLab,
  openWriter,
  prepareToWitness,
  sign,
  witnessIt,
} from "../support/laboratory.ts";

let store: TestDatabase;
let lab: Lab;
beforeAll(async () => {
  store = await testDatabase();
  lab = await makeLab(store.db);
});
afterAll(() => store.close());

describe("beginning an entry", () => {
  it("gives the next number, a first draft seeded by the server, and an event (REC-06)", async () => {
    const own = await makeLab(store.db);
    const first = await beginEntry(store.db, own.author, { notebookId: own.notebookId });
    const second = await beginEntry(store.db, own.colleague, { notebookId: own.notebookId });
    expect([first.label, second.label]).toEqual([`${own.code}-0001`, `${own.code}-0002`]);
    const read = await readEntry(store.db, own.witness, first.label);
    expect(read).toMatchObject({
      author: { printedName: "A. Author" },
      contributors: [],
      revision: { number: 1, state: "draft", lastSeq: 1, isNewest: true },
      may: { write: false, sign: false, countersign: false },
      because: { write: "revision.forbidden", countersign: "revision.not-signed" },
    });
    const [event] = await eventsOf(store.db, first.id);
    expect(event).toMatchObject({ action: "entry.begun", personId: own.author.id, detail: { label: first.label } });
  });

  it("leaves no gap when twenty begin at once and some beginnings fail (REC-06)", async () => {
    const own = await makeLab(store.db);
    const begin = (fails: boolean) =>
      store.db.transaction(async (tx) => {
        await beginEntry(tx, own.author, { notebookId: own.notebookId });
        if (fails) throw new Error("a failed beginning");
      });
    const answers = await Promise.allSettled(Array.from({ length: 20 }, (_, index) => begin(index % 3 === 0)));
    expect(answers.filter((answer) => answer.status === "rejected")).toHaveLength(7);
    const { entries } = await readNotebook(store.db, own.author, { code: own.code });
    expect(entries.map((entry) => entry.number).sort((a, b) => a - b)).toEqual(
      Array.from({ length: 13 }, (_, index) => index + 1),
    );
  });

  it.each([
    ["witness", "notebook.forbidden"],
    ["supervisor", "notebook.forbidden"],
    ["outsider", "notebook.not-found"],
  ] as const)("is not for the %s", async (who, code) => {
    const before = await countRows(store.db, "entries");
    await expect(beginEntry(store.db, lab[who], { notebookId: lab.notebookId })).rejects.toMatchObject({ code });
    await expect(beginEntry(store.db, lab[who], { notebookId: newId() })).rejects.toMatchObject({
      code: "notebook.not-found",
    });
    expect(await countRows(store.db, "entries")).toBe(before);
  });
});

describe("reading an entry", () => {
  it("answers hidden and missing alike (ADM-04)", async () => {
    const { label } = await makeDraft(store.db, lab);
    const missing = `${lab.code}-9999`;
    for (const asked of [label, missing, "no label", `${lab.code}-1`]) {
      await expect(readEntry(store.db, lab.outsider, asked)).rejects.toMatchObject({
        code: "entry.not-found",
        detail: {},
      });
    }
    await expect(readEntry(store.db, lab.author, label, 7)).rejects.toMatchObject({ code: "entry.not-found" });
    expect((await readEntry(store.db, lab.author, label, 1)).label).toBe(label);
  });

  it("shows what was signed, by whom, in which meaning, and what the reader may do", async () => {
    const { label, revisionId } = await makeDraft(store.db, lab);
    const sha256 = await sign(store.db, lab.author, revisionId);
    const read = await readEntry(store.db, lab.witness, label);
    expect(read.signed?.sha256).toBe(sha256);
    expect(read.signed?.content.head.title).toBe("Descaling bath");
    expect(read.signatures).toMatchObject([
      {
        kind: "author",
        printedName: "A. Author",
        role: "researcher",
        meaning: "I did this work and wrote this page.",
        contentSha256: sha256,
      },
    ]);
    expect(read.waiting).toMatchObject({ days: 0 });
    expect(read.may).toMatchObject({ countersign: true, return: true, write: false });
    expect((await readEntry(store.db, lab.author, label)).because).toMatchObject({
      countersign: "revision.forbidden",
      write: "revision.not-draft",
    });
  });
});

describe("recorded late (REC-08)", () => {
  const day = 86_400_000;
  it("is told by the day of the work and the server's time of the first writing on or after it", async () => {
    const { id } = await makeDraft(store.db, lab);
    const now = new Date();
    const ask = (doneOn: string) => whenRecorded(store.db, { entryId: id, doneOn, timeZone: "UTC", now });
    const dayAgo = (days: number) => new Date(now.getTime() - days * day).toISOString().slice(0, 10);
    expect(await ask(dayAgo(0))).toMatchObject({ daysAfter: 0, isLate: false, isAhead: false });
    expect(await ask(dayAgo(1))).toMatchObject({ daysAfter: 1, isLate: false });
    expect(await ask(dayAgo(3))).toMatchObject({ daysAfter: 3, isLate: true });
    expect(await ask(dayAgo(-2))).toMatchObject({ daysAfter: null, isLate: false, isAhead: true });
    expect(await ask("")).toMatchObject({ daysAfter: null, isLate: false, isAhead: false });
  });
});

describe("the desk", () => {
  it("shows drafts, what came back, what waits for me, and what of mine waits", async () => {
    const own = await makeLab(store.db);
    const draft = await makeDraft(store.db, own);
    const signed = await makeDraft(store.db, own);
    await sign(store.db, own.author, signed.revisionId);
    const returned = await makeDraft(store.db, own);
    await sign(store.db, own.author, returned.revisionId);
    await openRevision(store.db, own.witness, { revisionId: returned.revisionId });
    await returnToAuthor(store.db, own.witness, { revisionId: returned.revisionId, reason: "Which lot?" });
    const done = await makeDraft(store.db, own);
    await sign(store.db, own.author, done.revisionId);
    await witnessIt(store.db, own.witness, done.revisionId);

    const labels = (lines: { label: string }[]) => lines.map((line) => line.label);
    const author = await desk(store.db, own.author);
    expect(labels(author.drafts)).toEqual([draft.label]);
    expect(author.returned).toMatchObject([{ label: returned.label, revision: 2, reason: "Which lot?", days: 0 }]);
    expect(labels(author.signed)).toEqual([signed.label]);
    expect(author.toCountersign).toEqual([]);
    expect(labels((await desk(store.db, own.witness)).toCountersign)).toEqual([signed.label]);
    expect(await desk(store.db, own.outsider)).toEqual({ drafts: [], returned: [], toCountersign: [], signed: [] });
  });

  it("does not offer a witness what they wrote in (SGN-10)", async () => {
    const own = await makeLab(store.db);
    const { revisionId } = await makeDraft(store.db, own);
    const second = await openWriter(store.db, own.colleague, revisionId);
    await second.type(",");
    await sign(store.db, own.author, revisionId);
    expect((await desk(store.db, own.colleague)).toCountersign).toEqual([]);
    expect((await desk(store.db, own.witness)).toCountersign).toHaveLength(1);
  });
});

describe("assigning a witness", () => {
  it("is for a supervisor, of an eligible witness, and narrows who may countersign (SGN-09)", async () => {
    const own = await makeLab(store.db);
    const { id, revisionId } = await makeDraft(store.db, own);
    await assignWitness(store.db, own.supervisor, { entryId: id, witnessId: own.secondWitness.id });
    await sign(store.db, own.author, revisionId);
    await expect(prepareToWitness(store.db, own.witness, revisionId)).rejects.toMatchObject({
      code: "revision.assigned-to-another",
    });
    expect((await desk(store.db, own.witness)).toCountersign).toEqual([]);
    await witnessIt(store.db, own.secondWitness, revisionId);
    expect((await eventsOf(store.db, id)).find((event) => event.action === "witness.assigned")).toMatchObject({
      personId: own.supervisor.id,
      detail: { person: "S. Second", before: null },
    });
  });

  it("refuses the author, a contributor, a person without the role, and whoever is no supervisor", async () => {
    const own = await makeLab(store.db);
    const { id, revisionId } = await makeDraft(store.db, own);
    await (await openWriter(store.db, own.colleague, revisionId)).type(".");
    const assign = (who: typeof own.author, witnessId: string) =>
      assignWitness(store.db, who, { entryId: id, witnessId });
    await expect(assign(own.supervisor, own.colleague.id)).rejects.toMatchObject({ code: "witness.contributor" });
    await expect(assign(own.supervisor, own.author.id)).rejects.toMatchObject({ code: "witness.not-eligible" });
    await expect(assign(own.supervisor, own.outsider.id)).rejects.toMatchObject({ code: "witness.not-eligible" });
    await expect(assign(own.witness, own.witness.id)).rejects.toMatchObject({ code: "entry.forbidden" });
    await expect(assign(own.outsider, own.witness.id)).rejects.toMatchObject({ code: "entry.not-found" });
    expect((await eventsOf(store.db, id)).some((event) => event.action === "witness.assigned")).toBe(false);
  });
});
