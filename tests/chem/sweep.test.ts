import { describe, expect, it } from "vitest";
import type { BlockInput, SolvedBlock, Sweep } from "../../chem/index.ts";
import { solveBlock, sweepBlock } from "../../chem/index.ts";
import { block, molar, row } from "./library.ts";

function both(input: BlockInput) {
  const outcome = solveBlock(input);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.refusals));
  return { solved: outcome.value, sweeps: sweepBlock(input, outcome.value) };
}

const buffer = block([
  row("a", "citric-acid-monohydrate", molar("0.050")),
  row("b", "disodium-hydrogen-phosphate", molar("0.100")),
  row("c", "hydrochloric-acid-37", molar("0.010")),
]);

/** Where left and right cross, by linear interpolation. */
function crossing(sweep: Sweep): number {
  const k = sweep.pH.findIndex((_, i) => (sweep.left[i] ?? 0) < (sweep.right[i] ?? 0));
  const gap = (i: number) => (sweep.left[i] ?? 0) - (sweep.right[i] ?? 0);
  const [p0 = 0, p1 = 0] = [sweep.pH[k - 1], sweep.pH[k]];
  return p0 + ((p1 - p0) * gap(k - 1)) / (gap(k - 1) - gap(k));
}

function isComplete(sweep: Sweep): boolean {
  const n = sweep.pH.length;
  const columns = [
    sweep.logResidual,
    sweep.left,
    sweep.right,
    sweep.beta,
    sweep.H,
    sweep.OH,
    ...sweep.fractions.flatMap((one) => one.values),
  ];
  return columns.every((column) => column.length === n && column.every(Number.isFinite));
}

describe("the sweeps", () => {
  const { solved, sweeps } = both(buffer);

  it("run from −1 to 15, and finely round the root, with finite numbers in columns of equal length", () => {
    expect(sweeps.coarse.pH[0]).toBe(-1);
    expect(sweeps.coarse.pH.at(-1)).toBe(15);
    expect(sweeps.coarse.pH.length).toBe(801);
    expect(sweeps.refined.pH.length).toBe(201);
    expect(sweeps.refined.pH[100]).toBe(solved.pH);
    expect(isComplete(sweeps.coarse) && isComplete(sweeps.refined)).toBe(true);
  });

  it("cross where the solver found the root", () => {
    expect(crossing(sweeps.refined)).toBeCloseTo(solved.pH, 7);
    expect(crossing(sweeps.coarse)).toBeCloseTo(solved.pH, 3);
  });

  it("have their lowest residual at the root", () => {
    const lowest = sweeps.refined.logResidual.indexOf(Math.min(...sweeps.refined.logResidual));
    expect(lowest).toBe(100);
    expect(sweeps.refined.logResidual[100]).toBeLessThan(-14);
  });

  it("tabulate the same two sides as the written balance, and at the root its fractions and capacity", () => {
    expect(sweeps.refined.left[100]).toBeCloseTo(solved.protonCondition.sum.left, 13);
    expect(sweeps.refined.right[100]).toBeCloseTo(solved.protonCondition.sum.right, 13);
    expect((sweeps.refined.beta[100] ?? 0) / solved.beta).toBeCloseTo(1, 12);
    solved.fractions.forEach((one, f) => {
      one.values.forEach((value, lost) => {
        expect(sweeps.refined.fractions[f]?.values[lost]?.[100]).toBeCloseTo(value, 12);
      });
    });
  });

  it("draw log10 of the difference of the two sides", () => {
    for (const k of [0, 50, 400, 800]) {
      const difference = Math.abs((sweeps.coarse.left[k] ?? 0) - (sweeps.coarse.right[k] ?? 0));
      expect(sweeps.coarse.logResidual[k]).toBeCloseTo(Math.log10(difference), 9);
    }
  });

  it.each([
    ["below −1", block([row("a", "hydrochloric-acid-37", molar("15"))], "ideal")],
    ["above 15", block([row("a", "sodium-hydroxide", molar("15"))], "ideal")],
  ])("reach further when the root lies %s (CAL-07)", (_, input) => {
    const outside: { solved: SolvedBlock; sweeps: { coarse: Sweep } } = both(input);
    const { pH } = outside.sweeps.coarse;
    expect(pH[0]).toBeLessThan(outside.solved.pH);
    expect(pH.at(-1)).toBeGreaterThan(outside.solved.pH);
    expect(isComplete(outside.sweeps.coarse)).toBe(true);
  });

  it("throw for inputs that were never solvable", () => {
    expect(() => sweepBlock({ ...buffer, rows: [] }, solved)).toThrow(RangeError);
  });
});
