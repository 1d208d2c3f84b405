"use client";

import "uplot/dist/uPlot.min.css";
import "./plot.css";
import { type KeyboardEvent, type PointerEvent, useEffect, useId, useMemo, useRef, useState } from "react";
import { layoutOf } from "./layout.ts";
import { nearestPoint, type PlotModel, positionAt, readingAt } from "./model.ts";
import { PlotCaption, PlotValues } from "./plot-parts.tsx";
import { PlotSvg } from "./svg.tsx";

export const PLOT_HEIGHT = 270;
const PLOT_WIDTH = 430;
/** Page Up and Page Down cross the plot in so many steps. */
const PAGES = 16;

/**
 * A plot to be read: drawn for its width, with a reading point that pointer, finger and keyboard move. Before the script
 * runs, and in print, the SVG of the same model stands in its place.
 */
export function PlotFigure({ model }: { model: PlotModel }) {
  const box = useRef<HTMLDivElement>(null);
  const host = useRef<HTMLDivElement>(null);
  const sentenceId = useId();
  const width = useWidth(box);
  const theme = useTheme();
  const drawing = useRef<(() => void) | null>(null);
  const [isDrawn, setDrawn] = useState(false);
  const [asked, setAsked] = useState<number | null>(null);
  const layout = useMemo(() => layoutOf(model, width ?? PLOT_WIDTH, PLOT_HEIGHT), [model, width]);
  // What does not move with the reading point is made once for a model.
  const caption = useMemo(() => <PlotCaption model={model} id={sentenceId} />, [model, sentenceId]);
  const still = useMemo(() => <PlotSvg model={model} />, [model]);
  const values = useMemo(() => <PlotValues model={model} />, [model]);

  // biome-ignore lint/correctness/useExhaustiveDependencies: `theme` changes what the custom properties hold, which is read inside
  useEffect(() => {
    const element = host.current;
    if (element === null || width === null || typeof Path2D === "undefined") return;
    let isGone = false;
    import("./canvas.ts").then(({ drawPlot, inksAt }) => {
      if (isGone) return;
      // The old drawing goes when the new one stands, so that nothing flickers.
      const before = drawing.current;
      drawing.current = drawPlot(element, model, layout, inksAt(element));
      before?.();
      setDrawn(true);
    });
    return () => {
      isGone = true;
    };
  }, [model, layout, width, theme]);

  useEffect(
    () => () => {
      drawing.current?.();
      drawing.current = null;
      setDrawn(false);
    },
    [],
  );

  const last = model.points.length - 1;
  const index = asked === null ? null : Math.min(asked, last);
  const at = index ?? Math.min(model.start, last);
  const readPointer = (event: PointerEvent<HTMLDivElement>) => {
    const across = event.clientX - event.currentTarget.getBoundingClientRect().left;
    const share = (across - layout.left) / (layout.right - layout.left);
    setAsked(nearestPoint(model.points, model.x.min + share * (model.x.max - model.x.min)));
  };
  const readKey = (event: KeyboardEvent<HTMLDivElement>) => {
    const next = nextPoint(event.key, at, last);
    if (next === null) return;
    event.preventDefault();
    setAsked(next);
  };

  return (
    <figure className="plot-figure">
      {caption}
      <div
        ref={box}
        className={isDrawn ? "plot-box plot-drawn" : "plot-box"}
        role="slider"
        tabIndex={0}
        aria-label={`Read values: ${model.title}`}
        aria-describedby={sentenceId}
        aria-valuemin={model.points[0]}
        aria-valuemax={model.points[last]}
        aria-valuenow={model.points[at]}
        aria-valuetext={positionAt(model, at)}
        onFocus={() => setAsked((before) => before ?? model.start)}
        onKeyDown={readKey}
        onPointerDown={readPointer}
        onPointerMove={readPointer}
      >
        <div ref={host} className="plot-canvas" aria-hidden="true" />
        {still}
        {index === null || width === null ? null : <ReadingPoint model={model} index={index} layout={layout} />}
      </div>
      <p className="plot-read" aria-live="polite">
        {index === null
          ? "Point at the plot, or focus it and use the arrow keys, to read values."
          : readingAt(model, index)}
      </p>
      {values}
    </figure>
  );
}

function ReadingPoint({
  model,
  index,
  layout,
}: {
  model: PlotModel;
  index: number;
  layout: ReturnType<typeof layoutOf>;
}) {
  const x = layout.px(model.points[index] ?? model.x.min);
  return (
    <svg
      className="plot-reading"
      width={layout.width}
      height={layout.height}
      viewBox={`0 0 ${layout.width} ${layout.height}`}
      aria-hidden="true"
    >
      <path className="plot-reading-line" d={`M${x} ${layout.top}V${layout.bottom}`} />
      {model.curves.map((curve) => {
        const y = curve.y[index];
        if (y === null || y === undefined || y > model.y.max) return null;
        return <circle key={curve.name} r={4} cx={x} cy={layout.py(y)} style={{ fill: `var(--plot-${curve.ink})` }} />;
      })}
    </svg>
  );
}

function nextPoint(key: string, at: number, last: number): number | null {
  const page = Math.max(2, Math.round(last / PAGES));
  const within = (index: number) => Math.max(0, Math.min(last, index));
  switch (key) {
    case "ArrowRight":
    case "ArrowUp":
      return within(at + 1);
    case "ArrowLeft":
    case "ArrowDown":
      return within(at - 1);
    case "PageUp":
      return within(at + page);
    case "PageDown":
      return within(at - page);
    case "Home":
      return 0;
    case "End":
      return last;
    default:
      return null;
  }
}

/** The element's width in whole px; null until it has been measured. */
function useWidth(element: { current: HTMLElement | null }): number | null {
  const [width, setWidth] = useState<number | null>(null);
  useEffect(() => {
    const measured = element.current;
    if (measured === null || typeof ResizeObserver === "undefined") return;
    const observer = new ResizeObserver(([entry]) => {
      const across = Math.floor(entry?.contentRect.width ?? 0);
      if (across > 0) setWidth(across);
    });
    observer.observe(measured);
    return () => observer.disconnect();
  }, [element]);
  return width;
}

/** Counts changes of the theme, of the reader's preference, and the arrival of the fonts: each asks for a new drawing. */
function useTheme(): number {
  const [changes, setChanges] = useState(0);
  useEffect(() => {
    let isGone = false;
    const changed = () => {
      if (!isGone) setChanges((before) => before + 1);
    };
    const observer = new MutationObserver(changed);
    observer.observe(document.documentElement, { attributes: true, attributeFilter: ["data-theme", "class", "style"] });
    const preference = typeof matchMedia === "undefined" ? null : matchMedia("(prefers-color-scheme: dark)");
    preference?.addEventListener("change", changed);
    if ("fonts" in document && document.fonts.status === "loading") document.fonts.ready.then(changed);
    return () => {
      isGone = true;
      observer.disconnect();
      preference?.removeEventListener("change", changed);
    };
  }, []);
  return changes;
}
