import { describe, expect, it } from "vitest";
import { sweepCsv } from "../../../components/plot/sweep-csv.ts";
import { citrateBlock } from "../chem/citrate-block.ts";

const { sweeps } = citrateBlock();

describe("a sweep as CSV", () => {
  const lines = sweepCsv(sweeps.coarse).split("\r\n");

  it("has a header with units, a line for each point, and CRLF at every end (RFC 4180)", () => {
    expect(lines).toHaveLength(1 + 141 + 1);
    expect(lines.at(-1)).toBe("");
    expect(lines[0]).toBe(
      "pH / 1,[H+] / (mol/L),[OH-] / (mol/L),alpha (citric acid: citric acid) / 1,alpha (citric acid: dihydrogen citrate) / 1,alpha (citric acid: hydrogen citrate) / 1,alpha (citric acid: citrate) / 1,left side of the proton condition / (mol/L),right side of the proton condition / (mol/L),|P| / (mol/L),log10(|P| / (mol/L)) / 1,buffer capacity / (mol/L)",
    );
  });

  it("keeps every digit of every number", () => {
    const cells = (lines[31] ?? "").split(",").map(Number);
    expect(cells[0]).toBe(sweeps.coarse.pH[30]);
    expect(cells[1]).toBe(sweeps.coarse.H[30]);
    expect(cells[4]).toBe(sweeps.coarse.fractions[0]?.values[1]?.[30]);
    expect(cells[7]).toBe(sweeps.coarse.left[30]);
    expect(cells[10]).toBe(sweeps.coarse.logResidual[30]);
    expect(cells[11]).toBe(sweeps.coarse.beta[30]);
    expect(cells[9]).toBeCloseTo(Math.abs((cells[7] ?? 0) - (cells[8] ?? 0)), 12);
  });

  it("leaves the logarithm of a residual of zero empty", () => {
    const zero = {
      ...sweeps.coarse,
      logResidual: sweeps.coarse.logResidual.map((value, index) => (index === 0 ? Number.NEGATIVE_INFINITY : value)),
    };
    const cells = (sweepCsv(zero).split("\r\n")[1] ?? "").split(",");
    expect([cells[9], cells[10]]).toEqual(["0", ""]);
  });

  it("quotes a name that holds the separator", () => {
    const [family] = sweeps.coarse.fractions;
    if (family === undefined) throw new Error("one family");
    const named = { ...sweeps.coarse, fractions: [{ ...family, name: 'acid, "odd"' }] };
    expect(sweepCsv(named)).toContain('"alpha (acid, ""odd"": citric acid) / 1"');
  });
});
