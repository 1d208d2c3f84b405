// The library's files against outside facts: check digits, atomic weights, neutrality, what is referred to, what has a source.
import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { z } from "zod";
import { parseFormula } from "../../db/formula.ts";
import { casCheckDigit, casDigits, checkCas } from "../../db/names.ts";

const read = (name: string): unknown =>
  JSON.parse(readFileSync(new URL(`../../db/seed/library/${name}.json`, import.meta.url), "utf8"));

const step = z.object({
  pKa: z.string(),
  basis: z.string(),
  ionicStrength: z.string().nullable(),
  source: z.string(),
  temperatureC: z.string(),
  nominal: z.boolean().optional(),
  disputed: z.string().nullish(),
});
const acids = z
  .object({
    sources: z.record(z.string(), z.string()),
    items: z.array(
      z.object({
        id: z.string(),
        name: z.string(),
        formula: z.string(),
        cas: z.string().nullable(),
        molarMass: z.string(),
        z0: z.number(),
        forms: z.array(z.string()),
        steps: z.array(step),
      }),
    ),
  })
  .parse(read("acids"));
const part = z.object({
  kind: z.string(),
  family: z.string().optional(),
  ion: z.string().optional(),
  lost: z.number().optional(),
  z: z.number(),
  count: z.number(),
});
const reagents = z
  .object({
    sources: z.record(z.string(), z.unknown()),
    families: z.array(z.object({ id: z.string(), z0: z.number(), steps: z.number() })),
    items: z.array(
      z.object({
        id: z.string(),
        formulaWithWater: z.string(),
        formula: z.string(),
        cas: z.string().nullable(),
        molarMass: z.string(),
        hydrateWaters: z.number(),
        gives: z.array(part),
        form: z.string(),
        massFraction: z.string().nullable(),
        density: z.object({ value: z.string() }).nullable(),
        source: z.array(z.string()),
      }),
    ),
  })
  .parse(read("reagents"));
const ions = z
  .object({ items: z.array(z.object({ id: z.string(), z: z.number(), formula: z.string() })) })
  .parse(read("strong-ions"));
const hazards = z
  .object({
    items: z.array(z.object({ reagent: z.string(), statements: z.array(z.object({ code: z.string() })) })),
    notClassified: z.object({ reagents: z.array(z.string()) }),
    sources: z.record(z.string(), z.unknown()),
    mixing: z.array(z.object({ id: z.string(), source: z.string() })),
  })
  .parse(read("hazards"));

/**
 * Standard atomic weights, abridged to five digits (conventional values where an interval is given): IUPAC Commission on
 * Isotopic Abundances and Atomic Weights, Standard atomic weights of the elements 2021, Pure Appl. Chem. 94 (2022) 573.
 * Typed here from memory, apart from the library's own computation.
 */
const WEIGHTS = new Map(
  Object.entries({
    H: 1.008,
    Li: 6.94,
    B: 10.81,
    C: 12.011,
    N: 14.007,
    O: 15.999,
    F: 18.998,
    Na: 22.99,
    Mg: 24.305,
    Al: 26.982,
    Si: 28.085,
    P: 30.974,
    S: 32.06,
    Cl: 35.45,
    K: 39.098,
    Ca: 40.078,
    Cr: 51.996,
    Mn: 54.938,
    Fe: 55.845,
    Co: 58.933,
    Ni: 58.693,
    Cu: 63.546,
    Zn: 65.38,
    As: 74.922,
    Se: 78.971,
    Br: 79.904,
    Rb: 85.468,
    Sr: 87.62,
    Mo: 95.95,
    Ag: 107.87,
    Cd: 112.41,
    Sn: 118.71,
    Te: 127.6,
    I: 126.9,
    Cs: 132.91,
    Ba: 137.33,
    La: 138.91,
    W: 183.84,
    Hg: 200.59,
    Pb: 207.2,
    Bi: 208.98,
  }),
);

