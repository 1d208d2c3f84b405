import { describe, expect, it } from "vitest";
import {
  capacityPlot,
  DRAWN_FOR_READING,
  fractionsPlots,
  residualPlots,
} from "../../../components/plot/block-plots.ts";
import { layoutOf, segmentsOf } from "../../../components/plot/layout.ts";
import { axisOver, axisTitle, nearestPoint, readingAt, roundUp, thinned } from "../../../components/plot/model.ts";
import { speciesText } from "../../../components/plot/species-text.ts";
import { citrateBlock } from "../chem/citrate-block.ts";

const { solved, sweeps } = citrateBlock();
const { coarse, refined } = residualPlots(sweeps, solved);

describe("an axis", () => {
  it.each([
    [0, 14, 7, [0, 2, 4, 6, 8, 10, 12, 14], 0],
    [0, 1, 5, [0, 0.2, 0.4, 0.6, 0.8, 1], 1],
    [3.171, 3.211, 4, [3.18, 3.19, 3.2, 3.21], 2],
    [-6, 1, 7, [-6, -5, -4, -3, -2, -1, 0, 1], 0],
  ])("from %d to %d has round ticks", (min, max, about, ticks, decimals) => {
    const axis = axisOver("pH", null, min, max, about);
    expect(axis.ticks.map((tick) => tick + 0)).toEqual(ticks);
    expect(axis.decimals).toBe(decimals);
  });

  it("names quantity and unit", () => {
    expect(axisTitle(axisOver("β", "(mol/L)", 0, 1))).toBe("β / (mol/L)");
    expect(axisTitle(axisOver("pH", null, 0, 14))).toBe("pH");
  });

  it("ends on a round number above its data", () => {
    expect(roundUp(0.0418)).toBeCloseTo(0.05, 12);
    expect(roundUp(1.15e-7)).toBeCloseTo(1.5e-7, 15);
  });
});

describe("the residual", () => {
  it("has coarse and refined sweep on one scale, the root marked on both", () => {
    expect(coarse.y).toEqual(refined.y);
    expect(coarse.root).toBe(solved.pH);
    expect(refined.rings[0]?.label).toBe("root 3.19118");
    expect(coarse.band?.from).toBeCloseTo(solved.pH - 0.02, 12);
  });

  it("says that it is drawn for reading and solved by bracketing", () => {
    expect(DRAWN_FOR_READING).toBe("drawn for reading; solved by bracketing");
    expect([coarse.note, refined.note]).toEqual([DRAWN_FOR_READING, DRAWN_FOR_READING]);
  });

  it("reads zero within rounding at the root, and the swept number beside it", () => {
    expect(readingAt(coarse, coarse.start)).toBe("At pH 3.191 (the root): log₁₀ (|P| / (mol/L)) zero within rounding");
    const one = sweeps.coarse.logResidual[0] ?? 0;
    expect(readingAt(coarse, 0)).toContain(one.toFixed(3).replace("-", "−"));
  });

  it("draws nothing below the bound on its rounding error", () => {
    const flat = {
      ...sweeps.coarse,
      logResidual: sweeps.coarse.logResidual.map((value, index) =>
        index === 5 ? -19 : index === 6 ? Number.NEGATIVE_INFINITY : value,
      ),
    };
    const { coarse: plot } = residualPlots({ ...sweeps, coarse: flat }, solved);
    expect(plot.curves[0]?.y.slice(5, 7)).toEqual([null, null]);
    expect(plot.y.min).toBeGreaterThan(-10);
  });

  it("says in one sentence where the root is and how exact (ACC-03)", () => {
    expect(coarse.sentence.replaceAll("\u00a0", " ")).toBe(
      "The residual |P| of the proton condition against pH: it dips at the root, pH 3.1912, where it is zero within rounding (bound 3.0 × 10⁻¹⁷ mol/L).",
    );
  });
});

