import { describe, expect, it } from "vitest";
import type { FamilyInput } from "../../../chem/index.ts";
import {
  canonicalInputs,
  canonicalText,
  type EquilibriumBlock,
  equilibriumBlock,
  type LibrarySlice,
} from "../../../editor/schema/index.ts";

const constant = (id: string): FamilyInput["constants"][number] => ({
  id,
  pKa: "4.0",
  basis: "thermodynamic",
  ionicStrength: null,
  temperatureC: "25",
  uncertainty: null,
  source: "made up for this test",
  fromMemory: true,
  nominal: false,
  disputed: null,
});
const slice: LibrarySlice = {
  compounds: {
    "reagent:imaginic-acid": {
      name: "imaginic acid",
      formula: "HIm",
      cas: null,
      molarMass: "100.00",
      gives: [{ kind: "family", family: "imaginic", lost: 0, count: 1 }],
      density: "1.20",
      massFraction: "0.850",
    },
    "reagent:sodium-chloride": {
      name: "sodium chloride",
      formula: "NaCl",
      cas: "7647-14-5",
      molarMass: "58.44",
      gives: [
        { kind: "ion", ion: "sodium", name: "sodium", z: 1, count: 1, role: "spectator" },
        { kind: "ion", ion: "chloride", name: "chloride", z: -1, count: 1, role: "spectator" },
      ],
      density: null,
      massFraction: null,
    },
  },
  families: {
    imaginic: {
      id: "imaginic",
      name: "imaginic acid",
      z0: 0,
      forms: [{ name: "imaginic acid" }, { name: "imaginate" }],
      constants: [constant("imaginic.1.v1")],
    },
  },
  water: { pKw: { value: "13.995", source: "test" }, debyeHuckelA: { value: "0.509", source: "test" } },
};
const acid = {
  id: "k3",
  compound: "reagent:imaginic-acid",
  constants: "imaginic.1.v1",
  amount: "0.100",
  unit: "mol/L" as const,
  massFraction: "",
  density: "",
  lot: "L-1",
};
const block: EquilibriumBlock = {
  id: "b1",
  title: "Bath A",
  volume: "",
  volumeUnit: "L",
  temperatureC: "25",
  activity: "davies",
  measuredPH: "",
  show: "",
  rows: [acid],
};
const inputOf = (change: Partial<EquilibriumBlock>) => {
  const made = canonicalInputs({ ...block, ...change }, slice);
  if (!made.ok) throw new Error(JSON.stringify(made.refusals));
  return made.input;
};
const rowWith = (change: Partial<(typeof block.rows)[number]>) => ({ rows: [{ ...acid, ...change }] });

describe("canonicalInputs", () => {
  it("keeps quantities as typed and puts the constants in (CAL-01)", () => {
    expect(inputOf({})).toEqual({
      families: [slice.families.imaginic],
      rows: [
        {
          id: "r1",
          reagent: "reagent:imaginic-acid",
          name: "imaginic acid",
          formula: "HIm",
          gives: [{ kind: "family", family: "imaginic", lost: 0, count: 1 }],
          amount: { kind: "concentration", value: "0.100", unit: "mol/L" },
        },
      ],
      madeUpTo: null,
      conditions: { temperatureC: "25", activity: "davies", ...slice.water },
      measuredPH: null,
    });
  });

  it("is blind to what cannot change the answer: ids, title, lot, what is shown, an idle volume (CAL-18)", () => {
    const same = {
      ...block,
      id: "other",
      title: "Bath B",
      show: "x",
      volume: "1.000",
      rows: [{ ...acid, id: "z", lot: "" }],
    };
    expect(canonicalText(inputOf(same))).toBe(canonicalText(inputOf({})));
  });

  it("is not blind to how a quantity was typed, to the model or to the reading", () => {
    const texts = [{}, rowWith({ amount: "0.10" }), { activity: "ideal" as const }, { measuredPH: "3.10" }].map(
      (change) => canonicalText(inputOf(change)),
    );
    expect(new Set(texts).size).toBe(4);
  });

  it("passes mass fraction and density as typed, and fills in neither from the label (CAL-12)", () => {
    expect(inputOf({ ...rowWith({ unit: "g" }), volume: "1.000" })).toMatchObject({
      madeUpTo: { value: "1.000", unit: "L" },
      rows: [{ amount: { kind: "mass", value: "0.100", unit: "g", molarMass: "100.00", massFraction: "" } }],
    });
    expect(inputOf(rowWith({ unit: "mL", density: "1.685", massFraction: "0.850" })).rows[0]?.amount).toEqual({
      kind: "volume",
      value: "0.100",
      unit: "mL",
      density: "1.685",
      molarMass: "100.00",
      massFraction: "0.850",
    });
  });

  it("hands a malformed volume on, to be refused by the solver", () => {
    expect(inputOf({ volume: "one litre" }).madeUpTo).toEqual({ value: "one litre", unit: "L" });
    expect(inputOf({ volume: "-1" }).madeUpTo).toEqual({ value: "-1", unit: "L" });
  });

  it("needs no constants for a salt of strong ions", () => {
    expect(inputOf({ rows: [{ ...acid, compound: "reagent:sodium-chloride", constants: "" }] }).families).toEqual([]);
  });

  it("refuses all at once, each at its field", () => {
    const made = canonicalInputs(
      {
        ...block,
        rows: [
          { ...acid, compound: "" },
          { ...acid, compound: "reagent:toString" },
          { ...acid, constants: "" },
          { ...acid, constants: "imaginic.1.v2" },
        ],
      },
      slice,
    );
    expect(made.ok ? [] : made.refusals.map((refusal) => [refusal.field, refusal.code])).toEqual([
      ["rows.r1.compound", "form.unknown"],
      ["rows.r2.compound", "form.unknown"],
      ["rows.r3.constants", "family.constants-count"],
      ["rows.r4.constants", "family.constants-count"],
    ]);
  });
});

describe("canonicalText", () => {
  // The worked example of RFC 8785, section 3.2.2 and 3.2.3.
  it("writes the sample object of RFC 8785 as the RFC does", () => {
    const sample = {
      numbers: [333333333.3333333, 1e30, 4.5, 2e-3, 0.000000000000000000000000001],
      string: "\u20ac$\u000F\u000aA'\u0042\u0022\u005c\\\"/",
      literals: [null, true, false],
    };
    expect(canonicalText(sample)).toBe(
      '{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],"string":"€$\\u000f\\nA\'B\\"\\\\\\\\\\"/"}',
    );
  });
  it("refuses what JSON cannot hold", () => {
    expect(() => canonicalText(Number.NaN)).toThrow();
    expect(() => canonicalText(undefined)).toThrow();
  });
});

describe("equilibriumBlock", () => {
  it("is strict and bounded", () => {
    expect(equilibriumBlock.safeParse(block).success).toBe(true);
    expect(equilibriumBlock.safeParse({ ...block, pH: 7 }).success).toBe(false);
    expect(equilibriumBlock.safeParse({ ...block, activity: "other" }).success).toBe(false);
    expect(equilibriumBlock.safeParse({ ...block, volume: "1".repeat(61) }).success).toBe(false);
    expect(equilibriumBlock.safeParse({ ...block, rows: Array.from({ length: 201 }, () => acid) }).success).toBe(false);
  });
});
