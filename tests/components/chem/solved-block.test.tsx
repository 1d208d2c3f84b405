// What the engine really answers, from the library's data, as it is shown.
import { renderToString } from "react-dom/server";
import { describe, expect, it } from "vitest";
import type { RowInput, SolvedBlock, Sweeps, Warning } from "../../../chem/index.ts";
import { solveBlock, sweepBlock } from "../../../chem/index.ts";
import { Balances } from "../../../components/chem/balances.tsx";
import { BlockResult } from "../../../components/chem/block-result.tsx";
import { capacityPlot, fractionsPlots, residualPlots } from "../../../components/plot/block-plots.ts";
import { layoutOf } from "../../../components/plot/layout.ts";
import { sweepCsv } from "../../../components/plot/sweep-csv.ts";
import { block, molar, row } from "../../chem/library.ts";

const mixtures: [string, RowInput[], ("ideal" | "davies")?][] = [
  [
    "citric acid with its disodium salt",
    [
      row("r1", "citric-acid-monohydrate", molar("0.0400")),
      row("r2", "disodium-hydrogen-citrate-sesquihydrate", molar("0.0150")),
    ],
  ],
  [
    "phosphate with citrate and tris",
    [
      row("r1", "sodium-dihydrogen-phosphate", molar("0.025")),
      row("r2", "trisodium-citrate-dihydrate", molar("0.010")),
      row("r3", "tris", molar("0.005")),
    ],
  ],
  ["hydrochloric acid alone", [row("r1", "hydrochloric-acid-37", molar("0.01"))]],
  ["EDTA, six steps, ideal", [row("r1", "edta-disodium-dihydrate", molar("0.01"))], "ideal"],
];

function solveNow(
  rows: RowInput[],
  activity: "ideal" | "davies" = "davies",
): { solved: SolvedBlock; sweeps: Sweeps; warnings: Warning[] } {
  const input = { ...block(rows, activity), measuredPH: "3.10" };
  const outcome = solveBlock(input);
  if (!outcome.ok) throw new Error(outcome.refusals.map((refusal) => refusal.text).join(" "));
  return { solved: outcome.value, sweeps: sweepBlock(input, outcome.value), warnings: outcome.warnings };
}

describe.each(mixtures)("%s", (_, rows, activity) => {
  const { solved, sweeps, warnings } = solveNow(rows, activity);

  it("has every formula set, strictly, and no number that is none (CAL-17)", () => {
    const html = renderToString(
      <BlockResult
        solved={solved}
        warnings={warnings}
        sweeps={sweeps}
        cautions={[]}
        held={false}
        stillSolving={false}
        static
      />,
    );
    expect(html).not.toContain("formula-refused");
    expect(html).not.toMatch(/\bNaN\b|>undefined|Infinity|not a number/);
    for (const warning of warnings) expect(html).toContain(escaped(warning.text));
  });

  it("has balances whose difference reads zero within rounding (CAL-17)", () => {
    const html = renderToString(<Balances solved={solved} isStatic />);
    const differences = [...html.matchAll(/<tr class="difference">.*?<td[^>]*>(.*?)<\/td>/g)].map(([, text]) => text);
    expect(differences).toHaveLength(2 + solved.massBalances.length);
    for (const difference of differences) expect(difference).toMatch(/^zero within rounding/);
  });

  it("has plots whose root is the solver's, with every name in its frame (ACC-03)", () => {
    const { coarse, refined } = residualPlots(sweeps, solved);
    for (const model of [coarse, refined, ...fractionsPlots(sweeps, solved), capacityPlot(sweeps, solved)]) {
      expect(model.points[model.start]).toBe(solved.pH);
      expect(model.curves.every((curve) => curve.y.length === model.points.length)).toBe(true);
      expect([...model.points].sort((a, b) => a - b)).toEqual(model.points);
      for (const label of layoutOf(model, 358, 270).labels) {
        expect(label.x).toBeGreaterThan(50);
        expect(label.x).toBeLessThan(358);
      }
    }
    expect(refined.points.length).toBeGreaterThan(100);
  });

  it("can be taken away as CSV, every line as long as its head (RFC 4180)", () => {
    const lines = sweepCsv(sweeps.coarse).trimEnd().split("\r\n");
    const columns = (lines[0] ?? "").split(",").length;
    expect(lines).toHaveLength(1 + sweeps.coarse.pH.length);
    expect(lines.every((line) => line.split(",").length === columns)).toBe(true);
  });
});

describe("a form's name on a plot", () => {
  it("is its formula in plain characters where the engine gives one", () => {
    const { solved, sweeps } = solveNow([row("r1", "sodium-dihydrogen-phosphate", molar("0.025"))]);
    expect(fractionsPlots(sweeps, solved)[0]?.curves.map((curve) => curve.name)).toEqual([
      "H₃PO₄",
      "H₂PO₄⁻",
      "HPO₄²⁻",
      "PO₄³⁻",
    ]);
  });
});

function escaped(text: string): string {
  return text
    .replaceAll("&", "&amp;")
    .replaceAll("<", "&lt;")
    .replaceAll(">", "&gt;")
    .replaceAll('"', "&quot;")
    .replaceAll("'", "&#x27;");
}
