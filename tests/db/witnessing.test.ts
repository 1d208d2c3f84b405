import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { z } from "zod";
import { writerOf, writersOfText } from "../../db/authorship.ts";
import { readRows } from "../../db/client.ts";
import { readEntry } from "../../db/entries.ts";
import { pageState } from "../../db/updates.ts";
import { checkRevision, countersign, markWhole, openRevision, returnToAuthor } from "../../db/witnessing.ts";
import { libraryDatabase, signIn, type TestDatabase } from "../support/database.ts";
import {
  addBlock,
  countRows,
  eventsOf,
  type Lab,
  makeDraft,
  makeLab,
  openJws,
  openWriter,
  prepareToWitness,
  rowOf,
  seal,
  sign,
  sql,
  textOf,
  witnessIt,
} from "../support/laboratory.ts";

let store: TestDatabase;
let lab: Lab;
beforeAll(async () => {
  store = await libraryDatabase();
  lab = await makeLab(store.db);
});
afterAll(() => store.close());

async function makeSigned(own = lab) {
  const draft = await makeDraft(store.db, own);
  const row = await rowOf(store.db, "r1", "reagent:citric-acid", "0.100");
  await draft.writer.write((page) => addBlock(page, "blk", [{ ...row, unit: "mol/L" }], { title: "Bath" }));
  const sha256 = await sign(store.db, own.author, draft.revisionId);
  return { ...draft, sha256 };
}

