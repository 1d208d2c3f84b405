import katex from "katex";
import { describe, expect, it } from "vitest";
import type { Balance, BlockInput, SolvedBlock } from "../../chem/index.ts";
import { ENGINE_VERSION, MODEL_RANGES, solveBlock } from "../../chem/index.ts";
import { block, grams, libraryFamilies, libraryReagents, molar, row } from "./library.ts";

const rich = block([
  row("a", "citric-acid-monohydrate", molar("0.100")),
  row("b", "trisodium-citrate-dihydrate", molar("0.050")),
  row("c", "disodium-hydrogen-phosphate", molar("0.020")),
  row("d", "hydrochloric-acid-37", molar("0.010")),
  row("e", "ammonium-acetate", molar("0.030")),
  row("f", "sodium-hydroxide", molar("0.002")),
]);

function solved(input: BlockInput): SolvedBlock {
  const outcome = solveBlock(input);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.refusals));
  return outcome.value;
}

function balances(value: SolvedBlock): Balance[] {
  const { components, sum } = value.protonCondition;
  return [...components, sum, ...value.massBalances, value.chargeBalance];
}

describe("a solved block", () => {
  it("never drops water: 1e-8 mol/L of strong acid is pH 6.98, not 8", () => {
    // 6.978 for pKw 14.00 (CHEMISTRY.md; x² − 1e-8 x − Kw = 0 by hand); half of what pKw is above 14 comes on top.
    const value = solved(block([row("a", "hydrochloric-acid-37", molar("1e-8"))], "ideal"));
    const half = 0.5e-8;
    const Kw = 10 ** -value.pKw.thermodynamic;
    expect(value.pH).toBeCloseTo(-Math.log10(half + Math.sqrt(half * half + Kw)), 12);
    expect(value.pH).toBeCloseTo(6.978, 2);
  });

  it("shows 5 mol/L of strong acid below 0 and 5 mol/L of strong base above 14, unclipped (CAL-07)", () => {
    expect(solved(block([row("a", "hydrochloric-acid-37", molar("5"))], "ideal")).pH).toBeCloseTo(-Math.log10(5), 12);
    expect(solved(block([row("a", "sodium-hydroxide", molar("5"))], "ideal")).pH).toBeCloseTo(
      13.997 + Math.log10(5),
      12,
    );
  });

  it("gives 0.1 mol/L acetic acid the pH of the quadratic formula", () => {
    // The formula leaves water out, which changes 1e-9 here. K from pKa 4.756 on the molality scale, raised by 0.0013 for amount concentrations.
    const value = solved(block([row("a", "acetic-acid-glacial", molar("0.1"))], "ideal"));
    const K = 10 ** -(Number(libraryFamilies.get("acetic-acid")?.constants[0]?.pKa) + 0.0013);
    expect(value.pH).toBeCloseTo(-Math.log10((-K + Math.sqrt(K * K + 0.4 * K)) / 2), 8);
  });

  it("takes weighed masses, mass fraction and final volume to concentrations", () => {
    const input = {
      ...block([row("a", "citric-acid-monohydrate", grams("9.606", "citric-acid-monohydrate", "0.995"))]),
      madeUpTo: { value: "500.0", unit: "mL" as const },
    };
    const M = Number(libraryReagents.get("citric-acid-monohydrate")?.molarMass);
    expect(solved(input).composition[0]?.concentration).toBeCloseTo((9.606 * 0.995) / M / 0.5, 15);
  });

  it("takes a poured volume by density to a concentration", () => {
    const input: BlockInput = {
      ...block([
        row("a", "hydrochloric-acid-37", {
          kind: "volume",
          value: "8.3",
          unit: "mL",
          density: "1.184",
          molarMass: "36.458",
          massFraction: "0.370",
        }),
      ]),
      madeUpTo: { value: "1", unit: "L" },
    };
    expect(solved(input).composition[0]?.concentration).toBeCloseTo((8.3 * 1.184 * 0.37) / 36.458, 15);
  });

  it("reads mmol/L as a thousandth of mol/L", () => {
    const of = (value: string, unit: "mol/L" | "mmol/L") =>
      solved(block([row("a", "boric-acid", { kind: "concentration", value, unit })])).pH;
    expect(of("50", "mmol/L")).toBe(of("0.050", "mol/L"));
  });

  it("carries engine, model, its range and the ionic strength (CAL-06)", () => {
    const value = solved(rich);
    expect(value.engine).toBe(ENGINE_VERSION);
    expect(value.activity).toMatchObject({
      model: "davies",
      maxIonicStrength: 0.5,
      rangeText: MODEL_RANGES.davies.rangeText,
    });
    const sum = value.species.reduce((total, one) => total + (one.z * one.z * one.concentration) / 2, 0);
    expect(value.ionicStrength).toBeCloseTo(sum, 13);
  });

  it("gives what a pocket calculator needs: pH = −lg(γ[H+]), and pKw and pKa at the ionic strength (CAL-17)", () => {
    const value = solved(rich);
    const gamma = (z: number) => value.activityCoefficients.find((one) => one.z === z)?.gamma ?? Number.NaN;
    expect(-Math.log10(gamma(1) * value.H)).toBeCloseTo(value.pH, 12);
    expect(-Math.log10(value.H * value.OH)).toBeCloseTo(value.pKw.conditional, 12);
    for (const constant of value.constants) {
      const form = (lost: number) =>
        value.species.find((one) => one.family === constant.family && one.lost === lost)?.concentration ?? Number.NaN;
      const quotient = (value.H * form(constant.step)) / form(constant.step - 1);
      expect(-Math.log10(quotient)).toBeCloseTo(constant.conditional, 10);
    }
    const root = Math.sqrt(value.ionicStrength);
    expect(Math.log10(gamma(2))).toBeCloseTo(-0.5105 * 4 * (root / (1 + root) - 0.3 * value.ionicStrength), 12);
    expect(gamma(0)).toBe(1);
  });

  it("balances protons, mass and charge: both sides, their difference, and a bound that holds it (CAL-17)", () => {
    const value = solved(rich);
    for (const one of [value.protonCondition.sum, value.chargeBalance, ...value.massBalances]) {
      expect(Math.abs(one.difference), one.title).toBeLessThanOrEqual(one.roundingBound);
      expect(one.roundingBound, one.title).toBeLessThan(1e-13);
    }
    for (const one of balances(value)) {
      const side = (name: "left" | "right") =>
        one.terms.filter((term) => term.side === name).reduce((total, term) => total + term.value, 0);
      expect(one.left).toBe(side("left"));
      expect(one.right).toBe(side("right"));
    }
  });

  it("writes one proton condition for water and for each row that exchanges protons, and their sum", () => {
    const { components, sum } = solved(rich).protonCondition;
    expect(components.map((one) => one.terms[0]?.reference)).toEqual(["water", "a", "b", "c", "d", "e", "f"]);
    const parts = components.reduce((total, one) => total + one.difference, 0);
    expect(parts).toBeCloseTo(sum.difference, 14);
    const citrate = components.find((one) => one.terms[0]?.reference === "b");
    expect(citrate?.terms.map(({ side, coefficient }) => [side, coefficient])).toEqual([
      ["left", 3],
      ["left", 2],
      ["left", 1],
    ]);
  });

  it("leaves out rows of inert salts from the proton condition, and counts their ions in the charge balance", () => {
    const value = solved(block([row("a", "boric-acid", molar("0.05")), row("b", "sodium-chloride", molar("0.1"))]));
    expect(value.protonCondition.components).toHaveLength(2);
    expect(value.chargeBalance.terms.map((term) => term.reaction)).toContain("sodium");
    expect(value.ionicStrength).toBeGreaterThan(0.1);
  });

  it("encloses the root: the residual's sign differs at the two ends", () => {
    const value = solved(rich);
    expect(value.enclosure.lowPH).toBeLessThan(value.pH);
    expect(value.enclosure.highPH).toBeGreaterThan(value.pH);
    expect(value.enclosure.highPH - value.enclosure.lowPH).toBeLessThan(1e-12);
    expect(Math.abs(value.residual.value)).toBeLessThanOrEqual(value.residual.bound);
  });

  it("loses no digits where strong base just takes up a strong acid's protons", () => {
    // Sodium sulfate made of its acid and base: only the hydrolysis of sulfate is left.
    const mixed = solved(
      block([row("a", "sulfuric-acid-96", molar("0.1")), row("b", "sodium-hydroxide", molar("0.2"))], "ideal"),
    );
    const salt = solved(block([row("a", "sodium-sulfate", molar("0.1"))], "ideal"));
    expect(mixed.pH).toBeCloseTo(salt.pH, 13);
  });

  it("is plain JSON that survives a round trip unchanged, with no number that JSON cannot hold (CAL-18)", () => {
    const value = solved(rich);
    expect(JSON.parse(JSON.stringify(value))).toEqual(value);
    expect(JSON.stringify(value)).not.toContain("null,null");
  });

  it("gives the same bytes every time it is asked (CAL-18)", () => {
    expect(JSON.stringify(solveBlock(rich))).toBe(JSON.stringify(solveBlock(structuredClone(rich))));
  });

  it("keeps the difference to a reading apart from the calculation (CAL-09)", () => {
    const value = solved({ ...rich, measuredPH: "4.05" });
    expect(value.comparison?.measured).toBe(4.05);
    expect(value.comparison?.difference).toBeCloseTo(4.05 - value.pH, 12);
    expect(value.pH).toBe(solved(rich).pH);
  });

  it("states each constant with value as typed, basis, temperature and source (CAL-03)", () => {
    const [first] = solved(rich).constants;
    expect(first).toMatchObject({
      pKa: "3.127",
      basis: "thermodynamic",
      temperatureC: "25",
      familyName: "citric acid",
      step: 1,
    });
    expect(first?.source).not.toBe("");
  });

  it("says on which scale the constants stand", () => {
    expect(
      solved(rich)
        .activityDefinitions.map((one) => one.plain)
        .join(" "),
    ).toContain("0.0013");
  });

  it("answers a block of 40 rows", () => {
    const rows = Array.from({ length: 40 }, (_, k) =>
      row(`r${k}`, k % 2 === 0 ? "boric-acid" : "sodium-acetate", molar("0.001")),
    );
    expect(solved(block(rows)).composition).toHaveLength(40);
  });
});

