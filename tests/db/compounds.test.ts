import { afterAll, beforeAll, describe, expect, it } from "vitest";
import {
  compoundItems,
  expandedIds,
  expansion,
  hazardsOf,
  namesOf,
  parseCompoundId,
  searchCompounds,
  slice,
} from "../../db/compounds.ts";
import { comparedFormula, hill, looseFormulas, parseFormula } from "../../db/formula.ts";
import { comparedName } from "../../db/names.ts";
import { seededRandom } from "../support/corpus.ts";
import { libraryDatabase, type TestDatabase } from "../support/database.ts";
import { allNames } from "../support/library.ts";

let store: TestDatabase;
beforeAll(async () => {
  store = await libraryDatabase();
});
afterAll(() => store.close());

const found = async (text: string, limit = 8) =>
  (await searchCompounds(store.db, text, limit)).items.map((item) => item.id);

describe("a formula", () => {
  it.each([
    ["Na3C6H5O7", "C6H5Na3O7"],
    ["C6H5O7Na3", "C6H5Na3O7"],
    ["C6H5Na3O7·2H2O", "C6H5Na3O7.2H2O"],
    ["Na3C6H5O7 . 2 H2O", "C6H5Na3O7.2H2O"],
    ["Na₃C₆H₅O₇ • 2 H₂O", "C6H5Na3O7.2H2O"],
    ["(NH4)2HPO4", "H9N2O4P"],
    ["CaSO4·½H2O", "CaO4S.0.5H2O"],
    ["CaSO4.0.5H2O", "CaO4S.0.5H2O"],
    ["Na2C6H6O7·1½H2O", "C6H6Na2O7.1.5H2O"],
    ["2Na2CO3·3H2O2", "C2H6Na4O12"],
    ["K4[Fe(CN)6]·3H2O", "C6FeK4N6.3H2O"],
    ["PO4^3-", "O4P"],
    ["HCl", "ClH"],
  ])("%s is compared as %s", (typed, compared) => {
    const formula = parseFormula(typed);
    expect(formula && comparedFormula(formula)).toBe(compared);
  });

  it.each(["", "Xx2", "citric acid", "Na3(C6", "H2O)", "--", "12", "(((((H)))))"])("%j is none", (typed) => {
    expect(parseFormula(typed)).toBeNull();
  });

  it("without capitals is read in each way that it can be meant", () => {
    expect(looseFormulas("na2co3").map((each) => hill(each.atoms))).toContain("CNa2O3");
    expect(looseFormulas("na2co3").map((each) => hill(each.atoms))).toContain("Co3Na2");
    expect(looseFormulas("a".repeat(50))).toEqual([]);
  });
});

describe("a name", () => {
  it.each([
    ["Monosodium phosphate, 2-hydrate", "monosodium phosphate dihydrate"],
    ["disodium hydrogen citrate 1.5-hydrate", "disodium hydrogen citrate sesquihydrate"],
    ["Sulphuric Acid", "sulfuric acid"],
    ["aluminum chloride", "aluminium chloride"],
    ["β-Alanine", "beta alanine"],
    ["Sørensen’s  phosphate", "s rensen s phosphate"],
    ["hydrogen citrate(2-)", "hydrogen citrate"],
  ])("%s is compared as %s", (typed, compared) => {
    expect(comparedName(typed)).toBe(compared);
  });
});