/** Weights of five digits are off by half of the last one; so the sum may be by as much for each atom. */
function weigh(text: string): { mass: number; slack: number } {
  const formula = parseFormula(text);
  if (formula === null) throw new Error(`not a formula: ${text}`);
  const counts = new Map(formula.atoms);
  counts.set("H", (counts.get("H") ?? 0) + 2 * formula.waters);
  counts.set("O", (counts.get("O") ?? 0) + formula.waters);
  let mass = 0;
  let slack = 0.001;
  for (const [symbol, count] of counts) {
    const weight = WEIGHTS.get(symbol);
    if (weight === undefined) throw new Error(`no weight for ${symbol}`);
    mass += weight * count;
    slack += (weight >= 100 ? 0.005 : 0.0005) * count;
  }
  return { mass, slack };
}

describe("CAS registry numbers", () => {
  it("agree with the published example of the check digit rule: 107-07-3 (CAS, Check digit verification of CAS registry numbers)", () => {
    expect(casCheckDigit("107073")).toBe(3);
    expect(checkCas("107-07-3")).toBeNull();
  });

  it("of every family and reagent have the check digit that the rule demands", () => {
    const numbers = [...acids.items, ...reagents.items].flatMap((item) => item.cas ?? []);
    expect(numbers.length).toBeGreaterThan(600);
    const wrong = numbers.filter((cas) => checkCas(cas) !== null || !/^\d{2,7}-\d\d-\d$/.test(cas));
    expect(wrong).toEqual([]);
  });

  it("say which digit was expected when it is wrong (FND-08)", () => {
    expect(checkCas("7664-38-3")).toEqual({ given: "7664-38-3", expected: 2, corrected: "7664-38-2" });
  });

  it("catch every single wrong digit but those that the rule cannot see", () => {
    // The rule weighs digits by 1 to 9 modulo 10: an even weight misses a change by 5, and weight 5 any even change.
    const digits = casDigits("7732-18-5");
    for (let place = 0; place < digits.length - 1; place++) {
      for (let digit = 0; digit < 10; digit++) {
        const weight = digits.length - 1 - place;
        const change = digit - Number(digits[place]);
        const typed = digits.slice(0, place) + String(digit) + digits.slice(place + 1);
        expect(checkCas(typed) === null, typed).toBe((change * weight) % 10 === 0);
      }
    }
  });
});

describe("molar masses", () => {
  it.each(reagents.items)("of $id follows from $formulaWithWater within the rounding of the weights", (item) => {
    const { mass, slack } = weigh(item.formulaWithWater);
    expect(Math.abs(mass - Number(item.molarMass))).toBeLessThanOrEqual(slack);
  });

  it("of every family follows from the formula of its uncharged parent", () => {
    const off = acids.items.filter((item) => {
      const { mass, slack } = weigh(item.formula);
      return Math.abs(mass - Number(item.molarMass)) > slack;
    });
    expect(off.map((item) => item.id)).toEqual([]);
  });
});

describe("what a reagent gives", () => {
  it.each(reagents.items)("adds up to no charge: $id", (item) => {
    expect(item.gives.reduce((sum, each) => sum + each.z * each.count, 0)).toBe(0);
    expect(item.gives.length).toBeGreaterThan(0);
  });

  it("names families, forms and ions that exist, with the charge that they have", () => {
    const families = new Map(acids.items.map((item) => [item.id, item]));
    const charged = new Map(ions.items.map((ion) => [ion.id, ion.z]));
    for (const item of reagents.items) {
      for (const each of item.gives) {
        if (each.kind === "family") {
          const family = families.get(each.family ?? "");
          expect(family, `${item.id}: ${each.family}`).toBeDefined();
          expect(each.lost, item.id).toBeLessThanOrEqual(family?.steps.length ?? -1);
          expect(each.z, item.id).toBe((family?.z0 ?? Number.NaN) - (each.lost ?? Number.NaN));
        } else if (each.kind === "strong" || each.kind === "metal") {
          expect(each.z, `${item.id}: ${each.ion}`).toBe(charged.get(each.ion ?? ""));
        } else {
          expect(each.z, item.id).toBe(each.kind === "proton" ? 1 : -1);
        }
      }
    }
  });

  it("agrees with the constants on how many protons a family loses", () => {
    const families = new Map(acids.items.map((item) => [item.id, item]));
    const disagreeing = reagents.families.filter((family) => {
      const known = families.get(family.id);
      return known === undefined || known.z0 !== family.z0 || known.steps.length !== family.steps;
    });
    expect(disagreeing).toEqual([]);
  });

  it("takes solutions with mass fraction and density, so that a volume can be turned into an amount (CAL-12)", () => {
    const solutions = reagents.items.filter((item) => item.form === "aqueous solution");
    expect(solutions.length).toBeGreaterThan(30);
    const lacking = solutions.filter((item) => item.massFraction === null || item.density === null);
    expect(lacking.map((item) => item.id)).toEqual([]);
  });
});

