// What happens at once. On the embedded store transactions go one after another; on a server they truly meet.
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import * as Y from "yjs";
import { chainFrom } from "../../db/audit.ts";
import { verifyChain } from "../../db/chain.ts";
import type { Db } from "../../db/client.ts";
import { readEntry } from "../../db/entries.ts";
import { newId } from "../../db/ids.ts";
import { MEANINGS } from "../../db/manifest.ts";
import { contentToSign, signAsAuthor } from "../../db/signatures.ts";
import { appendUpdate, pageState } from "../../db/updates.ts";
import { countersign, markWhole, openRevision, returnToAuthor } from "../../db/witnessing.ts";
import { makePerson, type TestDatabase, testDatabase } from "../support/database.ts";
import {
  countRows,
  firstLine,
  type Lab,
  makeDraft,
  makeLab,
  openWriter,
  prepareToWitness,
  seal,
  sign,
  textOf,
} from "../support/laboratory.ts";

let store: TestDatabase;
let lab: Lab;
/** another server's view of the same store; the same one where there can be only one process */
let other: Db;
beforeAll(async () => {
  store = await testDatabase();
  other = (await store.again())?.db ?? store.db;
  lab = await makeLab(store.db);
});
afterAll(() => store.close());

const won = (answers: PromiseSettledResult<unknown>[]) =>
  answers.filter((answer) => answer.status === "fulfilled").length;
const codes = (answers: PromiseSettledResult<unknown>[]) =>
  answers.flatMap((answer) => (answer.status === "rejected" ? [answer.reason.code] : []));

describe("at once", () => {
  it("twenty people type on one page, over two servers: every update has its number, and all is there (COL-01)", {
    timeout: 120_000,
  }, async () => {
    const own = await makeLab(store.db);
    const { revisionId } = await makeDraft(store.db, own, "");
    const people = await Promise.all(
      Array.from({ length: 20 }, () => makePerson(store.db, { roles: ["researcher"], memberOf: [own.notebookId] })),
    );
    const start = (await pageState(store.db, own.author, revisionId)).seq;
    const seqs = await Promise.all(
      people.map(async (person, index) => {
        const writer = await openWriter(index % 2 === 0 ? store.db : other, person, revisionId);
        const own: number[] = [];
        for (let count = 0; count < 5; count += 1) own.push(await writer.type(`[${index}.${count}]`));
        return own;
      }),
    );
    const all = seqs.flat().sort((a, b) => a - b);
    expect(all).toEqual(Array.from({ length: 100 }, (_, index) => start + 1 + index));
    const page = textOf((await pageState(other, own.author, revisionId)).state);
    for (let index = 0; index < 20; index += 1)
      for (let count = 0; count < 5; count += 1) expect(page.split(`[${index}.${count}]`)).toHaveLength(2);
    globalThis.counterleafPages?.clear();
    expect(textOf((await pageState(store.db, own.author, revisionId)).state)).toBe(page);
  });

  it("the same update arrives five times: it stands once", async () => {
    const { revisionId, writer } = await makeDraft(store.db, lab);
    const bytes = writer.change((page) => firstLine(page).insert(0, "once "));
    const updateId = newId();
    const answers = await Promise.all(
      [store.db, other, store.db, other, store.db].map((db) =>
        appendUpdate(db, lab.author, { revisionId, updateId, bytes }),
      ),
    );
    expect(new Set(answers.map((answer) => answer.seq)).size).toBe(1);
    expect(textOf((await pageState(store.db, lab.author, revisionId)).state)).toContain("once Mixed");
  });

  it("an author signs twice: one signature", async () => {
    const { revisionId } = await makeDraft(store.db, lab);
    const { sha256 } = await contentToSign(store.db, lab.author, revisionId);
    await openRevision(store.db, lab.author, { revisionId });
    await markWhole(store.db, lab.author, { revisionId, contentSha256: sha256 });
    const input = { revisionId, shownHash: sha256, meaning: MEANINGS.author, seal };
    const answers = await Promise.allSettled([
      signAsAuthor(store.db, lab.author, input),
      signAsAuthor(other, lab.author, input),
    ]);
    expect(won(answers)).toBe(1);
    expect(codes(answers)).toEqual(["revision.not-draft"]);
    expect(await countRows(store.db, "signatures", revisionId)).toBe(1);
  });

  it("an author signs while a colleague types: either the words are in what was signed, or they are refused (SGN-01)", async () => {
    for (let round = 0; round < 5; round += 1) {
      const { label, revisionId } = await makeDraft(store.db, lab);
      const { sha256 } = await contentToSign(store.db, lab.author, revisionId);
      await openRevision(store.db, lab.author, { revisionId });
      await markWhole(store.db, lab.author, { revisionId, contentSha256: sha256 });
      const writer = await openWriter(other, lab.colleague, revisionId);
      const [signed, typed] = await Promise.allSettled([
        signAsAuthor(store.db, lab.author, { revisionId, shownHash: sha256, meaning: MEANINGS.author, seal }),
        writer.type(" One more thing."),
      ]);
      const read = await readEntry(store.db, lab.author, label);
      const page = textOf((await pageState(store.db, lab.author, revisionId)).state);
      if (signed.status === "fulfilled") {
        expect(read.signed?.sha256).toBe(sha256);
        expect(codes([typed])).toEqual(["revision.not-draft"]);
        expect(page).not.toContain("One more thing");
      } else {
        expect(codes([signed])).toEqual(["revision.changed"]);
        expect(typed.status).toBe("fulfilled");
        expect(read.revision.state).toBe("draft");
        expect(page).toContain("One more thing");
      }
    }
  });

  it("one witness countersigns while another returns: one of them, never both", async () => {
    for (let round = 0; round < 3; round += 1) {
      const { label, revisionId } = await makeDraft(store.db, lab);
      await sign(store.db, lab.author, revisionId);
      const ready = await prepareToWitness(store.db, lab.witness, revisionId);
      await openRevision(store.db, lab.secondWitness, { revisionId });
      const answers = await Promise.allSettled([
        countersign(store.db, lab.witness, { revisionId, ...ready, acknowledgement: "", seal }),
        returnToAuthor(other, lab.secondWitness, { revisionId, reason: "Which lot?" }),
      ]);
      expect(won(answers)).toBe(1);
      expect(codes(answers)).toEqual(["revision.not-signed"]);
      const { revisions, signatures } = await readEntry(store.db, lab.author, label, 1);
      const isCountersigned = answers[0]?.status === "fulfilled";
      expect(revisions.map((revision) => revision.state)).toEqual(
        isCountersigned ? ["witnessed"] : ["draft", "returned"],
      );
      expect(signatures).toHaveLength(isCountersigned ? 2 : 1);
    }
  });

  it("two witnesses countersign: one signature of a witness", async () => {
    const { revisionId } = await makeDraft(store.db, lab);
    await sign(store.db, lab.author, revisionId);
    const first = await prepareToWitness(store.db, lab.witness, revisionId);
    const second = await prepareToWitness(store.db, lab.secondWitness, revisionId);
    const answers = await Promise.allSettled([
      countersign(store.db, lab.witness, { revisionId, ...first, acknowledgement: "", seal }),
      countersign(other, lab.secondWitness, { revisionId, ...second, acknowledgement: "", seal }),
    ]);
    expect(won(answers)).toBe(1);
    expect(codes(answers)).toEqual(["revision.not-signed"]);
    expect(await countRows(store.db, "signatures", revisionId)).toBe(2);
  });

  it("whatever happened, the audit trail is one unbroken chain (REC-04)", async () => {
    expect(verifyChain(await chainFrom(store.db, 1, 100_000))).toMatchObject({ ok: true });
  });
});