describe("searching compounds", () => {
  it("puts the exact name first, then what begins with it", async () => {
    const ids = await found("phosphoric acid");
    expect(ids.slice(0, 2)).toEqual(["family:phosphoric-acid", "form:phosphoric-acid:0"]);
    expect(ids.slice(2, 4).sort()).toEqual(["reagent:phosphoric-acid-75", "reagent:phosphoric-acid-85"]);
  });

  it.each([
    ["trisodium citrate", "reagent:trisodium-citrate-dihydrate"],
    ["caustic soda", "reagent:sodium-hydroxide"],
    ["Na3C6H5O7", "reagent:trisodium-citrate"],
    ["C6H5Na3O7·2H2O", "reagent:trisodium-citrate-dihydrate"],
    ["C6H9Na3O9", "reagent:trisodium-citrate-dihydrate"],
    ["na2co3", "reagent:sodium-carbonate"],
    ["7664-38-2", "reagent:phosphoric-acid-85"],
    ["7664382", "reagent:phosphoric-acid-85"],
    ["7664-38", "reagent:phosphoric-acid-85"],
    ["dihydrogen phosphate", "form:phosphoric-acid:1"],
    ["NaH2PO4.2H2O", "reagent:sodium-dihydrogen-phosphate-dihydrate"],
    ["monosodium phosphate 2-hydrate", "reagent:sodium-dihydrogen-phosphate-dihydrate"],
    ["sulphuric acid, 96", "reagent:sulfuric-acid-96"],
  ])("finds %s", async (text, id) => {
    expect(await found(text, 4)).toContain(id);
  });

  it.each([
    ["citrc acid", "reagent:citric-acid"],
    ["sodiumcitrate", "reagent:trisodium-citrate-dihydrate"],
    ["phosforic acid", "family:phosphoric-acid"],
    ["tri sodium phosphat", "reagent:trisodium-phosphate"],
    ["hypoclorite", "reagent:sodium-hypochlorite-12"],
    ["glacial acetic", "reagent:acetic-acid-glacial"],
  ])("forgives the typing of %s", async (text, id) => {
    expect(await found(text, 10)).toContain(id);
  });

  it("refuses a CAS RN with a wrong check digit and says which was expected (FND-08)", async () => {
    expect(await searchCompounds(store.db, " 7664-38-3 ", 5)).toEqual({
      items: [],
      casCheck: { given: "7664-38-3", expected: 2, corrected: "7664-38-2" },
    });
    expect((await searchCompounds(store.db, "7664-38-2", 5)).casCheck).toBeNull();
  });

  it.each(["", "   ", "%", "_", "'; drop table reagents; --", "\\", "日本", "x".repeat(5000), "\u0000citric"])(
    "takes %j as text and nothing else",
    async (text) => {
      expect((await searchCompounds(store.db, text, 3)).casCheck).toBeNull();
      expect((await searchCompounds(store.db, "citric acid", 3)).items.length).toBe(3);
    },
  );

  it("tells what a row of a composition needs to know", async () => {
    const [item] = await compoundItems(store.db, ["reagent:phosphoric-acid-85"]);
    expect(item).toEqual({
      id: "reagent:phosphoric-acid-85",
      kind: "reagent",
      name: "phosphoric acid, 85 %",
      formula: "H3PO4",
      cas: "7664-38-2",
      molarMass: "97.994",
      form: "aqueous solution",
      constants: ["phosphoric-acid.1.v1", "phosphoric-acid.2.v1", "phosphoric-acid.3.v1"],
      families: ["phosphoric-acid"],
      massFraction: "0.850",
      density: "1.685",
      typicalPurity: null,
      neutral: true,
      matched: "phosphoric acid, 85 %",
    });
  });

  it("writes forms with their charge, and only the uncharged one may stand by itself", async () => {
    const items = await compoundItems(store.db, [
      "form:phosphoric-acid:0",
      "form:phosphoric-acid:2",
      "form:ammonia:0",
      "family:edta",
    ]);
    expect(items.map((item) => [item.formula, item.neutral])).toEqual([
      ["H3PO4", true],
      ["HPO4^2-", false],
      ["NH4^+", false],
      ["C10H16N2O8", false],
    ]);
  });

  it("leaves out ids that nobody has", async () => {
    const ids = [
      "reagent:nothing",
      "form:citric-acid:9",
      "form:citric-acid",
      "family:x:1",
      "citric-acid",
      "reagent:../x",
      "",
    ];
    expect(await compoundItems(store.db, ids)).toEqual([]);
    expect(await namesOf(store.db, ids)).toEqual({});
    expect(ids.map(parseCompoundId).filter((id) => id !== null).length).toBe(2);
  });

  it("finds every compound by each of its names, synonyms, numbers and formulas, whatever the order of elements (FND-02)", async () => {
    const random = seededRandom(20260801);
    const names = await allNames(store.db);
    const compoundsOf = new Map<string, string[]>();
    for (const { compound, kind, shown } of names) {
      const asked = kind === "formula" ? shuffled(shown, random) : shown;
      compoundsOf.set(asked, [...(compoundsOf.get(asked) ?? []), compound]);
    }
    expect(compoundsOf.size).toBeGreaterThan(2000);
    const missing: string[] = [];
    for (const [asked, compounds] of compoundsOf) {
      const ids = await found(asked, 12);
      for (const compound of compounds) if (!ids.includes(compound)) missing.push(`${compound} by ${asked}`);
    }
    expect(missing).toEqual([]);
  }, 240_000);
});

/** The same formula with its elements in another order: C6H8O7 as O7H8C6. Written out from counts, waters kept behind. */
function shuffled(text: string, random: () => number): string {
  const formula = parseFormula(text);
  if (formula === null) throw new Error(text);
  const parts = [...formula.atoms].map(([symbol, count]) => symbol + (count === 1 ? "" : String(count)));
  for (let i = parts.length - 1; i > 0; i--) {
    const j = Math.floor(random() * (i + 1));
    const [a = "", b = ""] = [parts[i], parts[j]];
    parts[i] = b;
    parts[j] = a;
  }
  return parts.join("") + (formula.waters === 0 ? "" : `·${formula.waters}H2O`);
}

