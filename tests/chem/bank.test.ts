import { writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";
import type { BankCase, Verdict } from "./bank.ts";
import { judgeCase, reportLines, runBank } from "./bank.ts";

// acid-base-cases.json: reference answers computed with 50 and more digits from the charge balance and mass balances.
// worked-examples.json: printed answers of published worked examples; each item names its text, section and address.
const fixture = (name: string) => fileURLToPath(new URL(`../fixtures/${name}`, import.meta.url));
const failures = (verdicts: Verdict[]) => verdicts.filter((one) => one.verdict === "failed");
const refusals = (verdicts: Verdict[]) => verdicts.flatMap((one) => (one.verdict === "refused" ? [one.detail] : []));

describe("the bank of reference cases", () => {
  const report = runBank(fixture("acid-base-cases.json"));

  it("solves every case, ideal and Davies, to max(1e-9, 2e-15 ΣC/β) in pH and 1e-9 in fractions (CAL-18)", () => {
    expect(report.cases).toHaveLength(80);
    expect(failures(report.cases)).toEqual([]);
    expect(refusals(report.cases)).toEqual([]);
  });

  it("stays a hundred times below what is allowed", () => {
    const worst = Math.max(
      ...report.cases.map((one) => ("deviation" in one ? one.deviation : Number.POSITIVE_INFINITY)),
    );
    expect(worst).toBeLessThan(0.01);
  });
});

describe("published worked examples", () => {
  const report = runBank(fixture("worked-examples.json"));

  it("agrees with every printed answer that the core can calculate, within the stated tolerance", () => {
    expect(report.items).toHaveLength(135);
    expect(failures(report.items)).toEqual([]);
    expect(report.items.filter((one) => one.verdict === "passed").length).toBeGreaterThanOrEqual(114);
  });

  it("counts examples with metal ions and solids apart, and gives a reason for each that it refuses", () => {
    const apart = report.items.filter((one) => one.verdict === "not-for-this-solver");
    expect(apart).toHaveLength(11);
    expect(refusals(report.items).every((reason) => reason.length > 10)).toBe(true);
    expect(reportLines(report).join("\n")).toContain("11 not for this solver");
  });
});

describe("the bank itself", () => {
  const good: BankCase = {
    id: "hcl",
    families: [],
    components: [],
    strong: [{ ion: "Cl-", z: -1, conc: "1e-8" }],
    activity: "ideal",
    expect: { pH: "6.97829431354288807265062624544", fractions: {} },
  };

  it("fails a case whose expected pH is off by 2e-9", () => {
    expect(judgeCase(good).verdict).toBe("passed");
    expect(judgeCase({ ...good, expect: { pH: "6.978294315542888", fractions: {} } }).verdict).toBe("failed");
  });

  it("fails a case whose strong acid is not the one that its ions add up to", () => {
    expect(judgeCase({ ...good, h_added: "2e-8" }).verdict).toBe("failed");
  });

  it("refuses an activity model that it does not have, and says so", () => {
    expect(judgeCase({ ...good, activity: "pitzer" })).toMatchObject({
      verdict: "refused",
      detail: expect.stringContaining("pitzer"),
    });
  });

  it("fails a case that cannot be read, and names it", () => {
    const file = join(tmpdir(), `bank-${process.pid}.json`);
    writeFileSync(file, JSON.stringify({ cases: [{ id: "torn" }] }));
    expect(runBank(file).cases).toMatchObject([{ id: "torn", verdict: "failed" }]);
  });
});
