// Where everything of a plot stands at a given size, in px. Pure; canvas and SVG draw from the same layout.

import type { Curve, PlotModel } from "./model.ts";

export type Label = {
  text: string;
  ink: 1 | 2 | 3 | 4 | null;
  x: number;
  y: number;
  anchor: "start" | "middle" | "end";
};

export type Layout = {
  width: number;
  height: number;
  /** the frame that the axes open, in px */
  left: number;
  right: number;
  top: number;
  bottom: number;
  px: (x: number) => number;
  py: (y: number) => number;
  labels: Label[];
};

export const MARGIN = { left: 52, right: 14, top: 30, bottom: 46 } as const;
export const TICK = 5;
/** Mean width of a character of the labels' type at 13 px, measured on Instrument Sans; wide enough to keep labels apart. */
const CHARACTER = 7.4;
const LINE = 14;

type Box = { x0: number; x1: number; y0: number; y1: number };

/** Lays a model out for a width and height in px. */
export function layoutOf(model: PlotModel, width: number, height: number): Layout {
  const left = MARGIN.left;
  const right = width - MARGIN.right;
  const top = MARGIN.top;
  const bottom = height - MARGIN.bottom;
  const px = (x: number) => left + ((x - model.x.min) / (model.x.max - model.x.min)) * (right - left);
  const py = (y: number) => bottom - ((y - model.y.min) / (model.y.max - model.y.min)) * (bottom - top);
  const frame = { width, height, left, right, top, bottom, px, py };
  return { ...frame, labels: placeLabels(model, { ...frame, labels: [] }) };
}

/** The polylines of a curve, cut exactly at the frame's upper and lower edge; nulls are bridged. */
export function segmentsOf(curve: Curve, model: PlotModel, layout: Layout): [number, number][][] {
  const points = model.points.flatMap((x, index): [number, number][] => {
    const y = curve.y[index];
    return y === null || y === undefined ? [] : [[layout.px(x), layout.py(y)]];
  });
  const inside = ([, y]: [number, number]) => y >= layout.top - 0.01 && y <= layout.bottom + 0.01;
  const segments: [number, number][][] = [];
  let open: [number, number][] = [];
  points.forEach((point, index) => {
    const before = points[index - 1];
    if (before !== undefined && inside(before) !== inside(point)) {
      const edge = (inside(before) ? point : before)[1] < layout.top ? layout.top : layout.bottom;
      const share = (edge - before[1]) / (point[1] - before[1]);
      const cut: [number, number] = [before[0] + share * (point[0] - before[0]), edge];
      open.push(cut);
      if (inside(before)) {
        segments.push(open);
        open = [];
      }
    }
    if (inside(point)) open.push(point);
  });
  if (open.length > 1) segments.push(open);
  return segments;
}

/** Names stand at their curves, where they cover least: not over a curve, a ring, the root's line or another name. */
function placeLabels(model: PlotModel, layout: Layout): Label[] {
  const dots = model.curves.flatMap((curve) =>
    segmentsOf(curve, model, layout).flatMap((segment) => filled(spaced(segment))),
  );
  const rings = model.rings.map((ring): [number, number] => [layout.px(ring.x), layout.py(ring.y)]);
  const placed: Label[] = [];
  const taken: Box[] = [];
  const settle = (text: string, ink: Label["ink"], candidates: Label[], home: [number, number]) => {
    let best: { label: Label; box: Box; cost: number } | null = null;
    for (const label of candidates) {
      const box = boxOf(label);
      const cost =
        costOf(box, layout, dots, rings, taken, model.root) + Math.hypot(label.x - home[0], label.y - home[1]) / 40;
      if (best === null || cost < best.cost) best = { label, box, cost };
    }
    if (best === null) return;
    placed.push({ ...best.label, text, ink });
    taken.push(best.box);
  };
  for (const ring of model.rings) {
    if (ring.label === null) continue;
    const at: [number, number] = [layout.px(ring.x), layout.py(ring.y)];
    settle(ring.label, null, around(ring.label, null, at, [10, 16, 26]), at);
  }
  for (const curve of model.curves) {
    if (curve.label === null) continue;
    const points = spaced(segmentsOf(curve, model, layout).flat());
    const highest = points.reduce<[number, number] | null>(
      (top, point) => (top === null || point[1] < top[1] ? point : top),
      null,
    );
    if (highest === null) continue;
    const text = curve.label;
    settle(
      text,
      curve.ink,
      points.flatMap((point) => around(text, curve.ink, point, [8, 14])),
      middleOfTop(points, highest),
    );
  }
  return placed;
}

