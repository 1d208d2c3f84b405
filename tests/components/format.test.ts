import { describe, expect, it } from "vitest";
import {
  atPoint,
  type DecimalSign,
  daysSince,
  fixed,
  formatBytes,
  formatConcentration,
  formatCount,
  formatDate,
  formatDateTime,
  formatNumber,
  formatPh,
  formatTime,
  groupsOfFour,
  isTimeZone,
  numberParts,
  readTyped,
  relativeDay,
  scientificParts,
  showDecimal,
  significant,
} from "../../components/format.ts";

type Expected = { ok: string; foreign?: boolean } | { ask: string[] } | { refused: RegExp };

const point: [string, Expected][] = [
  ["0.100", { ok: "0.100" }],
  ["1.000", { ok: "1.000" }],
  ["1,000", { ask: ["1.000", "1000"] }],
  ["0,100", { ok: "0.100", foreign: true }],
  ["12,5", { ok: "12.5", foreign: true }],
  ["12,345", { ask: ["12.345", "12345"] }],
  ["-1,000", { ask: ["-1.000", "-1000"] }],
  ["1,000e-3", { ask: ["1.000e-3", "1000e-3"] }],
  ["1234,567", { ok: "1234.567", foreign: true }],
  ["1,234.5", { ok: "1234.5" }],
  ["1,234,567", { ok: "1234567" }],
  ["1.234,5", { ask: ["1234.5"] }],
  ["1.234.567", { ask: ["1234567"] }],
  ["1 000", { ok: "1000" }],
  ["1 000.50", { ok: "1000.50" }],
  ["0.123 456", { ok: "0.123456" }],
  [" 5 ", { ok: "5" }],
  [".5", { ok: "0.5" }],
  ["5.", { ok: "5" }],
  ["+2.50", { ok: "2.50" }],
  ["\u22122.50", { ok: "-2.50" }],
  ["1.50e-4", { ok: "1.50e-4" }],
  ["1.50E-04", { ok: "1.50e-4" }],
  ["1.50 \u00d7 10^\u22124", { ok: "1.50e-4" }],
  ["007", { ok: "007" }],
  ["", { refused: /Write a number/ }],
  ["four", { refused: /“four” is not a number.*0\.100/ }],
  ["4 g", { refused: /not a number/ }],
  ["1 00", { refused: /not a number/ }],
  ["1,00,0", { refused: /not a number/ }],
  ["1.2.3", { refused: /not a number/ }],
  [".", { refused: /not a number/ }],
  ["-", { refused: /not a number/ }],
  ["1e400", { refused: /too large/ }],
  ["1e-400", { refused: /too small/ }],
  ["Infinity", { refused: /not a number/ }],
  ["0x10", { refused: /not a number/ }],
  ["<b>1</b>", { refused: /not a number/ }],
  ["1".repeat(61), { refused: /longer than 60/ }],
];

const comma: [string, Expected][] = [
  ["0,100", { ok: "0.100" }],
  ["1,000", { ok: "1.000" }],
  ["1.000", { ask: ["1.000", "1000"] }],
  ["0.100", { ok: "0.100", foreign: true }],
  ["1.234,5", { ok: "1234.5" }],
  ["1,234.5", { ask: ["1234.5"] }],
  ["1.234.567", { ok: "1234567" }],
  ["1 000,50", { ok: "1000.50" }],
  ["vier", { refused: /“vier” is not a number.*0,100/ }],
];

function outcome(text: string, sign: DecimalSign): Expected | { refused: string } {
  const typed = readTyped(text, sign);
  if (typed.ok) return typed.foreign ? { ok: typed.decimal, foreign: true } : { ok: typed.decimal };
  return typed.ambiguous ? { ask: typed.readings } : { refused: typed.error };
}

