import "./plot.css";
import type { PlotModel } from "./model.ts";
import { PlotCaption, PlotValues } from "./plot-parts.tsx";
import { PlotSvg } from "./svg.tsx";

/** A plot without script: for the frozen page, print and export. */
export function PlotStatic({ model }: { model: PlotModel }) {
  return (
    <figure className="plot-figure">
      <PlotCaption model={model} />
      <div className="plot-box plot-box-static">
        <PlotSvg model={model} />
      </div>
      <PlotValues model={model} />
    </figure>
  );
}
