// SAF-02, from a table: what must be warned about, and what must not. The reactions are those of textbooks, from memory.
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import {
  cautionsFor,
  findCautions,
  type MixingRules,
  type MixtureRow,
  mixingRules,
  mixtureOfBlock,
} from "../../db/cautions.ts";
import { slice } from "../../db/compounds.ts";
import { libraryDatabase, type TestDatabase } from "../support/database.ts";

let store: TestDatabase;
let rules: MixingRules;
beforeAll(async () => {
  store = await libraryDatabase();
  rules = await mixingRules(store.db);
});
afterAll(() => store.close());

type Line = [reagent: string, concentration: number | null, statedAs?: MixtureRow["statedAs"]];

async function cautionIds(lines: Line[], pH: number | null): Promise<string[]> {
  const rows = lines.map(([reagent, concentration, statedAs = "concentration"]) => ({
    compound: reagent.includes(":") ? reagent : `reagent:${reagent}`,
    concentration,
    statedAs,
  }));
  const library = await slice(
    store.db,
    rows.map((row) => row.compound),
    [],
  );
  return (await cautionsFor(store.db, library, rows, pH === null ? null : { pH })).map((caution) => caution.id);
}

describe("a caution stands (SAF-02)", () => {
  it.each<[what: string, id: string, lines: Line[], pH: number | null]>([
    [
      "acid with hypochlorite",
      "acid-hypochlorite",
      [
        ["citric-acid", 0.05],
        ["sodium-hypochlorite-12", 0.01],
      ],
      5,
    ],
    [
      "hydrochloric acid with hypochlorite",
      "acid-hypochlorite",
      [
        ["hydrochloric-acid-37", 0.1],
        ["sodium-hypochlorite-12", 0.1],
      ],
      1.4,
    ],
    [
      "acid with calcium hypochlorite",
      "acid-hypochlorite",
      [
        ["sulfamic-acid", 0.05],
        ["calcium-hypochlorite", 0.0005],
      ],
      2,
    ],
    [
      "hypochlorite made acid by its surroundings",
      "acid-hypochlorite",
      [
        ["sodium-hypochlorite-12", 0.1],
        ["boric-acid", 1],
      ],
      7.2,
    ],
    [
      "acid with cyanide",
      "acid-cyanide",
      [
        ["acetic-acid-glacial", 0.1],
        ["potassium-cyanide", 0.001],
      ],
      4,
    ],
    ["cyanide below pH 11 without any acid", "acid-cyanide", [["sodium-cyanide", 0.01]], 10.6],
    [
      "acid with sulfide",
      "acid-sulfide",
      [
        ["phosphoric-acid-85", 0.1],
        ["sodium-sulfide-nonahydrate", 0.01],
      ],
      3,
    ],
    [
      "acid with azide",
      "acid-azide",
      [
        ["nitric-acid-65", 0.1],
        ["sodium-azide", 0.01],
      ],
      2,
    ],
    [
      "acid with carbonate",
      "acid-carbonate",
      [
        ["citric-acid-monohydrate", 0.1],
        ["sodium-carbonate", 0.1],
      ],
      4,
    ],
    [
      "acid with carbonate scale",
      "acid-carbonate",
      [
        ["phosphoric-acid-75", 0.5],
        ["calcium-carbonate", 0.1],
      ],
      2,
    ],
    [
      "ammonia with hypochlorite",
      "hypochlorite-ammonia",
      [
        ["ammonia-25", 0.1],
        ["sodium-hypochlorite-12", 0.01],
      ],
      11,
    ],
    [
      "an ammonium salt with hypochlorite",
      "hypochlorite-ammonia",
      [
        ["ammonium-chloride", 0.1],
        ["sodium-hypochlorite-12", 0.01],
      ],
      8,
    ],
    [
      "an amine with hypochlorite",
      "hypochlorite-ammonia",
      [
        ["triethanolamine", 0.001],
        ["sodium-hypochlorite-12", 0.01],
      ],
      10,
    ],
    [
      "base with ammonium",
      "ammonium-strong-base",
      [
        ["sodium-hydroxide", 0.1],
        ["ammonium-sulfate", 0.05],
      ],
      9.9,
    ],
    [
      "ammonium in an alkaline mixture",
      "ammonium-strong-base",
      [
        ["ammonium-chloride", 0.1],
        ["trisodium-phosphate", 0.2],
      ],
      10.4,
    ],
    [
      "nitric acid with organic matter",
      "nitric-organic",
      [
        ["nitric-acid-65", 2.5],
        ["citric-acid", 0.1],
      ],
      0,
    ],
    [
      "concentrated nitric acid poured with organic matter",
      "nitric-organic",
      [
        ["nitric-acid-69", 0.1, "volume"],
        ["citric-acid", 0.1, "mass"],
      ],
      1,
    ],
    [
      "perchloric acid with organic matter",
      "perchloric-organic",
      [
        ["perchloric-acid-70", 0.1],
        ["acetic-acid-glacial", 1],
      ],
      1,
    ],
    [
      "dichromate in strong acid with organic matter",
      "dichromate-organic",
      [
        ["potassium-dichromate", 0.1],
        ["sulfuric-acid-96", 1],
        ["oxalic-acid", 0.1],
      ],
      0,
    ],
    [
      "strong peroxide with an organic acid",
      "peroxide-organic",
      [
        ["hydrogen-peroxide-30", 4],
        ["acetic-acid-glacial", 2],
      ],
      2,
    ],
    ["concentrated sulfuric acid into water", "sulfuric-water-heat", [["sulfuric-acid-96", 0.5, "volume"]], 0.5],
    ["concentrated phosphoric acid into water", "sulfuric-water-heat", [["phosphoric-acid-85", 0.0867, "mass"]], 1.6],
    ["alkali pellets, more than a mole a litre", "base-water-heat", [["sodium-hydroxide", 1.5, "mass"]], 14],
    [
      "strong acid with strong base",
      "strong-acid-strong-base-heat",
      [
        ["hydrochloric-acid-37", 1.2],
        ["sodium-hydroxide-50", 1],
      ],
      1,
    ],
    [
      "fluoride in acid",
      "fluoride-acid",
      [
        ["sodium-fluoride", 0.01],
        ["hydrochloric-acid-37", 0.1],
      ],
      1,
    ],
    [
      "two cleaners one after the other",
      "sulfamic-hypochlorite",
      [
        ["sulfamic-acid", 0.1],
        ["sodium-hypochlorite-12", 0.01],
      ],
      2,
    ],
    [
      "silver in ammonia",
      "silver-ammonia",
      [
        ["silver-nitrate", 0.01],
        ["ammonia-25", 0.5],
      ],
      11,
    ],
    [
      "a bare form of the library",
      "acid-cyanide",
      [
        ["form:hydrogen-cyanide:0", 0.001],
        ["form:acetic-acid:0", 0.1],
      ],
      3,
    ],
  ])("for %s: %s", async (_, id, lines, pH) => {
    expect(await cautionIds(lines, pH)).toContain(id);
  });

  it("even when nothing could be solved: an amount that is not known counts as enough", async () => {
    expect(
      await cautionIds(
        [
          ["hydrochloric-acid-37", null, "volume"],
          ["sodium-hypochlorite-12", null, "volume"],
        ],
        null,
      ),
    ).toContain("acid-hypochlorite");
    expect(await cautionIds([["sodium-hydroxide", null, "mass"]], null)).toContain("base-water-heat");
  });

  it("with severity, sentence, source and whether it is from memory; dangers first", async () => {
    const library = await slice(
      store.db,
      ["reagent:sulfuric-acid-96", "reagent:sodium-cyanide", "reagent:sodium-carbonate"],
      [],
    );
    const rows = Object.keys(library.compounds).map((compound) => ({
      compound,
      concentration: 0.2,
      statedAs: "mass" as const,
    }));
    const cautions = await cautionsFor(store.db, library, rows, { pH: 2 });
    expect(cautions.map((caution) => caution.severity)).toEqual(["danger", "caution", "caution"]);
    expect(cautions[0]).toEqual({
      id: "acid-cyanide",
      severity: "danger",
      text: expect.stringMatching(/hydrogen cyanide gas/),
      source: expect.stringMatching(/Bretherick/),
      fromMemory: true,
    });
  });
});