describe("readTyped", () => {
  for (const [sign, table] of [
    [".", point],
    [",", comma],
  ] as const) {
    it.each(table)(`reads “%s” by a person whose decimal sign is “${sign}” (CAL-01, CAL-02)`, (text, expected) => {
      const found = outcome(text, sign);
      if ("refused" in expected) expect(found).toEqual({ refused: expect.stringMatching(expected.refused) });
      else expect(found).toEqual(expected);
    });
  }

  it("never takes one of two readings a thousandfold apart by itself (CAL-02)", () => {
    for (const sign of [".", ","] as const) {
      for (const other of [".", ","] as const) {
        for (const whole of ["1", "12", "123", "999"]) {
          const typed = readTyped(`${whole}${other}250`, sign);
          if (sign === other) expect(typed).toEqual({ ok: true, decimal: `${whole}.250`, foreign: false });
          else expect(typed).toEqual({ ok: false, ambiguous: true, readings: [`${whole}.250`, `${whole}250`] });
        }
      }
    }
  });

  it("reads back what it shows, digit for digit (CAL-01)", () => {
    for (const decimal of ["0.100", "4.2114", "500.0", "-2.50", "1000", "0.0000", "1.50e-4"]) {
      for (const sign of [".", ","] as const) {
        const shown = showDecimal(decimal, sign);
        const typed = readTyped(decimal.includes("e") ? decimal.replace(".", sign) : shown, sign);
        expect(typed).toEqual({ ok: true, decimal, foreign: false });
      }
    }
  });
});

describe("numbers as they are shown", () => {
  it.each([
    [3.1137, 2, "3.11"],
    [3.113791, 4, "3.1138"],
    [-0.304, 2, "\u22120.30"],
    [14.37, 2, "14.37"],
    [-0.001, 2, "0.00"],
    [7, 2, "7.00"],
    [Number.NaN, 2, "not a number"],
  ])("shows pH %d to %i decimals as %s and never clips it", (pH, decimals, shown) => {
    expect(formatPh(pH, decimals)).toBe(shown);
  });

  it("takes the person's decimal sign", () => {
    expect(formatPh(3.1137, 2, ",")).toBe("3,11");
    expect(fixed(-1.5, 1, ",")).toBe("\u22121,5");
    expect(showDecimal("-1.5e-4", ",")).toBe("\u22121,5 × 10⁻⁴");
  });

  it.each([
    [0.04, 4, "0.04000"],
    [0.99996, 3, "1.00"],
    [1234.5, 2, "1200"],
    [9.995, 3, "9.99"],
    [0, 3, "0.00"],
    [-12.345, 4, "\u221212.35"],
    [123456, 6, "123456"],
  ])("shows %d to %i significant figures as %s", (value, figures, shown) => {
    expect(significant(value, figures)).toBe(shown);
  });

  it("parts mantissa and power of ten", () => {
    expect(scientificParts(9.0895e-4, 5)).toEqual({ mantissa: "9.0895", exponent: -4 });
    expect(scientificParts(-1.5528e-11, 5)).toEqual({ mantissa: "\u22121.5528", exponent: -11 });
    expect(scientificParts(0, 3)).toEqual({ mantissa: "0.00", exponent: 0 });
  });

  it("writes a power of ten only outside 0.001 to 99 999", () => {
    expect(numberParts(0.001234, 3)).toEqual({ text: "0.00123" });
    expect(numberParts(0.0009999, 3)).toEqual({ text: "0.00100" });
    expect(numberParts(0.0001234, 3)).toEqual({ text: "1.23", exponent: -4, raised: "\u22124" });
    expect(formatNumber(3.3e-10, 2)).toBe("3.3 × 10⁻¹⁰");
    expect(formatNumber(99999, 5)).toBe("99999");
    expect(formatNumber(123456, 3)).toBe("1.23 × 10⁵");
  });

  it.each([
    [0.5, "0.500", "mol/L"],
    [0.032, "32.0", "mmol/L"],
    [0.00011, "0.110", "mmol/L"],
    [4.2e-6, "4.20", "µmol/L"],
    [3e-8, "30.0", "nmol/L"],
    [1.5528e-11, "1.55 × 10⁻¹¹", "mol/L"],
    [0, "0", "mol/L"],
  ])("shows %d mol/L as %s %s", (value, text, unit) => {
    expect(formatConcentration(value)).toEqual({ text, unit });
  });

  it("finds the point on which a column stands", () => {
    expect(atPoint("\u221212.50")).toEqual({ whole: "\u221212", rest: ".50" });
    expect(atPoint("500")).toEqual({ whole: "500", rest: "" });
    expect(atPoint("9,09 × 10⁻⁴", ",")).toEqual({ whole: "9", rest: ",09 × 10⁻⁴" });
    expect(atPoint("3 × 10⁻⁴")).toEqual({ whole: "3", rest: " × 10⁻⁴" });
  });

  it.each([
    [0, "0 bytes"],
    [1, "1 byte"],
    [412, "412 bytes"],
    [3174, "3.1 KiB"],
    [32 * 1024 * 1024, "32 MiB"],
    [2.1 * 1024 ** 3, "2.1 GiB"],
  ])("shows %d bytes as %s", (bytes, shown) => {
    expect(formatBytes(bytes)).toBe(shown);
  });

  it("groups counts from five digits on, and hashes in fours", () => {
    expect(formatCount(4321)).toBe("4321");
    expect(formatCount(200000)).toBe("200\u202f000");
    expect(groupsOfFour("02F15288900a")).toEqual(["02f1", "5288", "900a"]);
  });
});