describe("countersigning", () => {
  it("follows opening, reading to the end and a check, and says read and understood, no more (SGN-11, SGN-12)", async () => {
    const { id, label, revisionId, sha256 } = await makeSigned();
    await openRevision(store.db, lab.witness, { revisionId });
    await openRevision(store.db, lab.witness, { revisionId });
    await markWhole(store.db, lab.witness, { revisionId, contentSha256: sha256 });
    const steps: string[] = [];
    const finding = await checkRevision(store.db, lab.witness, {
      revisionId,
      progress: ({ what }) => steps.push(what),
    });
    expect(steps).toEqual(["E1 Bath", ""]);
    expect(finding.blocks).toMatchObject([
      { name: "E1 Bath", verdict: "reproduces", keyFits: true, constants: { same: true, changed: [] } },
    ]);
    expect(finding.differing).toEqual({ blocks: [], files: [] });
    const input = { revisionId, shownHash: sha256, findingId: finding.id, acknowledgement: "", seal };
    const signature = await countersign(store.db, lab.witness, input);
    expect(signature).toMatchObject({
      kind: "witness",
      role: "witness",
      meaning: "Read and understood by me.",
      printedName: "W. Witness",
    });

    const read = await readEntry(store.db, lab.author, label);
    expect(read.revision.state).toBe("witnessed");
    expect(openJws(read.signatures[1]?.jws ?? "")).toMatchObject({
      kind: "witness",
      content: { sha256 },
      witnessed: { finding: { id: finding.id, blocks: 1, reproduced: 1 }, acknowledgement: null },
    });
    expect((await eventsOf(store.db, id)).slice(-4).map((event) => [event.action, event.personId])).toEqual([
      ["revision.opened", lab.witness.id],
      ["revision.read-whole", lab.witness.id],
      ["revision.checked", lab.witness.id],
      ["revision.countersigned", lab.witness.id],
    ]);
  });

  it("asks words for a constant that was approved anew since, and keeps them (CAL-13)", async () => {
    const { label, revisionId, sha256 } = await makeSigned();
    const { constants } = await rowOf(store.db, "r1", "reagent:citric-acid", "0.100");
    const pinned = constants?.split(" ")[0] ?? "";
    await store.db.transaction(async (tx) => {
      await tx.execute(sql`update constants set current = false where id = ${pinned}`);
      await tx.execute(sql`insert into constants select 'newer', family_id, step, 99, '3.20', basis, ionic_strength, temperature_c,
        uncertainty, dh_kj_mol, dcp_j_mol_k, source, from_memory, nominal, disputed, since, true from constants where id = ${pinned}`);
    });
    const found = await checkRevision(store.db, lab.witness, { revisionId });
    expect(found.blocks[0]).toMatchObject({
      verdict: "reproduces",
      constants: { same: false, changed: [{ pinned, now: "newer", nowPKa: "3.20" }] },
    });
    const { findingId } = await prepareToWitness(store.db, lab.witness, revisionId);
    const input = { revisionId, shownHash: sha256, findingId, seal };
    await expect(countersign(store.db, lab.witness, { ...input, acknowledgement: "  " })).rejects.toMatchObject({
      code: "revision.acknowledgement-missing",
      detail: { blocks: ["E1 Bath"] },
    });
    await countersign(store.db, lab.witness, { ...input, acknowledgement: "Seen; constant revised after signing." });
    expect((await readEntry(store.db, lab.author, label)).signatures[1]?.acknowledgement).toBe(
      "Seen; constant revised after signing.",
    );
    await store.db.execute(sql`update constants set current = (id = ${pinned}) where id in (${pinned}, 'newer')`);
  });

  it("is refused out of order: not opened, not whole, another session, no check, another's check, an old check (SGN-12)", async () => {
    const { revisionId, sha256 } = await makeSigned();
    const attempt = (findingId: string, witness = lab.witness, shownHash = sha256) =>
      countersign(store.db, witness, { revisionId, shownHash, findingId, acknowledgement: "", seal });
    await expect(attempt("none")).rejects.toMatchObject({ code: "revision.not-whole", detail: { opened: false } });
    const early = await checkRevision(store.db, lab.witness, { revisionId });
    await openRevision(store.db, lab.witness, { revisionId });
    await expect(attempt(early.id)).rejects.toMatchObject({ code: "revision.not-whole", detail: { opened: true } });
    await markWhole(store.db, lab.witness, { revisionId, contentSha256: sha256 });
    await expect(attempt(early.id)).rejects.toMatchObject({ code: "revision.finding-stale" });
    await expect(attempt("none")).rejects.toMatchObject({ code: "revision.finding-missing" });
    const others = await prepareToWitness(store.db, lab.secondWitness, revisionId);
    await expect(attempt(others.findingId)).rejects.toMatchObject({ code: "revision.finding-missing" });
    const own = await checkRevision(store.db, lab.witness, { revisionId });
    await expect(attempt(own.id, lab.witness, "0".repeat(64))).rejects.toMatchObject({ code: "revision.changed" });
    await expect(attempt(own.id, await signIn(store.db, lab.witness.id))).rejects.toMatchObject({
      code: "revision.not-whole",
    });
    expect(await countRows(store.db, "signatures", revisionId)).toBe(1);
    await attempt(own.id);
    await expect(attempt(own.id)).rejects.toMatchObject({ code: "revision.not-signed" });
  });

  it("is refused to whoever ever wrote in the entry, on any revision of it (SGN-09, SGN-10)", async () => {
    const { label, revisionId, writer } = await makeDraft(store.db, lab);
    const colleague = await openWriter(store.db, lab.colleague, revisionId);
    await colleague.type(",");
    await writer.catchUp();
    await sign(store.db, lab.author, revisionId);
    await expect(prepareToWitness(store.db, lab.colleague, revisionId)).rejects.toMatchObject({
      code: "revision.contributor",
    });
    await openRevision(store.db, lab.witness, { revisionId });
    const next = await returnToAuthor(store.db, lab.witness, { revisionId, reason: "A comma too many." });
    const again = await openWriter(store.db, lab.author, next.revisionId);
    await again.type(" Done.");
    await sign(store.db, lab.author, next.revisionId);
    for (const revision of [revisionId, next.revisionId]) {
      await expect(checkRevision(store.db, lab.colleague, { revisionId: revision })).rejects.toMatchObject({
        code: "revision.contributor",
      });
    }
    expect((await readEntry(store.db, lab.witness, label)).contributors.map((person) => person.printedName)).toEqual([
      "A. Author",
      "C. Colleague",
    ]);
    await witnessIt(store.db, lab.witness, next.revisionId);
  });

  it.each([
    ["author", "revision.forbidden"],
    ["supervisor", "revision.forbidden"],
    ["outsider", "entry.not-found"],
  ] as const)("is not for the %s: %s", async (who, code) => {
    const { revisionId } = await makeSigned();
    await expect(checkRevision(store.db, lab[who], { revisionId })).rejects.toMatchObject({ code });
    await expect(returnToAuthor(store.db, lab[who], { revisionId, reason: "no" })).rejects.toMatchObject({ code });
  });
});

