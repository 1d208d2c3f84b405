import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { add, compare, divide, multiply, parseDecimal, subtract, toNumber, toTwoDoubles } from "../../chem/decimal.ts";

const exact = (text: string) => {
  const parsed = parseDecimal(text);
  if (parsed === null) throw new Error(`${text} was not read`);
  return parsed.exact;
};

describe("reading decimals", () => {
  it.each(["0.100", "100", "-3", "1e-7", "1E+3", ".5", "5.", " 0.1 ", "0.0002354683306666666666666666666666666666667"])(
    "reads %s (CAL-01)",
    (text) => {
      expect(parseDecimal(text)?.number).toBe(Number(text));
    },
  );

  it.each([
    "",
    " ",
    "0,1",
    "1.000,5",
    "1 000",
    "abc",
    "1e",
    "e5",
    ".",
    "0x10",
    "Infinity",
    "NaN",
    "--1",
    "1e99999",
    "٣",
    "1".repeat(200),
  ])("does not read “%s” (CAL-02)", (text) => {
    expect(parseDecimal(text)).toBeNull();
  });

  it("keeps every digit: thirty zeros and a one do not vanish beside a one", () => {
    const difference = subtract(exact("1.000000000000000000000000000001"), exact("1"));
    expect(compare(difference, exact("1e-30"))).toBe(0);
  });

  it("says that 0.1 and 0.100 are the same amount, and 0.3 exactly the sum of 0.1 and 0.2", () => {
    expect(compare(exact("0.1"), exact("0.100"))).toBe(0);
    expect(compare(add(exact("0.1"), exact("0.2")), exact("0.3"))).toBe(0);
  });

  it("gives the nearest double for any decimal of up to 17 digits", () => {
    fc.assert(
      fc.property(
        fc.bigInt({ min: -(10n ** 17n), max: 10n ** 17n }),
        fc.integer({ min: -250, max: 250 }),
        (digits, power) => {
          const text = `${digits}e${power}`;
          expect(toNumber(exact(text))).toBe(Number(text));
        },
      ),
      { seed: 41, numRuns: 2000 },
    );
  });

  it("splits a value into two doubles that leave less than 1e-31 of it over", () => {
    fc.assert(
      fc.property(
        fc.bigInt({ min: 1n, max: 10n ** 40n }),
        fc.bigInt({ min: 1n, max: 10n ** 20n }),
        (numerator, denominator) => {
          const value = { numerator, denominator };
          const { hi, lo } = toTwoDoubles(value);
          const rest = subtract(subtract(value, exactOf(hi)), exactOf(lo));
          expect(Math.abs(toNumber(divide(rest, value)))).toBeLessThan(1e-31);
        },
      ),
      { seed: 42, numRuns: 500 },
    );
  });

  it("refuses to divide by zero", () => {
    expect(() => divide(exact("1"), exact("0"))).toThrow(RangeError);
  });
});

/** A double's exact value. */
function exactOf(x: number) {
  let [value, shift] = [x, 0];
  while (!Number.isInteger(value)) {
    value *= 2;
    shift += 1;
  }
  return multiply({ numerator: BigInt(value), denominator: 1n }, { numerator: 1n, denominator: 2n ** BigInt(shift) });
}