describe("no caution stands", () => {
  it.each<[what: string, lines: Line[], pH: number | null]>([
    ["for an empty block", [], null],
    ["for table salt in water", [["sodium-chloride", 0.1, "mass"]], 7],
    [
      "for a citrate buffer",
      [
        ["citric-acid", 0.05, "mass"],
        ["trisodium-citrate-dihydrate", 0.05, "mass"],
      ],
      4.7,
    ],
    ["for dilute alkali", [["sodium-hydroxide", 0.1, "mass"]], 13],
    [
      "for a trace of carbonate in acid, below the floor of the rule",
      [
        ["citric-acid", 0.1],
        ["sodium-carbonate", 0.001],
      ],
      2.3,
    ],
    [
      "for dilute nitric acid stated by concentration beside citric acid",
      [
        ["nitric-acid-65", 0.1],
        ["citric-acid", 0.05],
      ],
      1,
    ],
    [
      "for cyanide kept above pH 11",
      [
        ["sodium-cyanide", 0.01],
        ["sodium-hydroxide", 0.1],
      ],
      12.9,
    ],
    [
      "for hypochlorite in its own alkali",
      [
        ["sodium-hypochlorite-12", 0.1],
        ["sodium-hydroxide", 0.01],
      ],
      12,
    ],
    ["for a compound that the library lacks", [["nothing", 1]], 7],
  ])("%s", async (_, lines, pH) => {
    expect(await cautionIds(lines, pH)).toEqual([]);
  });
});

