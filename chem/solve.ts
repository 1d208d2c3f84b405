// The low-level door: a mixture in numbers in, the root with everything that vouches for it out.

import type { Exact } from "./decimal.ts";
import { add, integer, multiply, parseDecimal, sign, subtract, toNumber, ZERO } from "./decimal.ts";
import type { Mixture, Work } from "./mixture.ts";
import { LEFT, LEFT_SLOPE, prepare, RIGHT, RIGHT_SLOPE, takeNearestLevels } from "./mixture.ts";
import type { RootFound } from "./root.ts";
import { evaluate, fillFractions, findRoot } from "./root.ts";
import type { ActivityModel } from "./types.ts";

const EPSILON = Number.EPSILON;
const MAX_WIDENINGS = 80;

export type Root = {
  pH: number;
  /** activity of H+ */
  a: number;
  /** [H+] and [OH-], mol/L */
  H: number;
  OH: number;
  /** mol/L */
  ionicStrength: number;
  /** activity coefficient of a singly charged ion, and its natural logarithm */
  gamma1: number;
  lnGamma1: number;
  /** buffer capacity dC/dpH in mol/L at the solution's activity coefficients */
  beta: number;
  iterations: number;
  /** P at the root in mol/L, and the bound on its rounding error */
  residual: { value: number; bound: number };
  /** P has opposite signs, beyond the bound, at these two ends, at the activity coefficients found */
  enclosure: { lowPH: number; highPH: number };
  /** [family][protons lost] */
  fractions: number[][];
};

export type Solution = { ok: true; root: Root; work: Work } | { ok: false; reason: string };

/**
 * Solves a mixture for its pH by the proton condition: bracket, safeguarded Newton steps in ln a(H+), self-consistent ionic
 * strength. Accuracy: |ΔpH| ≤ max(1e-9, 2e-15 ΣC/β), in practice a few units in the last place; fractions to 1e-9 relative.
 * @param mixture  checked numbers: forms that exist, finite constants, concentrations ≥ 0 in mol/L
 * @returns        the root, or the reason why there is none; the last iterate is never passed off as an answer
 */
export function solve(mixture: Mixture): Solution {
  const work = prepare(mixture);
  const found: RootFound = { h: 0, ionicStrength: 0, iterations: 0 };
  if (!findRoot(work, found)) return { ok: false, reason: "The iteration did not converge." };
  const ends = new Float64Array(4);
  if (!enclose(work, found.h, ends))
    return { ok: false, reason: "No sign change of the proton condition could be shown round the root." };
  const [lowPH = Number.NaN, highPH = Number.NaN, residual = Number.NaN, bound = Number.NaN] = ends;
  const gamma1 = work.gamma1;
  return {
    ok: true,
    work,
    root: {
      pH: -Math.log10(found.h),
      a: found.h,
      H: found.h / gamma1,
      OH: work.Kw0 / (found.h * gamma1),
      ionicStrength: found.ionicStrength,
      gamma1,
      lnGamma1: work.lnGamma1,
      beta: capacity(work),
      iterations: found.iterations,
      residual: { value: residual, bound },
      enclosure: { lowPH, highPH },
      fractions: mixture.families.map((family, f) => {
        const values = new Float64Array(family.pKa.length + 1);
        fillFractions(work, f, found.h, values);
        return Array.from(values);
      }),
    },
  };
}

/** Fractions of one family's forms at a given pH, in order of protons lost; ideal, or with conditional constants put in. */
export function fractions(pKa: readonly number[], pH: number): number[] {
  const work = prepare({
    families: [{ name: "family", z0: 0, pKa }],
    components: [],
    ions: [],
    netStrongAcid: ZERO,
    activity: "ideal",
    A: 0,
    pKw: 14,
  });
  const h = 10 ** -pH;
  evaluate(work, h);
  const values = new Float64Array(pKa.length + 1);
  fillFractions(work, 0, h, values);
  return Array.from(values);
}

/** Buffer capacity dC/dpH in mol/L from the slopes of the last evaluation, activity coefficients held. */
export function capacity(work: Work): number {
  return Math.LN10 * ((work.sums[LEFT_SLOPE] ?? 0) - (work.sums[RIGHT_SLOPE] ?? 0));
}

/** Bound on the rounding error of left − right of the last evaluation, mol/L. */
export function roundingBound(work: Work): number {
  const operations = 4 * work.maxSteps + work.families + 12;
  const size = (work.sums[LEFT] ?? 0) + (work.sums[RIGHT] ?? 0);
  const slope = (work.sums[LEFT_SLOPE] ?? 0) - (work.sums[RIGHT_SLOPE] ?? 0);
  return (operations * size * EPSILON) / 2 + 2 * EPSILON * slope;
}

