import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { z } from "zod";
import { readRows } from "../../db/client.ts";
import { deriveRevision, listUnderived } from "../../db/derive.ts";
import { keptSolves, resultFor } from "../../db/results.ts";
import type { EquilibriumBlock } from "../../editor/schema/index.ts";
import { libraryDatabase, type TestDatabase } from "../support/database.ts";
import { addBlock, countRows, type Lab, makeDraft, makeLab, rowOf, sql } from "../support/laboratory.ts";

let store: TestDatabase;
let lab: Lab;
let revisionId: string;
beforeAll(async () => {
  store = await libraryDatabase();
  lab = await makeLab(store.db);
  ({ revisionId } = await makeDraft(store.db, lab));
});
afterAll(() => store.close());

async function block(amount: string, more: Partial<EquilibriumBlock> = {}): Promise<EquilibriumBlock> {
  const { compound, constants } = await rowOf(store.db, "a", "reagent:citric-acid", amount);
  return {
    id: "blk",
    title: "",
    volume: "",
    volumeUnit: "L",
    temperatureC: "25",
    activity: "davies",
    measuredPH: "",
    show: "",
    rows: [
      { id: "a", compound, constants: constants ?? "", amount, unit: "mol/L", massFraction: "", density: "", lot: "" },
    ],
    ...more,
  };
}
const ask = (asked: unknown, who = lab.author) => resultFor(store.db, who, { revisionId, block: asked });

describe("a block's answer", () => {
  it("is found by its content: what cannot change it does not change its key (CAL-04, CAL-18)", async () => {
    const first = await ask(await block("0.100"));
    expect(first.outcome.ok && first.outcome.value.pH).toBeGreaterThan(1.9);
    expect(first.outcome.ok && first.outcome.value.pH).toBeLessThan(2.2);
    const rows = await countRows(store.db, "results");
    const same = await ask(await block("0.100", { title: "named", show: "fractions" }));
    expect(same.key).toBe(first.key);
    expect(same.outcome).toEqual(first.outcome);
    expect(await countRows(store.db, "results")).toBe(rows);
    expect((await ask(await block("0.10"))).key).not.toBe(first.key);
    expect((await ask(await block("0.100", { activity: "ideal" }))).key).not.toBe(first.key);
  });

  it("is stored once when two ask at once, and every solve stays listed (CAL-04)", async () => {
    const asked = await block("0.0421", { id: "two" });
    const answers = await Promise.all([ask(asked), ask(asked), ask(asked, lab.colleague)]);
    expect(new Set(answers.map((answer) => answer.key)).size).toBe(1);
    await ask(await block("0.0422", { id: "two" }));
    const kept = await keptSolves(store.db, lab.witness, { revisionId, blockId: "two" });
    expect(kept.map((solve) => solve.rows[0]?.amount)).toEqual(["0.0421", "0.0422"]);
  });

  it("is a refusal with its field and no number when it cannot be solved, and is not kept (CAL-16)", async () => {
    const rows = await countRows(store.db, "results");
    for (const amount of ["-0.1", "1e400", "some"]) {
      const answer = await ask(await block(amount));
      expect(answer.outcome).toMatchObject({ ok: false, refusals: [{ field: "rows.r1.amount" }] });
    }
    const unknown = await block("0.1");
    const answer = await ask({
      ...unknown,
      rows: unknown.rows.map((row) => ({ ...row, compound: "reagent:no-such-thing" })),
    });
    expect(answer).toMatchObject({ key: null, outcome: { ok: false, refusals: [{ field: "rows.r1.compound" }] } });
    const many = unknown.rows.flatMap((row) => Array.from({ length: 41 }, (_, index) => ({ ...row, id: `r${index}` })));
    expect((await ask({ ...unknown, rows: many })).outcome).toMatchObject({
      ok: false,
      refusals: [{ code: "composition.too-many-rows" }],
    });
    expect(await countRows(store.db, "results")).toBe(rows);
  });

  it("is refused for what is no block, and for whoever may not read the page", async () => {
    await expect(ask({ pH: 7 })).rejects.toMatchObject({ code: "block.invalid" });
    await expect(ask({ ...(await block("0.1")), result: 7 })).rejects.toMatchObject({ code: "block.invalid" });
    const asked = await block("0.1");
    await expect(ask(asked, lab.outsider)).rejects.toMatchObject({ code: "entry.not-found" });
    const outsider = keptSolves(store.db, lab.outsider, { revisionId, blockId: "blk" });
    await expect(outsider).rejects.toMatchObject({ code: "entry.not-found" });
  });

  it("is given to a reader without being noted as a solve of the page", async () => {
    const asked = await block("0.0777", { id: "read" });
    expect((await ask(asked, lab.witness)).outcome.ok).toBe(true);
    expect(await keptSolves(store.db, lab.witness, { revisionId, blockId: "read" })).toEqual([]);
  });
});

describe("deriving a page", () => {
  it("writes words, occurrences and pH, says when somebody typed meanwhile, and is due until it was done", async () => {
    const draft = await makeDraft(store.db, lab, "Rinsed with water.");
    const row = await rowOf(store.db, "r1", "reagent:citric-acid", "0.100");
    await draft.writer.write((page) =>
      addBlock(page, "b1", [{ ...row, unit: "mol/L", lot: "L-7" }], { title: "Bath", measuredPH: "2.05" }),
    );
    expect(await listUnderived(store.db, 1000)).toContain(draft.revisionId);
    const derived = await deriveRevision(store.db, draft.revisionId);
    expect(derived.isCurrent).toBe(true);
    expect(derived.text).toContain("Rinsed with water.");
    expect(derived.occurrences).toMatchObject([{ compound: "reagent:citric-acid", role: "component", position: 0 }]);
    expect(derived.occurrences[0]?.line).toMatch(/^E1 Bath: citric acid.* 0\.100 mol\/L/i);
    const [stored] = await readRows(
      store.db,
      z.object({ calculated_ph: z.string(), measured_ph: z.string() }),
      sql`select calculated_ph, measured_ph from page_texts where revision_id = ${draft.revisionId}`,
    );
    expect(stored?.measured_ph).toBe("2.05");
    expect(Number(stored?.calculated_ph)).toBeCloseTo(derived.blocks[0]?.pH ?? 0, 12);
    expect(await listUnderived(store.db, 1000)).not.toContain(draft.revisionId);
    await deriveRevision(store.db, draft.revisionId);
    expect(await countRows(store.db, "occurrences", draft.revisionId)).toBe(1);
    expect(await keptSolves(store.db, lab.author, { revisionId: draft.revisionId, blockId: "b1" })).toHaveLength(1);
  });
});