describe("formulas of a solved block", () => {
  const formulas = (value: SolvedBlock) => [
    ...balances(value).flatMap((one) => [one.latex, ...one.terms.map((term) => term.latex)]),
    ...value.fractions.flatMap((one) => one.latex),
    ...value.activityDefinitions.map((one) => one.latex),
    ...value.species.map((one) => one.latex),
  ];
  const texts = (value: SolvedBlock) => [...formulas(value), ...balances(value).map((one) => one.latexNumbers)];
  const typeset = (latex: string) =>
    katex.renderToString(latex, { displayMode: true, throwOnError: true, strict: "error", trust: false });

  it("are all understood by the typesetter, with their numbers", () => {
    for (const latex of texts(solved(rich))) expect(() => typeset(latex)).not.toThrow();
  });

  it("are made of symbols that the typesetter understands, for every reagent of the library", () => {
    const symbols = new Set<string>();
    for (const { id } of libraryReagents.values())
      for (const one of solved(block([row("a", id, molar("0.01"))], "ideal")).species) symbols.add(one.latex);
    expect(symbols.size).toBeGreaterThan(300);
    for (const latex of symbols) expect(() => typeset(latex)).not.toThrow();
  });

  it("write citrate and phosphate as a chemist does", () => {
    const value = solved(rich);
    expect(value.species.map((one) => one.latex)).toEqual(
      expect.arrayContaining([
        "\\mathrm{H_{2}Cit^{-}}",
        "\\mathrm{HPO_{4}^{2-}}",
        "\\mathrm{NH_{4}^{+}}",
        "\\mathrm{Na^{+}}",
      ]),
    );
  });

  it("never let a name that somebody typed through", () => {
    const evil = "\\href{javascript:alert(1)}{x}$<script>";
    const input = block([row("a", "boric-acid", molar("0.05"))]);
    const dressed: BlockInput = {
      ...input,
      families: input.families.map((family) => ({
        ...family,
        id: `${evil}boric`,
        name: evil,
        forms: family.forms.map(() => ({ name: evil })),
      })),
      rows: input.rows.map((one) => ({
        ...one,
        id: evil,
        name: evil,
        gives: one.gives.map((gives) => (gives.kind === "family" ? { ...gives, family: `${evil}boric` } : gives)),
      })),
    };
    for (const latex of texts(solved(dressed))) {
      expect(latex).not.toMatch(/href|script:|[$<>]/);
      expect(() => typeset(latex)).not.toThrow();
    }
  });

  it("say the same in plain words for a screen reader", () => {
    const value = solved(rich);
    expect(value.protonCondition.sum.plain).toContain("2 times the concentration of phosphoric acid");
    for (const one of balances(value)) expect(one.plain).not.toMatch(/[\\{}]/);
  });

  it("give two families of one block different symbols", () => {
    const value = solved(
      block([
        row("a", "malic-acid", molar("0.01")),
        row("b", "malonic-acid", molar("0.01")),
        row("c", "maleic-acid", molar("0.01")),
      ]),
    );
    const latex = value.species.filter((one) => one.lost !== null).map((one) => one.latex);
    expect(new Set(latex).size).toBe(latex.length);
  });
});