/** Leaves out points less than 5 px further on: a dense sweep offers no more places for a name than a coarse one. */
function spaced(points: [number, number][]): [number, number][] {
  let last: [number, number] | null = null;
  return points.filter((point) => {
    if (last !== null && Math.hypot(point[0] - last[0], point[1] - last[1]) < 5) return false;
    last = point;
    return true;
  });
}

/** A curve that stays on top for long (a fraction near 1) is named at the middle of that stretch, not at its first point. */
function middleOfTop(points: [number, number][], highest: [number, number]): [number, number] {
  const flat = points.filter((point) => point[1] - highest[1] < 3);
  const sum = flat.reduce((total, point) => total + point[0], 0);
  return [sum / flat.length, highest[1]];
}

function around(text: string, ink: Label["ink"], [x, y]: [number, number], gaps: number[]): Label[] {
  return gaps.flatMap((gap): Label[] => [
    { text, ink, x, y: y - gap, anchor: "middle" },
    { text, ink, x, y: y + gap + 10, anchor: "middle" },
    { text, ink, x: x + gap, y: y - gap + 4, anchor: "start" },
    { text, ink, x: x - gap, y: y - gap + 4, anchor: "end" },
    { text, ink, x: x + gap, y: y + gap + 4, anchor: "start" },
    { text, ink, x: x - gap, y: y + gap + 4, anchor: "end" },
  ]);
}

function boxOf(label: Label): Box {
  const width = label.text.length * CHARACTER;
  const x0 = label.anchor === "start" ? label.x : label.anchor === "end" ? label.x - width : label.x - width / 2;
  return { x0, x1: x0 + width, y0: label.y - LINE + 3, y1: label.y + 3 };
}

function costOf(
  box: Box,
  layout: Layout,
  dots: [number, number][],
  rings: [number, number][],
  taken: Box[],
  root: number | null,
): number {
  const within = ([x, y]: [number, number], space: number) =>
    x > box.x0 - space && x < box.x1 + space && y > box.y0 - space && y < box.y1 + space;
  let cost = 0;
  if (box.x0 < layout.left + 3 || box.x1 > layout.right + 8 || box.y0 < layout.top - 12 || box.y1 > layout.bottom - 2)
    cost += 1000;
  for (const other of taken) {
    if (box.x0 < other.x1 + 6 && box.x1 > other.x0 - 6 && box.y0 < other.y1 + 2 && box.y1 > other.y0 - 2) cost += 500;
  }
  for (const dot of dots) if (within(dot, 3)) cost += 4;
  for (const ring of rings) if (within(ring, 4)) cost += 60;
  if (root !== null && layout.px(root) > box.x0 - 3 && layout.px(root) < box.x1 + 3) cost += 25;
  return cost;
}

/** A polyline as dots no further than 4 px apart, to measure what a name would cover. */
function filled(segment: [number, number][]): [number, number][] {
  return segment.flatMap((point, index): [number, number][] => {
    const before = segment[index - 1];
    if (before === undefined) return [point];
    const count = Math.max(1, Math.ceil(Math.hypot(point[0] - before[0], point[1] - before[1]) / 4));
    return Array.from({ length: count }, (_, n): [number, number] => {
      const share = (n + 1) / count;
      return [before[0] + share * (point[0] - before[0]), before[1] + share * (point[1] - before[1])];
    });
  });
}