it("a thousand merged edits in random order, sent with cuts and repeats, end in one page (COL-02)", {
  timeout: 120_000,
}, async () => {
  const seed = 20_261_201;
  let state = seed;
  const random = () => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return state / 2 ** 32;
  };
  const { revisionId } = await makeDraft(store.db, lab, "");
  const first = await openWriter(store.db, lab.author, revisionId);
  await first.type("·");
  const second = await openWriter(other, lab.colleague, revisionId);
  for (let round = 0; round < 25; round += 1) {
    const writer = random() < 0.5 ? first : second;
    const person = writer === first ? lab.author : lab.colleague;
    const merged = writer.change((page) => {
      for (let count = 0; count < 40; count += 1) {
        const line = firstLine(page);
        const at = Math.floor(random() * (line.length + 1));
        if (random() < 0.3 && line.length > 1) line.delete(Math.min(at, line.length - 1), 1);
        else line.insert(at, String.fromCharCode(97 + Math.floor(random() * 26)));
      }
    });
    const update = { revisionId, updateId: newId(), bytes: merged };
    await appendUpdate(store.db, person, update);
    // The answer was lost, so it is sent again, to the other server.
    if (random() < 0.4) await appendUpdate(other, person, update);
    if (random() < 0.5) await Promise.all([first.catchUp(), second.catchUp()]);
  }
  await Promise.all([first.catchUp(), second.catchUp()]);
  const server = textOf((await pageState(store.db, lab.author, revisionId)).state);
  const seen = [first, second].map((writer) => writer.doc.getXmlFragment("page").toString());
  expect(seen, `seed ${seed}`).toEqual([server, server]);
  expect(Y.encodeStateVector(first.doc)).toEqual(Y.encodeStateVector(second.doc));
});