describe("the rules", () => {
  it("are read whole: every selector is of a known kind, every class exists", async () => {
    expect(rules.rules.length).toBe(47);
    const library = await slice(store.db, ["reagent:sodium-chloride"], []);
    const salt = [{ compound: "reagent:sodium-chloride", concentration: 0.1, statedAs: "mass" as const }];
    expect(findCautions(rules, library, salt, 7)).toEqual([]);
    expect(() => findCautions({ ...rules, classes: {} }, library, salt, 7)).toThrow(/class/);
  });

  it("know no materials yet, so that rules about metals wait for the page to name one", () => {
    const named = rules.rules.filter((rule) =>
      rule.all.some((side) => side.anyOf.some((selector) => selector.material)),
    );
    expect(named.map((rule) => rule.id).sort()).toEqual(["acid-metal", "alkali-aluminium"]);
  });
});

describe("the lines of a block as it stands on the page", () => {
  it("have concentrations where they were typed, and are unknown else", () => {
    const row = { id: "a", constants: "", massFraction: "", density: "", lot: "" };
    expect(
      mixtureOfBlock({
        rows: [
          { ...row, compound: "reagent:sodium-chloride", amount: "20", unit: "mmol/L" },
          { ...row, compound: "reagent:sodium-chloride", amount: "x", unit: "mol/L" },
          { ...row, compound: "reagent:sodium-chloride", amount: "5", unit: "mL" },
          { ...row, compound: "reagent:sodium-chloride", amount: "5", unit: "kg" },
          { ...row, compound: "", amount: "5", unit: "g" },
        ],
      }).map((each) => [each.concentration, each.statedAs]),
    ).toEqual([
      [0.02, "concentration"],
      [null, "concentration"],
      [null, "volume"],
      [null, "mass"],
    ]);
  });
});
