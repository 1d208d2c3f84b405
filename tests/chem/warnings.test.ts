import { describe, expect, it } from "vitest";
import type { BlockInput, ConstantInput, Warning, WarningCode } from "../../chem/index.ts";
import { solveBlock, WARNING_CODES } from "../../chem/index.ts";
import { block, molar, row } from "./library.ts";

const checked = { fromMemory: false, disputed: null, nominal: false } as const;

function warnings(input: BlockInput): Warning[] {
  const outcome = solveBlock(input);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.refusals));
  return outcome.warnings;
}

/** The block with every constant changed. */
function with_(input: BlockInput, change: Partial<ConstantInput>): BlockInput {
  return {
    ...input,
    families: input.families.map((family) => ({
      ...family,
      constants: family.constants.map((constant) => ({ ...constant, ...checked, ...change })),
    })),
  };
}

const buffer = with_(
  block([row("a", "acetic-acid-glacial", molar("0.05")), row("b", "sodium-acetate", molar("0.05"))]),
  {},
);
const hydrochloric = (value: string, activity: "ideal" | "davies" = "davies") =>
  block([row("a", "hydrochloric-acid-37", molar(value))], activity);
const soda = (value: string) => block([row("a", "sodium-hydroxide", molar(value))]);

const TABLE: [WarningCode, string, BlockInput, RegExp][] = [
  [
    "activity.outside-range",
    "Davies above 0.5 mol/L",
    block([row("a", "sodium-chloride", molar("0.6"))]),
    /ionic strength is 0\.6 mol\/L.*at most 0\.5/,
  ],
  [
    "activity.ideal-ionic",
    "the ideal model with salt",
    block([row("a", "sodium-chloride", molar("0.1"))], "ideal"),
    /0\.1 mol\/L/,
  ],
  [
    "constants.other-temperature",
    "a constant at 20 °C",
    with_(buffer, { temperatureC: "20" }),
    /pKa 1 of acetic acid \(20 °C\)/,
  ],
  [
    "constants.conditional-basis",
    "a conditional constant",
    with_(buffer, { basis: "conditional", ionicStrength: "0.1" }),
    /acetic acid \(I = 0\.1 mol\/L\)/,
  ],
  [
    "constants.disputed",
    "a disputed constant",
    with_(buffer, { disputed: "4.5 and 5.0 are in use." }),
    /4\.5 and 5\.0 are in use/,
  ],
  ["constants.from-memory", "a constant from memory", with_(buffer, { fromMemory: true }), /acetic acid/],
  [
    "constants.nominal",
    "a placeholder constant",
    block([row("a", "sulfuric-acid-96", molar("0.01"))]),
    /pKa 1 of sulfuric acid/,
  ],
  ["pH.below-zero", "2 mol/L strong acid", hydrochloric("2"), /no end at 0 or 14/],
  ["pH.above-fourteen", "2 mol/L strong base", soda("2"), /no end at 0 or 14/],
  [
    "capacity.low",
    "pure salt water",
    block([row("a", "sodium-chloride", molar("0.01"))]),
    /capacity is 5\.\d+e-7 mol\/L.*moves the pH/,
  ],
  [
    "carbon-dioxide",
    "an alkaline solution",
    block([row("a", "disodium-hydrogen-phosphate", molar("0.05"))]),
    /takes up carbon dioxide/,
  ],
  ["corrosive", "0.1 mol/L strong acid", hydrochloric("0.1"), /2 or less/],
  ["left-out", "calcium", block([row("a", "calcium-chloride", molar("0.01"))]), /calcium/],
  ["measured.differs", "a reading half a unit off", { ...buffer, measuredPH: "5.15" }, /5\.15 lies 0\.\d\d above/],
];

describe("a result carries a warning", () => {
  it.each(TABLE)("%s for %s (CAL-08)", (code, _, input, text) => {
    const found = warnings(input).find((warning) => warning.code === code);
    expect(found?.text).toMatch(text);
    expect(found?.title).toMatch(/^\S.{5,}/);
    expect(found?.remedy).toMatch(/^\S.{5,}[.]$/);
  });

  it("for each code there is", () => {
    expect(TABLE.map(([code]) => code).sort()).toEqual([...WARNING_CODES].sort());
  });

  it("and none at all for a checked acetate buffer", () => {
    expect(warnings(buffer)).toEqual([]);
  });

  it("that cannot be overlooked when the activity model does not reach so far", () => {
    const [first] = warnings(block([row("a", "sodium-chloride", molar("2"))]));
    expect(first).toMatchObject({ code: "activity.outside-range", severity: "danger" });
    expect(first?.title).toBe(first?.title.toUpperCase());
  });

  it("the gravest first", () => {
    const order = warnings(
      block([row("a", "calcium-hydroxide", molar("0.5")), row("b", "sodium-sulfate", molar("0.5"))]),
    ).map((one) => one.severity);
    expect(order).toEqual(
      [...order].sort((a, b) => ["danger", "caution", "info"].indexOf(a) - ["danger", "caution", "info"].indexOf(b)),
    );
    expect(new Set(order).size).toBeGreaterThan(1);
  });

  it("of corrosion at pH 2 and at pH 11.5, and not between (SAF-07)", () => {
    const corrosive = (input: BlockInput) => warnings(input).some((warning) => warning.code === "corrosive");
    expect(corrosive(hydrochloric("0.011", "ideal"))).toBe(true);
    expect(corrosive(hydrochloric("0.009", "ideal"))).toBe(false);
    expect(corrosive(block([row("a", "sodium-hydroxide", molar("0.004"))], "ideal"))).toBe(true);
    expect(corrosive(block([row("a", "sodium-hydroxide", molar("0.002"))], "ideal"))).toBe(false);
  });

  it("of ideal constants used as they stand, in other words than of converted ones", () => {
    const conditional = with_(buffer, { basis: "conditional", ionicStrength: "0.1" });
    const ideal = { ...conditional, conditions: { ...conditional.conditions, activity: "ideal" as const } };
    const found = (input: BlockInput) => warnings(input).find((one) => one.code === "constants.conditional-basis");
    expect(found(conditional)?.text).toContain("converted to zero");
    expect(found(ideal)?.text).toContain("as they stand");
  });
});

describe("a conditional constant with Davies", () => {
  it("comes back to itself at the ionic strength at which it was measured, and is never corrected twice", () => {
    // The constant is said to be measured at the I of the first solution; the second one's I differs in the sixth digit.
    const outcome = solveBlock(buffer);
    if (!outcome.ok) throw new Error("refused");
    const I = outcome.value.ionicStrength.toPrecision(16);
    const measured = solveBlock(with_(buffer, { basis: "conditional", ionicStrength: I, pKa: "4.60" }));
    if (!measured.ok) throw new Error("refused");
    expect(measured.value.constants[0]?.conditional).toBeCloseTo(4.6, 5);
  });

  it("of an ammonium ion does not shift: acid and hydrogen ion carry the same charge", () => {
    const input = block([row("a", "ammonium-chloride", molar("0.1"))]);
    const pH = (basis: "conditional" | "thermodynamic") => {
      const outcome = solveBlock(with_(input, { basis, ionicStrength: basis === "conditional" ? "0.1" : null }));
      return outcome.ok ? outcome.value.constants[0]?.conditional : undefined;
    };
    expect(pH("conditional")).toBeCloseTo((pH("thermodynamic") ?? 0) - 0.0013, 10);
  });
});