/**
 * Finds a pH interval round the root at whose ends P has opposite signs beyond its rounding bound, activity coefficients held.
 * @param ends  receives low pH, high pH, P at the root and its bound
 * @returns     false when no such interval was found
 */
export function enclose(work: Work, h: number, ends: Float64Array): boolean {
  evaluate(work, h);
  takeNearestLevels(work);
  evaluate(work, h);
  const bound = roundingBound(work);
  ends[2] = (work.sums[LEFT] ?? 0) - (work.sums[RIGHT] ?? 0);
  ends[3] = bound;
  const pH = -Math.log10(h);
  const beta = capacity(work);
  let half = (3 * bound) / beta + 4 * EPSILON * Math.max(1, Math.abs(pH));
  for (let k = 0; k < MAX_WIDENINGS; k++) {
    const lowPH = pH - half;
    const highPH = pH + half;
    evaluate(work, 10 ** -lowPH);
    const above = (work.sums[LEFT] ?? 0) - (work.sums[RIGHT] ?? 0) - roundingBound(work);
    evaluate(work, 10 ** -highPH);
    const below = (work.sums[LEFT] ?? 0) - (work.sums[RIGHT] ?? 0) + roundingBound(work);
    if (above > 0 && below < 0) {
      ends[0] = lowPH;
      ends[1] = highPH;
      evaluate(work, h);
      return true;
    }
    half *= 2;
  }
  return false;
}

/** A mixture as decimal text: the families' constants, what was poured in, and every ion of strong acids, bases and salts. */
export type MixtureText = {
  families: { name: string; z0: number; pKa: readonly string[] }[];
  components: { family: string; lost: number; concentration: string }[];
  ions: { name: string; z: number; concentration: string }[];
  activity: ActivityModel;
  A: string;
  pKw: string;
};

/**
 * Reads a mixture from decimal text. The ions listed, together with the charges of what was poured in, say how much strong acid or
 * base was added; that difference is formed exactly, so spectator ions cost no digits.
 * @returns  the mixture, or a sentence saying what is wrong
 */
export function mixtureFromText(text: MixtureText): { ok: true; mixture: Mixture } | { ok: false; reason: string } {
  const index = new Map(text.families.map((family, f) => [family.name, f]));
  const families: Mixture["families"] = [];
  for (const family of text.families) {
    const pKa = family.pKa.map((value) => parseDecimal(value)?.number ?? Number.NaN);
    if (!pKa.every(Number.isFinite)) return { ok: false, reason: `a constant of ${family.name} is not a number` };
    families.push({ name: family.name, z0: family.z0, pKa });
  }
  let charge = ZERO;
  const components: Mixture["components"] = [];
  for (const component of text.components) {
    const f = index.get(component.family);
    const family = f === undefined ? undefined : families[f];
    const concentration = readConcentration(component.concentration);
    if (f === undefined || family === undefined) return { ok: false, reason: `unknown family ${component.family}` };
    if (!Number.isInteger(component.lost) || component.lost < 0 || component.lost > family.pKa.length)
      return { ok: false, reason: `${component.family} has no form that lost ${component.lost}` };
    if (concentration === null)
      return { ok: false, reason: `the concentration "${component.concentration}" is not a number from zero up` };
    components.push({ family: f, lost: component.lost, concentration });
    charge = add(charge, multiply(concentration, integer(family.z0 - component.lost)));
  }
  const ions: Mixture["ions"] = [];
  for (const ion of text.ions) {
    const concentration = readConcentration(ion.concentration);
    if (concentration === null)
      return { ok: false, reason: `the concentration "${ion.concentration}" is not a number from zero up` };
    ions.push({ z: ion.z, concentration });
    charge = add(charge, multiply(concentration, integer(ion.z)));
  }
  const A = parseDecimal(text.A)?.number ?? Number.NaN;
  const pKw = parseDecimal(text.pKw)?.number ?? Number.NaN;
  if (!Number.isFinite(A) || !Number.isFinite(pKw)) return { ok: false, reason: "A or pKw is not a number" };
  return {
    ok: true,
    mixture: { families, components, ions, netStrongAcid: subtract(ZERO, charge), activity: text.activity, A, pKw },
  };
}

function readConcentration(text: string): Exact | null {
  const parsed = parseDecimal(text);
  if (parsed === null || sign(parsed.exact) < 0 || !Number.isFinite(toNumber(parsed.exact))) return null;
  return parsed.exact;
}
