import { describe, expect, it } from "vitest";
import type { AmountInput, BlockInput, ConstantInput, Refusal, RowInput } from "../../chem/index.ts";
import { REFUSAL_CODES, solveBlock } from "../../chem/index.ts";
import { block, grams, molar, row } from "./library.ts";

const acid = row("a", "citric-acid-monohydrate", molar("0.1"));
const good = block([acid]);
const litre = { value: "1", unit: "L" } as const;

function refusals(input: BlockInput): Refusal[] {
  const outcome = solveBlock(input);
  return outcome.ok ? [] : outcome.refusals;
}

function withAmount(amount: AmountInput, madeUpTo: BlockInput["madeUpTo"] = litre): BlockInput {
  return { ...good, rows: [{ ...acid, amount }], madeUpTo };
}

function withConstant(change: Partial<ConstantInput>): BlockInput {
  return {
    ...good,
    families: good.families.map((family) => ({
      ...family,
      constants: family.constants.map((constant, k) => (k === 0 ? { ...constant, ...change } : constant)),
    })),
  };
}

const mass = (value: string, molarMass: string, massFraction: string): AmountInput => ({
  kind: "mass",
  value,
  unit: "g",
  molarMass,
  massFraction,
});
const poured = (density: string, massFraction: string): AmountInput => ({
  kind: "volume",
  value: "10",
  unit: "mL",
  density,
  molarMass: "36.458",
  massFraction,
});
const conditions = (change: Partial<BlockInput["conditions"]>): BlockInput => ({
  ...good,
  conditions: { ...good.conditions, ...change },
});
const rowWith = (gives: RowInput["gives"]): BlockInput => ({ ...good, rows: [{ ...acid, gives }] });

const TABLE: [string, BlockInput, Refusal["code"], string][] = [
  ["a word for an amount", withAmount(molar("two")), "amount.not-a-number", "rows.a.amount"],
  ["a decimal comma", withAmount(molar("0,1")), "amount.not-a-number", "rows.a.amount"],
  ["HTML for an amount", withAmount(molar("<b>1</b>")), "amount.not-a-number", "rows.a.amount"],
  ["infinity", withAmount(molar("Infinity")), "amount.not-a-number", "rows.a.amount"],
  ["a negative amount", withAmount(molar("-0.1")), "amount.negative", "rows.a.amount"],
  ["1e400", withAmount(molar("1e400")), "amount.out-of-range", "rows.a.amount"],
  ["1e-400", withAmount(molar("1e-400")), "amount.out-of-range", "rows.a.amount"],
  ["1000 mol/L", withAmount(molar("1000")), "amount.out-of-range", "rows.a.amount"],
  [
    "a mass that comes to more than a solution holds",
    withAmount(mass("900000", "210.138", "1")),
    "amount.out-of-range",
    "rows.a.amount",
  ],
  ["no amount", withAmount(molar(" ")), "amount.missing", "rows.a.amount"],
  [
    "a mass without a final volume (CAL-12)",
    withAmount(grams("1", "citric-acid-monohydrate", "1"), null),
    "volume.missing",
    "madeUpTo",
  ],
  ["a final volume of zero", withAmount(molar("0.1"), { value: "0", unit: "L" }), "volume.not-positive", "madeUpTo"],
  [
    "a word for the final volume",
    withAmount(molar("0.1"), { value: "half", unit: "L" }),
    "volume.not-positive",
    "madeUpTo",
  ],
  [
    "a mass without a mass fraction (CAL-12)",
    withAmount(mass("1", "210.138", "")),
    "mass-fraction.out-of-range",
    "rows.a.massFraction",
  ],
  [
    "a mass fraction of 37",
    withAmount(mass("1", "210.138", "37")),
    "mass-fraction.out-of-range",
    "rows.a.massFraction",
  ],
  ["a mass fraction of 0", withAmount(mass("1", "210.138", "0")), "mass-fraction.out-of-range", "rows.a.massFraction"],
  [
    "a poured liquid without density (CAL-12)",
    withAmount(poured("", "0.37")),
    "density.out-of-range",
    "rows.a.density",
  ],
  ["a density of 1184", withAmount(poured("1184", "0.37")), "density.out-of-range", "rows.a.density"],
  ["no molar mass", withAmount(mass("1", "", "1")), "molar-mass.out-of-range", "rows.a.molarMass"],
  ["a molar mass of zero", withAmount(mass("1", "0", "1")), "molar-mass.out-of-range", "rows.a.molarMass"],
  ["no row at all", { ...good, rows: [] }, "composition.empty", "rows"],
  [
    "41 rows",
    block(Array.from({ length: 41 }, (_, k) => row(`r${k}`, "boric-acid", molar("0.001")))),
    "composition.too-many-rows",
    "rows",
  ],
  ["a family without constants", { ...good, families: [] }, "family.unknown", "rows.a.reagent"],
  [
    "a form that the family lacks",
    rowWith([{ kind: "family", family: "citric-acid", lost: 4, count: 1 }]),
    "form.unknown",
    "rows.a.reagent",
  ],
  [
    "half a proton lost",
    rowWith([{ kind: "family", family: "citric-acid", lost: 0.5, count: 1 }]),
    "form.unknown",
    "rows.a.reagent",
  ],
  [
    "an ion by itself",
    rowWith([{ kind: "family", family: "citric-acid", lost: 3, count: 1 }]),
    "composition.not-neutral",
    "rows.a.reagent",
  ],
  ["a reagent that gives nothing", rowWith([]), "composition.not-neutral", "rows.a.reagent"],
  [
    "two constants for four forms",
    { ...good, families: good.families.map((family) => ({ ...family, constants: family.constants.slice(0, 2) })) },
    "family.constants-count",
    "families.citric-acid",
  ],
  [
    "13 steps",
    {
      ...good,
      families: good.families.map((family) => ({
        ...family,
        forms: Array.from({ length: 14 }, (_, k) => ({ name: `form ${k}` })),
        constants: Array.from({ length: 13 }, () => family.constants[0]).flatMap((one) => one ?? []),
      })),
    },
    "family.too-many-steps",
    "families.citric-acid",
  ],
  ["37 °C", conditions({ temperatureC: "37" }), "temperature.outside-data", "conditions.temperatureC"],
  [
    "a word for the temperature",
    conditions({ temperatureC: "warm" }),
    "conditions.not-a-number",
    "conditions.temperatureC",
  ],
  ["a word for pKw", conditions({ pKw: { value: "x", source: "" } }), "conditions.not-a-number", "conditions.pKw"],
  [
    "a negative A",
    conditions({ debyeHuckelA: { value: "-1", source: "" } }),
    "conditions.not-a-number",
    "conditions.debyeHuckelA",
  ],
  [
    "a pKa that is no number",
    withConstant({ pKa: "strong" }),
    "conditions.not-a-number",
    "families.citric-acid.constants.1",
  ],
  [
    "a conditional constant from 1 mol/L with Davies",
    withConstant({ basis: "conditional", ionicStrength: "1.0" }),
    "constant.not-convertible",
    "families.citric-acid.constants.1",
  ],
  [
    "a conditional constant whose ionic strength nobody wrote down, with Davies",
    withConstant({ basis: "conditional", ionicStrength: null }),
    "constant.not-convertible",
    "families.citric-acid.constants.1",
  ],
  ["a word for the reading", { ...good, measuredPH: "four" }, "measured.not-a-number", "measuredPH"],
  ["a reading of 1e400", { ...good, measuredPH: "1e400" }, "measured.not-a-number", "measuredPH"],
  [
    "a composition so far outside the model that nothing converges (CAL-16)",
    block([row("a", "tetrasodium-pyrophosphate", molar("99"))]),
    "solve.no-convergence",
    "rows",
  ],
];

