// uPlot's only user: a model and a layout onto a canvas. Loaded in the browser when a plot is there to be drawn.

import uPlot from "uplot";
import { fixed } from "../format.ts";
import { type Layout, MARGIN, TICK } from "./layout.ts";
import { axisTitle, type PlotModel } from "./model.ts";

export type Inks = {
  ink: string;
  faint: string;
  paper: string;
  tint: string;
  grid: string;
  plot: readonly [string, string, string, string];
  mono: string;
  ui: string;
};

/** Reads the plot's colours and type from the custom properties that hold at an element. */
export function inksAt(element: Element): Inks {
  const style = getComputedStyle(element);
  const of = (name: string, otherwise: string) => style.getPropertyValue(name).trim() || otherwise;
  return {
    ink: of("--ink", "CanvasText"),
    faint: of("--faint", "GrayText"),
    paper: of("--paper", "Canvas"),
    tint: of("--tint", "transparent"),
    grid: of("--plot-grid", "GrayText"),
    plot: [
      of("--plot-1", "CanvasText"),
      of("--plot-2", "CanvasText"),
      of("--plot-3", "CanvasText"),
      of("--plot-4", "CanvasText"),
    ],
    mono: of("--mono", "monospace"),
    ui: of("--ui", "sans-serif"),
  };
}

/** Draws a plot into an element and returns what takes it away again. */
export function drawPlot(host: HTMLElement, model: PlotModel, layout: Layout, inks: Inks): () => void {
  const plot = new uPlot(
    {
      width: layout.width,
      height: layout.height,
      padding: [MARGIN.top, MARGIN.right, 0, 0],
      legend: { show: false },
      cursor: { show: false },
      scales: {
        x: { time: false, range: () => [model.x.min, model.x.max] },
        y: { range: () => [model.y.min, model.y.max] },
      },
      axes: [
        {
          side: 2,
          size: MARGIN.bottom,
          gap: 5,
          font: `12px ${inks.mono}`,
          stroke: inks.ink,
          grid: { show: false },
          ticks: { size: TICK, width: 1, stroke: inks.ink },
          border: { show: true, width: 1, stroke: inks.ink },
          splits: () => model.x.ticks,
          values: (_, splits) => splits.map((tick) => fixed(tick, model.x.decimals)),
        },
        {
          side: 3,
          size: MARGIN.left,
          gap: 4,
          font: `12px ${inks.mono}`,
          stroke: inks.ink,
          grid: { width: 1, stroke: inks.grid },
          ticks: { size: TICK, width: 1, stroke: inks.ink },
          border: { show: true, width: 1, stroke: inks.ink },
          splits: () => model.y.ticks,
          values: (_, splits) => splits.map((tick) => fixed(tick, model.y.decimals)),
        },
      ],
      series: [
        {},
        ...model.curves.map((curve) => ({
          stroke: inks.plot[curve.ink - 1] ?? inks.ink,
          width: 1.75,
          dash: [...curve.dash],
          spanGaps: true,
          points: { show: false },
        })),
      ],
      hooks: {
        drawClear: [(self) => inPixels(self, (context) => drawBand(context, model, layout, inks))],
        draw: [(self) => inPixels(self, (context) => drawMarks(context, model, layout, inks))],
      },
    },
    [model.points, ...model.curves.map((curve) => curve.y)],
    host,
  );
  return () => plot.destroy();
}

/** uPlot's canvas counts device pixels; the layout counts CSS pixels. */
function inPixels(self: uPlot, draw: (context: CanvasRenderingContext2D) => void): void {
  const { ctx } = self;
  ctx.save();
  ctx.scale(uPlot.pxRatio, uPlot.pxRatio);
  draw(ctx);
  ctx.restore();
}

function drawBand(context: CanvasRenderingContext2D, model: PlotModel, layout: Layout, inks: Inks): void {
  if (model.band === null) return;
  const from = layout.px(model.band.from) - 2;
  context.fillStyle = inks.tint;
  context.fillRect(from, layout.top, layout.px(model.band.to) + 2 - from, layout.bottom - layout.top);
}

function drawMarks(context: CanvasRenderingContext2D, model: PlotModel, layout: Layout, inks: Inks): void {
  context.lineWidth = 1;
  context.strokeStyle = inks.ink;
  if (model.root !== null) {
    const x = layout.px(model.root);
    context.setLineDash([1, 3]);
    context.beginPath();
    context.moveTo(x, layout.bottom);
    context.lineTo(x, layout.top);
    context.stroke();
    context.setLineDash([]);
  }
  context.lineWidth = 1.3;
  context.fillStyle = inks.paper;
  for (const ring of model.rings) {
    context.beginPath();
    context.arc(layout.px(ring.x), layout.py(ring.y), 4, 0, 2 * Math.PI);
    context.fill();
    context.stroke();
  }
  context.textBaseline = "alphabetic";
  for (const label of layout.labels) {
    context.textAlign = label.anchor === "middle" ? "center" : label.anchor;
    write(
      context,
      label.text,
      label.x,
      label.y,
      `500 13px ${inks.ui}`,
      label.ink === null ? inks.ink : (inks.plot[label.ink - 1] ?? inks.ink),
      inks,
    );
  }
  context.textAlign = "start";
  write(context, axisTitle(model.y), 0, 13, `400 13px ${inks.ui}`, inks.faint, inks);
  context.textAlign = "end";
  write(context, axisTitle(model.x), layout.right, layout.height - 5, `400 13px ${inks.ui}`, inks.faint, inks);
}

/** Text with a halo of the paper's colour, so that a line behind it does not cross it out. */
function write(
  context: CanvasRenderingContext2D,
  text: string,
  x: number,
  y: number,
  font: string,
  colour: string,
  inks: Inks,
): void {
  context.font = font;
  context.lineJoin = "round";
  context.lineWidth = 4;
  context.strokeStyle = inks.paper;
  context.strokeText(text, x, y);
  context.fillStyle = colour;
  context.fillText(text, x, y);
}
