// The plots of a solved equilibrium block, all from one pair of sweeps. Pure.

import type { SolvedBlock, Sweep, Sweeps } from "../../chem/index.ts";
import { listed, percent, ZERO_WITHIN_ROUNDING } from "../chem/number-text.ts";
import { fixed, formatNumber } from "../format.ts";
import { axisOver, type Curve, type PlotModel, roundUp, strokeOf } from "./model.ts";
import { speciesText } from "./species-text.ts";

export const DRAWN_FOR_READING = "drawn for reading; solved by bracketing";
const RESIDUAL = "log₁₀ (|P| / (mol/L))";

/** The residual of the proton condition over the whole range, and round the root; both on the same scale of y. */
export function residualPlots(sweeps: Sweeps, solved: SolvedBlock): { coarse: PlotModel; refined: PlotModel } {
  const bound = Math.log10(solved.residual.bound);
  const drawn = [...sweptResidual(sweeps.coarse, solved.pH, bound), ...sweptResidual(sweeps.refined, solved.pH, bound)];
  const values = drawn.filter((value) => value !== null);
  const yMin = Math.floor(Math.min(-1, ...values));
  const yMax = Math.ceil(Math.max(0, ...values));
  const y = { ...axisOver(RESIDUAL, null, yMin, yMax, 8), decimals: 0 };
  const rootSays = residualSays(solved);
  const ends = rangeOf(sweeps.refined);

  const make = (sweep: Sweep, title: string, about: string, decimals: number, sentence: string): PlotModel => {
    const { points, start, insert } = withRoot(sweep.pH, solved.pH);
    const range = rangeOf(sweep);
    return {
      title,
      about,
      sentence,
      note: DRAWN_FOR_READING,
      x: axisOver("pH", null, range.from, range.to, decimals > 3 ? 4 : 8),
      y,
      points,
      curves: [
        {
          label: null,
          name: RESIDUAL,
          ...strokeOf(0),
          y: insert(sweptResidual(sweep, solved.pH, bound), null),
          says: (value) => (value === null ? rootSays : fixed(value, 3)),
        },
      ],
      root: solved.pH,
      rings: [{ x: solved.pH, y: yMin, label: `root ${fixed(solved.pH, decimals)}` }],
      band: null,
      start,
      xDecimals: decimals,
    };
  };

  const pH = fixed(solved.pH, 4);
  const atRoot =
    rootSays === ZERO_WITHIN_ROUNDING
      ? `${ZERO_WITHIN_ROUNDING} (bound ${formatNumber(solved.residual.bound, 2)}\u00a0mol/L)`
      : `${formatNumber(Math.abs(solved.residual.value), 2)}\u00a0mol/L`;
  const coarse = make(
    sweeps.coarse,
    "Coarse sweep",
    aboutSweep(sweeps.coarse),
    3,
    `The residual |P| of the proton condition against pH: it dips at the root, pH\u00a0${pH}, where it is ${atRoot}.`,
  );
  const refined = make(
    sweeps.refined,
    "Refined sweep",
    aboutSweep(sweeps.refined),
    5,
    `The same residual close to the root, from pH\u00a0${fixed(ends.from, 3)} to ${fixed(ends.to, 3)}: it falls towards pH\u00a0${pH} from both sides.`,
  );
  return { coarse: { ...coarse, band: ends }, refined };
}

/** For each family the share of each of its forms against pH. */
export function fractionsPlots(sweeps: Sweeps, solved: SolvedBlock): PlotModel[] {
  const sweep = sweeps.coarse;
  const range = rangeOf(sweep);
  const { points, start, insert } = withRoot(sweep.pH, solved.pH);
  return sweep.fractions.map((family) => {
    const atRoot = solved.fractions.find((each) => each.family === family.family)?.values ?? [];
    const curves = family.values.map((values, lost): Curve => {
      const name = speciesText(family.latex[lost] ?? "", family.forms[lost] ?? `form ${lost}`);
      return {
        label: name,
        name,
        ...strokeOf(lost),
        y: insert(values, atRoot[lost] ?? null),
        says: (value) => (value === null ? "no value" : formatNumber(value, 4)),
      };
    });
    const shares = curves.flatMap((curve, lost) => {
      const value = atRoot[lost];
      return value === undefined ? [] : [`${percent(value)} ${curve.name}`];
    });
    return {
      title: `Fractions of ${family.name}`,
      about: aboutSweep(sweep),
      sentence: `At the root, pH\u00a0${fixed(solved.pH, 2)}, ${family.name} is ${listed(shares)}.`,
      note: null,
      x: axisOver("pH", null, range.from, range.to, 8),
      y: axisOver("fraction α", null, 0, 1, 5),
      points,
      curves,
      root: solved.pH,
      rings: atRoot.filter((value) => value >= 0.005).map((value) => ({ x: solved.pH, y: value, label: null })),
      band: null,
      start,
      xDecimals: 3,
    };
  });
}