describe("the fractions", () => {
  const [plot] = fractionsPlots(sweeps, solved);
  if (plot === undefined) throw new Error("one family, one plot");

  it("sum to one at every point, the root included", () => {
    plot.points.forEach((_, index) => {
      const sum = plot.curves.reduce((total, curve) => total + (curve.y[index] ?? 0), 0);
      expect(sum).toBeCloseTo(1, 12);
    });
    expect(plot.points).toHaveLength(142);
    expect(plot.points[plot.start]).toBe(solved.pH);
  });

  it("name each form at its curve, each with ink and dash of its own", () => {
    expect(plot.curves.map((curve) => curve.label)).toEqual(["H₃Cit", "H₂Cit⁻", "HCit²⁻", "Cit³⁻"]);
    expect(new Set(plot.curves.map((curve) => `${curve.ink} ${curve.dash.join(",")}`)).size).toBe(4);
  });

  it("are said in a sentence at the root (ACC-03)", () => {
    expect(plot.sentence.replaceAll("\u00a0", " ")).toBe(
      "At the root, pH 3.19, citric acid is 45.7 % H₃Cit, 52.9 % H₂Cit⁻, 1.4 % HCit²⁻ and less than 0.1 % Cit³⁻.",
    );
  });
});

describe("the buffer capacity", () => {
  const plot = capacityPlot(sweeps, solved);
  it("is scaled to the solutes, and says where it leaves the frame", () => {
    expect(plot.y.max).toBeCloseTo(0.05, 10);
    expect(plot.note).toContain("cut off");
    expect(plot.rings[0]?.label).toBe("β = 0.0363");
    expect(plot.y.unit).toBe("(mol/L)");
  });

  it("is cut exactly at the frame", () => {
    const layout = layoutOf(plot, 430, 270);
    const [curve] = plot.curves;
    if (curve === undefined) throw new Error("one curve");
    const segments = segmentsOf(curve, plot, layout);
    const all = segments.flat();
    expect(all.every(([, y]) => y >= layout.top - 0.02 && y <= layout.bottom + 0.02)).toBe(true);
    expect(segments[0]?.[0]?.[1]).toBe(layout.top);
  });
});

describe("the layout", () => {
  it.each([300, 358, 430, 860])("keeps names apart and inside at %d px", (width) => {
    for (const model of [coarse, refined, ...fractionsPlots(sweeps, solved), capacityPlot(sweeps, solved)]) {
      const { labels } = layoutOf(model, width, 270);
      const boxes = labels.map((label) => {
        const long = label.text.length * 7;
        const x0 = label.anchor === "start" ? label.x : label.anchor === "end" ? label.x - long : label.x - long / 2;
        return { x0, x1: x0 + long, y0: label.y - 10, y1: label.y };
      });
      boxes.forEach((box, index) => {
        expect(box.x0).toBeGreaterThan(52);
        expect(box.x1).toBeLessThan(width);
        for (const other of boxes.slice(index + 1)) {
          expect(box.x0 < other.x1 && box.x1 > other.x0 && box.y0 < other.y1 && box.y1 > other.y0).toBe(false);
        }
      });
    }
  });
});

describe("reading", () => {
  it("finds the nearest point", () => {
    expect(nearestPoint([0, 1, 2, 3], 1.6)).toBe(2);
    expect(nearestPoint([0, 1, 2, 3], -9)).toBe(0);
  });

  it("has a table of a readable length with both ends and the root (ACC-03)", () => {
    const rows = thinned(coarse);
    expect(rows.length).toBeLessThanOrEqual(33);
    expect([rows[0], rows.at(-1)]).toEqual([0, coarse.points.length - 1]);
    expect(rows).toContain(coarse.start);
    expect([...rows].sort((a, b) => a - b)).toEqual(rows);
  });
});

describe("a species on a plot", () => {
  it.each([
    ["\\mathrm{H_{2}PO_{4}^{-}}", "x", "H₂PO₄⁻"],
    ["\\mathrm{HPO_4^{2-}}", "x", "HPO₄²⁻"],
    ["\\mathrm{NH_4^+}", "x", "NH₄⁺"],
    ["\\ce{weird}\\foo", "hydrogen phosphate", "hydrogen phosphate"],
    ["", "citrate", "citrate"],
    ["A^{x}", "the name", "the name"],
  ])("is %s as characters, else its name", (latex, name, text) => {
    expect(speciesText(latex, name)).toBe(text);
  });
});