describe("the expansion of a compound (FND-01)", () => {
  it("of a salt holds the acid's forms, salts, hydrates and solutions", async () => {
    const whole = await expansion(store.db, "reagent:trisodium-citrate-dihydrate");
    expect(whole?.families).toEqual([{ id: "citric-acid", name: "citric acid" }]);
    const ids = whole?.compounds.map((each) => each.id) ?? [];
    expect(ids).toEqual(
      expect.arrayContaining([
        "reagent:citric-acid",
        "reagent:citric-acid-monohydrate",
        "form:citric-acid:3",
        "family:citric-acid",
        "reagent:triammonium-citrate",
      ]),
    );
    expect(ids.some((id) => id.includes("isocitric"))).toBe(false);
    const kinds = Object.fromEntries(whole?.compounds.map((each) => [each.id, each.kind]) ?? []);
    expect(kinds["reagent:citric-acid"]).toBe("substance");
    expect(kinds["reagent:trisodium-citrate"]).toBe("salt");
    expect(kinds["reagent:citric-acid-monohydrate"]).toBe("hydrate");
  });

  it("of phosphoric acid leaves condensed acids out and says that they are families of their own", async () => {
    const whole = await expansion(store.db, "reagent:phosphoric-acid-85");
    expect(whole?.compounds.map((each) => each.id)).not.toContain("reagent:sodium-tripolyphosphate");
    expect(whole?.separate.map((each) => each.name)).toEqual(["diphosphoric acid", "triphosphoric acid"]);
    expect(whole?.separate[0]?.note).toMatch(/family of its own: not included/);
    const condensed = await expandedIds(store.db, ["reagent:sodium-tripolyphosphate"]);
    expect(condensed).not.toContain("reagent:phosphoric-acid-85");
  });

  it("of a salt of two acids holds both", async () => {
    const ids = await expandedIds(store.db, ["reagent:ammonium-dihydrogen-phosphate"]);
    expect(ids).toEqual(expect.arrayContaining(["reagent:ammonia-25", "reagent:trisodium-phosphate"]));
  });

  it("of hydrochloric acid holds the chlorides, of sodium hydroxide its solutions", async () => {
    expect(await expandedIds(store.db, ["reagent:hydrochloric-acid-37"])).toEqual(
      expect.arrayContaining(["reagent:hydrochloric-acid-32", "reagent:sodium-chloride", "reagent:tris-hydrochloride"]),
    );
    expect((await expandedIds(store.db, ["reagent:sodium-hydroxide"])).sort()).toEqual([
      "reagent:sodium-hydroxide",
      "reagent:sodium-hydroxide-32",
      "reagent:sodium-hydroxide-50",
    ]);
  });

  it("of a form and of a family are the same", async () => {
    const [family, form] = [
      await expandedIds(store.db, ["family:citric-acid"]),
      await expandedIds(store.db, ["form:citric-acid:2"]),
    ];
    expect(form.sort()).toEqual(family.sort());
    expect(await expansion(store.db, "reagent:nothing")).toBeNull();
  });
});

describe("a slice of the library", () => {
  it("holds what the compounds give, their families with constants and sources, and water at 25 °C", async () => {
    const part = await slice(
      store.db,
      ["reagent:phosphoric-acid-85", "reagent:sodium-chloride", "form:citric-acid:1"],
      [],
    );
    expect(part.compounds["reagent:phosphoric-acid-85"]?.gives).toEqual([
      { kind: "family", family: "phosphoric-acid", lost: 0, count: 1 },
    ]);
    expect(part.compounds["reagent:sodium-chloride"]?.gives).toEqual([
      { kind: "ion", ion: "sodium", name: "sodium", z: 1, count: 1, role: "spectator" },
      { kind: "ion", ion: "chloride", name: "chloride", z: -1, count: 1, role: "spectator" },
    ]);
    expect(part.families["phosphoric-acid"]?.constants.map((each) => each.pKa)).toEqual(["2.148", "7.198", "12.375"]);
    expect(part.families["citric-acid"]?.forms.map((each) => each.name)[3]).toBe("citrate(3-)");
    for (const family of Object.values(part.families)) {
      expect(family.forms.length).toBe(family.constants.length + 1);
      for (const constant of family.constants) expect(constant.source.length).toBeGreaterThan(20);
    }
    expect(part.water.pKw.source).toMatch(/IAPWS/);
  });

  it("leaves out what the library lacks, and families by themselves", async () => {
    const part = await slice(store.db, ["reagent:nothing", "family:citric-acid", ""], ["citric-acid.1.v9"]);
    expect(part.compounds).toEqual({});
  });
});

describe("hazards (SAF-01)", () => {
  it("tell classified, not classified, and no data on file apart", async () => {
    const [alkali, salt, form] = await hazardsOf(store.db, [
      "reagent:sodium-hydroxide",
      "reagent:sodium-chloride",
      "form:citric-acid:1",
    ]);
    expect(alkali?.record).toMatchObject({
      classified: true,
      signalWord: "Danger",
      pictograms: [{ code: "GHS05", name: "Corrosion" }],
      statements: [
        { code: "H290", text: "May be corrosive to metals" },
        { code: "H314", text: "Causes severe skin burns and eye damage" },
      ],
      fromMemory: true,
    });
    expect(salt?.record).toMatchObject({
      classified: false,
      note: expect.stringMatching(/not a statement of safety/i),
    });
    expect(form?.record).toBeNull();
  });
});