describe("constants", () => {
  it("are one fewer than forms, each with source, basis and temperature (CAL-03)", () => {
    for (const family of acids.items) {
      expect(family.forms.length, family.id).toBe(family.steps.length + 1);
      for (const each of family.steps) {
        expect(acids.sources[each.source], `${family.id}: ${each.source}`).toBeTruthy();
        expect(each.basis === "conditional", family.id).toBe(each.ionicStrength !== null);
        expect(each.temperatureC, family.id).toMatch(/^\d+(\.\d+)?$/);
      }
    }
  });

  it("rise with each proton lost, but for steps that are known to overlap", () => {
    const falling = acids.items.flatMap((family) =>
      family.steps.flatMap((each, i) => {
        const before = family.steps[i - 1];
        return before !== undefined && Number(each.pKa) < Number(before.pKa) ? [`${family.id}.${i + 1}`] : [];
      }),
    );
    expect(falling).toEqual([]);
  });

  it("that are only placeholders of strong steps say so and lie below zero or near it", () => {
    const nominal = acids.items.flatMap((family) => family.steps.filter((each) => each.nominal));
    expect(nominal.length).toBeGreaterThan(0);
    for (const each of nominal) {
      expect(Number(each.pKa)).toBeLessThan(1);
      expect(each.disputed).toBeTruthy();
    }
  });

  it.each([
    // R. A. Robinson, R. H. Stokes, Electrolyte Solutions (1970), appendix 12.1, 25 °C, I = 0; from memory.
    ["acetic-acid", 1, 4.756],
    ["phosphoric-acid", 1, 2.148],
    ["phosphoric-acid", 2, 7.198],
    ["carbonic-acid", 1, 6.352],
    ["carbonic-acid", 2, 10.329],
    ["ammonia", 1, 9.245],
    ["citric-acid", 1, 3.128],
    ["citric-acid", 2, 4.761],
    ["citric-acid", 3, 6.396],
    ["phthalic-acid", 2, 5.408],
  ])("of %s, step %i, lies within 0.01 of the handbook's %d", (id, place, handbook) => {
    const family = acids.items.find((item) => item.id === id);
    expect(Math.abs(Number(family?.steps[place - 1]?.pKa) - handbook)).toBeLessThanOrEqual(0.01);
  });
});

describe("hazards", () => {
  it("speak of reagents on the shelf, each either with statements or among those not classified, never both", () => {
    const shelf = new Set(reagents.items.map((item) => item.id));
    const classified = hazards.items.map((item) => item.reagent);
    expect([...classified, ...hazards.notClassified.reagents].filter((id) => !shelf.has(id))).toEqual([]);
    expect(hazards.notClassified.reagents.filter((id) => classified.includes(id))).toEqual([]);
    expect(hazards.items.filter((item) => item.statements.some((each) => !/^H\d{3}$/.test(each.code)))).toEqual([]);
  });

  it("and cautions on mixing name their sources", () => {
    expect(hazards.mixing.filter((rule) => hazards.sources[rule.source] === undefined)).toEqual([]);
  });
});
