import { fixed } from "../format.ts";
import { type Layout, layoutOf, segmentsOf, TICK } from "./layout.ts";
import { axisTitle, type Curve, type PlotModel } from "./model.ts";

/** Draws a plot as SVG, for print, for the frozen page and before any script runs. Pure; colours come from custom properties. */
export function PlotSvg({ model, width = 430, height = 270 }: { model: PlotModel; width?: number; height?: number }) {
  const layout = layoutOf(model, width, height);
  const { left, right, top, bottom, px, py } = layout;
  return (
    <svg className="plot-svg" viewBox={`0 0 ${width} ${height}`} role="img" aria-label={model.sentence}>
      {model.band === null ? null : (
        <rect
          className="plot-band"
          x={round(px(model.band.from) - 2)}
          y={top}
          width={round(px(model.band.to) - px(model.band.from) + 4)}
          height={bottom - top}
        />
      )}
      {model.y.ticks.map((tick) => (
        <path key={tick} className="plot-grid" d={`M${left} ${round(py(tick))}H${right}`} />
      ))}
      {model.root === null ? null : <path className="plot-root" d={`M${round(px(model.root))} ${bottom}V${top}`} />}
      {model.curves.map((curve) => (
        <path
          key={curve.name}
          className="plot-curve"
          d={pathOf(curve, model, layout)}
          style={{ stroke: `var(--plot-${curve.ink})` }}
          strokeDasharray={curve.dash.length === 0 ? undefined : curve.dash.join(" ")}
        />
      ))}
      <path className="plot-axis" d={`M${left} ${top}V${bottom}H${right}`} />
      {model.x.ticks.map((tick) => (
        <g key={tick}>
          <path className="plot-axis" d={`M${round(px(tick))} ${bottom}v${TICK}`} />
          <text className="plot-tick" x={round(px(tick))} y={bottom + 20} textAnchor="middle">
            {fixed(tick, model.x.decimals)}
          </text>
        </g>
      ))}
      {model.y.ticks.map((tick) => (
        <g key={tick}>
          <path className="plot-axis" d={`M${left} ${round(py(tick))}h${-TICK}`} />
          <text className="plot-tick" x={left - 9} y={round(py(tick) + 4)} textAnchor="end">
            {fixed(tick, model.y.decimals)}
          </text>
        </g>
      ))}
      {model.rings.map((ring) => (
        <circle key={ring.y} className="plot-ring" r={4} cx={round(px(ring.x))} cy={round(py(ring.y))} />
      ))}
      {layout.labels.map((label) => (
        <text
          key={label.text}
          className="plot-label"
          x={round(label.x)}
          y={round(label.y)}
          textAnchor={label.anchor}
          style={label.ink === null ? undefined : { fill: `var(--plot-${label.ink})` }}
        >
          {label.text}
        </text>
      ))}
      <text className="plot-title" x={0} y={13}>
        {axisTitle(model.y)}
      </text>
      <text className="plot-title" x={right} y={height - 5} textAnchor="end">
        {axisTitle(model.x)}
      </text>
    </svg>
  );
}

function pathOf(curve: Curve, model: PlotModel, layout: Layout): string {
  return segmentsOf(curve, model, layout)
    .map((segment) => `M${segment.map(([x, y]) => `${round(x)} ${round(y)}`).join("L")}`)
    .join("");
}

function round(value: number): number {
  return Math.round(value * 10) / 10;
}
