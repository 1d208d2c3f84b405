import { describe, expect, it } from "vitest";
import {
  fromText as dd,
  ddAdd,
  ddDivide,
  ddExp,
  ddMultiply,
  ddNegate,
  ddPowerOfTen,
  ddSqrt,
} from "../../chem/double-double.ts";
import { checkCharge, mixtureFromText, solve } from "../../chem/index.ts";

describe("the second opinion", () => {
  const read = mixtureFromText({
    families: [{ name: "phosphoric acid", z0: 0, pKa: ["2.148", "7.198", "12.375"] }],
    components: [{ family: "phosphoric acid", lost: 2, concentration: "0.05" }],
    ions: [{ name: "Na+", z: 1, concentration: "0.1" }],
    activity: "davies",
    A: "0.509",
    pKw: "14.00",
  });
  if (!read.ok) throw new Error(read.reason);
  const { mixture } = read;
  const solution = solve(mixture);
  if (!solution.ok) throw new Error(solution.reason);
  const { root } = solution;

  it("agrees with the root that the proton condition gave", () => {
    const opinion = checkCharge(mixture, root);
    expect(opinion.agrees).toBe(true);
    expect(Math.abs(opinion.imbalance)).toBeLessThan(opinion.bound / 100);
  });

  it.each([1e-9, -1e-9])("contradicts a root that is off by %d in pH", (shift) => {
    expect(checkCharge(mixture, { ...root, pH: root.pH + shift }).agrees).toBe(false);
  });

  it("contradicts an ionic strength that is off by a millionth", () => {
    expect(checkCharge(mixture, { ...root, ionicStrength: root.ionicStrength * (1 + 1e-6) }).agrees).toBe(false);
  });

  it("contradicts a composition that is not the one that was solved", () => {
    const other = { ...mixture, ions: [{ z: 1, concentration: { numerator: 1000001n, denominator: 10000000n } }] };
    expect(checkCharge(other, root).agrees).toBe(false);
  });
});

describe("double-double arithmetic", () => {
  const far = (a: { hi: number; lo: number }, text: string) => {
    const rest = ddAdd(a, ddNegate(dd(text)));
    return Math.abs((rest.hi + rest.lo) / dd(text).hi);
  };

  // Constants to 40 digits: mathematical constants, M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions, table 1.1.
  it("knows e, √2 and 1/3 to 29 digits", () => {
    expect(far(ddExp(dd("1")), "2.718281828459045235360287471352662497757")).toBeLessThan(1e-29);
    expect(far(ddSqrt(dd("2")), "1.414213562373095048801688724209698078570")).toBeLessThan(1e-29);
    expect(far(ddDivide(dd("1"), dd("3")), "0.333333333333333333333333333333333333333")).toBeLessThan(1e-30);
  });

  it("gets powers of ten right from 1e-30 to 1e30", () => {
    for (let n = -30; n <= 30; n++) expect(far(ddPowerOfTen(dd(String(n))), `1e${n}`)).toBeLessThan(1e-27);
  });

  it("multiplies √10 by itself to 10", () => {
    const root = ddPowerOfTen(dd("0.5"));
    expect(far(ddMultiply(root, root), "10")).toBeLessThan(1e-29);
  });
});