describe("a block is refused", () => {
  it.each(TABLE)("for %s", (_, input, code, field) => {
    expect(refusals(input)).toContainEqual(expect.objectContaining({ code, field }));
  });

  it.each(TABLE)("for %s, with a whole sentence and no number instead of an answer (CAL-16)", (_, input) => {
    const outcome = solveBlock(input);
    expect(outcome).not.toHaveProperty("value");
    for (const refusal of refusals(input)) {
      expect(refusal.text).toMatch(/^\S.{20,}[.]$/u);
      expect(REFUSAL_CODES).toContain(refusal.code);
    }
  });

  it("with everything that is wrong at once, each at its field", () => {
    const input: BlockInput = {
      ...block([
        row("a", "boric-acid", molar("two")),
        row("b", "boric-acid", molar("-1")),
        row("c", "boric-acid", { kind: "mass", value: "", unit: "g", molarMass: "61.8", massFraction: "" }),
      ]),
      measuredPH: "?",
    };
    expect(refusals(input).map(({ field }) => field)).toEqual([
      "madeUpTo",
      "rows.a.amount",
      "rows.b.amount",
      "rows.c.amount",
      "rows.c.massFraction",
      "measuredPH",
    ]);
  });

  it("with what stood there cut to a length that can be shown", () => {
    const [refusal] = refusals(withAmount(molar("x".repeat(5000))));
    expect(String(refusal?.value).length).toBeLessThanOrEqual(40);
    expect(refusal?.text.length).toBeLessThan(200);
  });

  it("by every code but the one that would need a fault of the core itself", () => {
    const seen = new Set(TABLE.map(([, , code]) => code));
    expect(REFUSAL_CODES.filter((code) => !seen.has(code))).toEqual(["solve.contradiction"]);
  });
});