describe("returning", () => {
  it("keeps the signed revision as it was and begins the next as an unsigned copy (SGN-14)", async () => {
    const { id, label, revisionId, sha256 } = await makeSigned();
    const signedPage = await pageState(store.db, lab.author, revisionId);
    await openRevision(store.db, lab.witness, { revisionId });
    const next = await returnToAuthor(store.db, lab.witness, { revisionId, reason: "lot of the acid?" });
    expect(next.number).toBe(2);
    const first = await readEntry(store.db, lab.author, label, 1);
    expect(first.revision).toMatchObject({
      state: "returned",
      returned: { by: "W. Witness", reason: "lot of the acid?" },
      isNewest: false,
    });
    expect(first.signatures).toHaveLength(1);
    expect(first.signed?.sha256).toBe(sha256);
    const second = await readEntry(store.db, lab.author, label);
    expect(second).toMatchObject({
      revision: { number: 2, state: "draft", begunBecause: "lot of the acid?" },
      head: { title: "Descaling bath" },
      signatures: [],
      signed: null,
      may: { write: true },
    });
    const copy = await pageState(store.db, lab.author, next.revisionId);
    expect(textOf(copy.state)).toBe(textOf(signedPage.state));

    const writer = await openWriter(store.db, lab.author, next.revisionId);
    await writer.type(" Lot 7.");
    expect(await pageState(store.db, lab.author, revisionId)).toEqual(signedPage);
    await sign(store.db, lab.author, next.revisionId);
    const signedAgain = await readEntry(store.db, lab.author, label);
    expect(signedAgain.signed?.content.previous).toEqual({ number: 1, sha256 });
    expect(openJws(signedAgain.signatures[0]?.jws ?? "")).toMatchObject({ previousContentSha256: sha256 });
    const actions = (await eventsOf(store.db, id)).map((event) => event.action);
    expect(actions.filter((action) => action.startsWith("revision."))).toEqual([
      "revision.read-whole",
      "revision.signed",
      "revision.opened",
      "revision.returned",
      "revision.begun",
      "revision.read-whole",
      "revision.signed",
    ]);
  });

  it("makes nobody a contributor, and who wrote what is still told on the copy (REC-12)", async () => {
    const { label, revisionId } = await makeSigned();
    await openRevision(store.db, lab.witness, { revisionId });
    const next = await returnToAuthor(store.db, lab.witness, { revisionId, reason: "say more" });
    expect((await readEntry(store.db, lab.author, label)).contributors.map((person) => person.id)).toEqual([
      lab.author.id,
    ]);
    const [line] = await writersOfText(store.db, lab.witness, next.revisionId);
    expect(line).toMatchObject([{ text: "Mixed the bath.", personId: lab.author.id }]);
    expect(
      await writerOf(store.db, lab.witness, { revisionId: next.revisionId, path: "block.blk.row.r1.amount" }),
    ).toMatchObject({ value: "0.100", personId: lab.author.id });
  });

  it("wants a reason, and that the revision was opened; the author is told by mail", async () => {
    const { revisionId, label } = await makeSigned();
    const attempt = (reason: string) => returnToAuthor(store.db, lab.witness, { revisionId, reason });
    await expect(attempt("why")).rejects.toMatchObject({ code: "revision.not-whole" });
    await openRevision(store.db, lab.witness, { revisionId });
    await expect(attempt(" ")).rejects.toMatchObject({ code: "revision.reason-missing" });
    await expect(attempt("x".repeat(1001))).rejects.toMatchObject({ code: "revision.reason-missing" });
    await attempt("why");
    const mail = await readRows(
      store.db,
      z.object({ to: z.string(), subject: z.string(), text: z.string() }),
      sql`select "to", subject, text from outbox where subject like ${`${label}%`} order by id`,
    );
    expect(mail.map(({ to, subject }) => [to, subject])).toEqual(
      expect.arrayContaining([
        [lab.witness.email, `${label} waits for a countersignature`],
        [lab.author.email, `${label} was returned to you`],
      ]),
    );
    expect(mail.find((each) => each.to === lab.author.email)?.text).toContain("why");
    expect(mail.some((each) => each.to === lab.outsider.email)).toBe(false);
  });
});