/** Buffer capacity against pH, scaled to what the solutes give: the water's own share leaves the frame at both ends. */
export function capacityPlot(sweeps: Sweeps, solved: SolvedBlock): PlotModel {
  const sweep = sweeps.coarse;
  const range = rangeOf(sweep);
  const { points, start, insert } = withRoot(sweep.pH, solved.pH);
  const solutes = sweep.beta.map((beta, index) => beta - Math.LN10 * ((sweep.H[index] ?? 0) + (sweep.OH[index] ?? 0)));
  const top = roundUp(1.15 * Math.max(solved.beta, ...solutes.filter(Number.isFinite), 1e-7));
  const leaves = sweep.beta.some((beta) => beta > top);
  const beta = formatNumber(solved.beta, 3);
  return {
    title: "Buffer capacity",
    about: aboutSweep(sweep),
    sentence: `At the root, pH\u00a0${fixed(solved.pH, 2)}, the buffer capacity β is ${beta}\u00a0mol/L for one unit of pH.`,
    note: leaves
      ? "where water itself buffers more than the frame holds, the curve is cut off; the table has its values"
      : null,
    x: axisOver("pH", null, range.from, range.to, 8),
    y: axisOver("β", "(mol/L)", 0, top, 5),
    points,
    curves: [
      {
        label: null,
        name: "β / (mol/L)",
        ...strokeOf(0),
        y: insert(sweep.beta, solved.beta),
        says: (value) => (value === null ? "no value" : formatNumber(value, 4)),
      },
    ],
    root: solved.pH,
    rings: [{ x: solved.pH, y: solved.beta, label: `β = ${beta}` }],
    band: null,
    start,
    xDecimals: 3,
  };
}

/** What a residual at the root is to be called. */
export function residualSays(solved: SolvedBlock): string {
  const { value, bound } = solved.residual;
  return Math.abs(value) <= bound ? ZERO_WITHIN_ROUNDING : fixed(Math.log10(Math.abs(value)), 3);
}

/** The swept values; null where the residual cannot be told from zero, and at the root itself, which is not swept but solved. */
function sweptResidual(sweep: Sweep, root: number, bound: number): (number | null)[] {
  return sweep.logResidual.map((value, index) =>
    sweep.pH[index] === root || !Number.isFinite(value) || value <= bound ? null : value,
  );
}

/** Puts the root among the swept points, so that it can be read like any other. */
function withRoot(swept: readonly number[], root: number) {
  const first = swept.findIndex((pH) => pH >= root);
  const start = first < 0 ? swept.length : first;
  const there = swept[start] === root;
  const insert = <T>(values: readonly (T | null)[], atRoot: T | null): (T | null)[] => [
    ...values.slice(0, start),
    atRoot,
    ...values.slice(there ? start + 1 : start),
  ];
  return { points: [...swept.slice(0, start), root, ...swept.slice(there ? start + 1 : start)], start, insert };
}

function rangeOf(sweep: Sweep): { from: number; to: number } {
  return { from: sweep.pH[0] ?? 0, to: sweep.pH.at(-1) ?? 14 };
}

function aboutSweep(sweep: Sweep): string {
  const { from, to } = rangeOf(sweep);
  const decimals = Number.isInteger(from) && Number.isInteger(to) ? 0 : 3;
  return `pH\u00a0${fixed(from, decimals)} to ${fixed(to, decimals)}, ${sweep.pH.length} points`;
}