describe("dates and times", () => {
  const at = "2026-12-01T09:31:07Z";

  it("always names the zone", () => {
    expect(formatDateTime(at)).toBe("1 December 2026, 09:31 UTC");
    expect(formatDateTime(at, "UTC", { seconds: true })).toBe("1 December 2026, 09:31:07 UTC");
    expect(formatDateTime(at, "Europe/Berlin")).toBe("1 December 2026, 10:31 Europe/Berlin (UTC+1)");
    expect(formatDateTime("2026-07-01T23:30:00Z", "Europe/Berlin")).toBe("2 July 2026, 01:30 Europe/Berlin (UTC+2)");
    expect(formatDateTime(at, "Asia/Kolkata")).toBe("1 December 2026, 15:01 Asia/Kolkata (UTC+5:30)");
    expect(formatDateTime(at, "America/New_York")).toBe("1 December 2026, 04:31 America/New_York (UTC\u22125)");
    expect(formatTime(at)).toBe("09:31 UTC");
    expect(formatTime(at, "Europe/Berlin")).toBe("10:31 UTC+1");
    expect(formatDateTime("2026-12-01T00:05:00Z")).toBe("1 December 2026, 00:05 UTC");
  });

  it("keeps a date without a time the same day in every zone", () => {
    expect(formatDate("2026-11-30", "Pacific/Auckland")).toBe("30 November 2026");
    expect(formatDate("2026-11-30", "America/Los_Angeles", { weekday: true })).toBe("Monday 30 November 2026");
    expect(formatDate("2026-11-30T23:30:00Z", "Europe/Berlin")).toBe("1 December 2026");
  });

  it.each([
    ["2026-12-01T00:10:00Z", "today"],
    ["2026-11-30T23:50:00Z", "yesterday"],
    ["2026-11-28T12:00:00Z", "3 days ago"],
    ["2026-12-02T01:00:00Z", "tomorrow"],
    ["2026-12-05", "in 4 days"],
  ])("calls %s “%s” on 1 December 2026", (when, words) => {
    expect(relativeDay(when, at)).toBe(words);
  });

  it("counts calendar days, over a change of the clock too", () => {
    expect(daysSince("2026-03-28T12:00:00Z", "2026-03-30T12:00:00Z", "Europe/Berlin")).toBe(2);
    expect(daysSince("2026-10-24T22:30:00Z", "2026-10-26T22:30:00Z", "Europe/Berlin")).toBe(1);
  });

  it("refuses what is no time, and knows a time zone from a word", () => {
    expect(() => formatDateTime("soon")).toThrow(RangeError);
    expect(isTimeZone("Europe/Berlin")).toBe(true);
    expect(isTimeZone("Middle/Earth")).toBe(false);
  });
});
