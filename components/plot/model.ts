// What a plot shows, apart from how it is drawn: axes, curves, marks, and the sentence that says it in words. Pure. The
// canvas, the SVG for print, the table and the reading by keyboard are all made from this one model.

import { fixed } from "../format.ts";

export type Axis = {
  quantity: string;
  /** null where the quantity has none */
  unit: string | null;
  min: number;
  max: number;
  ticks: number[];
  /** of the tick labels */
  decimals: number;
};

export type Curve = {
  /** written at the curve; null where the caption already says it */
  label: string | null;
  /** in the table's head and in readings */
  name: string;
  /** which of the four plot inks */
  ink: 1 | 2 | 3 | 4;
  /** lengths of dash and gap in px; none for a solid line */
  dash: readonly number[];
  /** as long as `points`; null where there is nothing to draw */
  y: (number | null)[];
  /** value in words and figures, for table and reading */
  says: (value: number | null) => string;
};

export type Ring = { x: number; y: number; label: string | null };

export type PlotModel = {
  title: string;
  /** range, step, count: follows the title */
  about: string;
  /** one sentence that says what is to be seen */
  sentence: string;
  /** a remark that must stand with the plot, or null */
  note: string | null;
  x: Axis;
  y: Axis;
  /** shared by all curves, ascending */
  points: number[];
  curves: Curve[];
  /** the dotted vertical; null where there is no root */
  root: number | null;
  rings: Ring[];
  /** a part of the x axis that another plot shows larger */
  band: { from: number; to: number } | null;
  /** where reading begins: index into `points` */
  start: number;
  /** decimals of x in readings and in the table */
  xDecimals: number;
};

const DASHES = [[], [7, 3], [2, 3], [9, 3, 2, 3], [14, 4], [5, 2, 1, 2], [1, 2], [11, 2, 5, 2]] as const;
const INKS = [1, 2, 3, 4] as const;

/** Ink and dash of the n-th curve of a plot: four inks, eight dashes, so that no two of eight curves share both. */
export function strokeOf(index: number): { ink: 1 | 2 | 3 | 4; dash: readonly number[] } {
  return { ink: INKS[index % INKS.length] ?? 1, dash: DASHES[index % DASHES.length] ?? [] };
}

/** Makes an axis from a range: ticks at 1, 2 or 5 times a power of ten, about as many as asked for. */
export function axisOver(quantity: string, unit: string | null, min: number, max: number, about = 7): Axis {
  const step = niceStep((max - min) / about);
  const decimals = Math.max(0, -Math.floor(Math.log10(step) + 1e-9));
  const ticks: number[] = [];
  for (let n = Math.ceil(min / step - 1e-9); n * step <= max + step * 1e-9; n += 1)
    ticks.push(Number((n * step).toFixed(decimals)));
  return { quantity, unit, min, max, ticks, decimals };
}

/** The smallest round number of ticks' reach at or above a value. */
export function roundUp(value: number): number {
  const step = niceStep(value / 5);
  return Math.ceil(value / step - 1e-9) * step;
}

export function axisTitle(axis: Axis): string {
  return axis.unit === null ? axis.quantity : `${axis.quantity} / ${axis.unit}`;
}

/** What stands at one point, in words: "At pH 3.114: H₃Cit 0.5231, …". */
export function readingAt(model: PlotModel, index: number): string {
  const x = model.points[index];
  if (x === undefined) return "";
  const values = model.curves.map((curve) => `${curve.name} ${curve.says(curve.y[index] ?? null)}`);
  return `At ${positionAt(model, index)}: ${values.join(", ")}`;
}

/** Where the reading stands: "pH 3.114", and whether that is the root. */
export function positionAt(model: PlotModel, index: number): string {
  const x = model.points[index];
  if (x === undefined) return "";
  const where = `${model.x.quantity} ${fixed(x, model.xDecimals)}`;
  return x === model.root ? `${where} (the root)` : where;
}

/** Index of the point nearest to x. */
export function nearestPoint(points: readonly number[], x: number): number {
  let best = 0;
  for (let index = 1; index < points.length; index += 1) {
    if (Math.abs((points[index] ?? 0) - x) < Math.abs((points[best] ?? 0) - x)) best = index;
  }
  return best;
}

/** Points for a table that is read and not computed with: evenly thinned to about `most`, both ends and the root kept. */
export function thinned(model: PlotModel, most = 30): number[] {
  const swept = model.points.map((_, index) => index).filter((index) => model.points[index] !== model.root);
  const every = Math.max(1, Math.ceil((swept.length - 1) / most));
  const kept = swept.filter((_, place) => place % every === 0 || place === swept.length - 1);
  const root = model.root === null ? -1 : model.points.indexOf(model.root);
  return root < 0 ? kept : [...kept, root].sort((a, b) => a - b);
}

function niceStep(rough: number): number {
  const power = 10 ** Math.floor(Math.log10(rough));
  const ratio = rough / power;
  const factor = ratio <= 1.0000001 ? 1 : ratio <= 2 ? 2 : ratio <= 5 ? 5 : 10;
  return factor * power;
}
