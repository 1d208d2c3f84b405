// What stands round a plot in every form of it: the caption that says it in words, and the table behind it.

import { fixed } from "../format.ts";
import { type PlotModel, thinned } from "./model.ts";

export function PlotCaption({ model, id }: { model: PlotModel; id?: string }) {
  return (
    <figcaption className="plot-caption">
      <b>{model.title}</b>, {model.about}
      <span className="plot-sentence" id={id}>
        {model.sentence}
      </span>
      {model.note === null ? null : (
        <span className="plot-note">{`${model.note.charAt(0).toUpperCase()}${model.note.slice(1)}.`}</span>
      )}
    </figcaption>
  );
}

/** Shows the values behind a plot, thinned to what can be read; the CSV has all of them. */
export function PlotValues({ model }: { model: PlotModel }) {
  const rows = thinned(model);
  return (
    <details className="plot-values">
      <summary>Values as a table</summary>
      {/* biome-ignore lint/a11y/noNoninteractiveTabindex: a region that scrolls sideways must be reachable by keyboard */}
      <section className="scroll" aria-label={`Values: ${model.title}`} tabIndex={0}>
        <table>
          <caption>
            {model.title}: {rows.length} of {model.points.length} points
            {rows.length < model.points.length ? "; the sweep as CSV holds every one" : ""}
          </caption>
          <thead>
            <tr>
              <th scope="col" className="r">
                {model.x.quantity}
              </th>
              {model.curves.map((curve) => (
                <th key={curve.name} scope="col" className="r">
                  {curve.name}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {rows.map((index) => (
              <tr key={index} className={model.points[index] === model.root ? "plot-root-row" : undefined}>
                <th scope="row" className="r mono">
                  {model.points[index] === model.root ? "root " : ""}
                  {fixed(model.points[index] ?? 0, model.xDecimals)}
                </th>
                {model.curves.map((curve) => (
                  <td key={curve.name} className="r mono">
                    {curve.says(curve.y[index] ?? null)}
                  </td>
                ))}
              </tr>
            ))}
          </tbody>
        </table>
      </section>
    </details>
  );
}
