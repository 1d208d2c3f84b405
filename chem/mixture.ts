// The problem in numbers: what is dissolved, with which constants, under which activity model. A `Work` is a mixture laid out
// in flat arrays that the root search fills and reads without allocating.

import type { Exact, TwoDoubles } from "./decimal.ts";
import { add, integer, multiply, subtract, toNumber, toTwoDoubles, ZERO } from "./decimal.ts";
import type { ActivityModel } from "./types.ts";

export type Mixture = {
  /** pKa in order of protons lost, thermodynamic when the model is not ideal; z0 is the charge of the fully protonated form */
  families: { name: string; z0: number; pKa: readonly number[] }[];
  /** `family` is an index of `families`; `lost` is the form that was poured in; amount concentration in mol/L */
  components: { family: number; lost: number; concentration: Exact }[];
  /** ions that take no part in proton exchange; they count for the ionic strength only */
  ions: { z: number; concentration: Exact }[];
  /** strong acid less strong base, mol/L */
  netStrongAcid: Exact;
  activity: ActivityModel;
  /** Debye–Hückel A, base 10, L^½ mol^-½ */
  A: number;
  /** thermodynamic pKw, amount-concentration scale */
  pKw: number;
};

/** Slots of `Work.sums`, filled by each evaluation. */
export const LEFT = 0;
export const RIGHT = 1;
export const LEFT_SLOPE = 2;
export const RIGHT_SLOPE = 3;
export const SUMS = 4;

export type Work = {
  activity: ActivityModel;
  A: number;
  families: number;
  maxSteps: number;
  /** first constant of family f in `K`, and its number of steps */
  firstK: Int32Array;
  steps: Int32Array;
  z0: Int32Array;
  /** amount concentration of each family, mol/L: the double nearest to it and what that leaves out */
  total: Float64Array;
  totalRest: Float64Array;
  /** thermodynamic constants, and those at the present ionic strength (activity of H+, concentrations else) */
  K0: Float64Array;
  K: Float64Array;
  /** the form that counts as zero level of family f in the present evaluation, and the one wished for by it */
  level: Int32Array;
  nearest: Int32Array;
  /** protons missing from what was poured in, counted from the fully protonated forms, less the net strong acid */
  base: TwoDoubles;
  /** `base` less the present levels: protons that the solution lacks (> 0: strong base in excess) or has too many of */
  excess: number;
  /** half the sum of z² c over ions outside the families */
  ionsI: number;
  Kw0: number;
  /** ln γ of a unit charge, γ of a unit charge, and [H+][OH-] at the present ionic strength */
  lnGamma1: number;
  gamma1: number;
  sums: Float64Array;
  /** evaluations of the present solve, and the a(H+) that it has reached */
  iterations: number;
  h: number;
  /** scratch for one family's terms */
  terms: Float64Array;
};

/** Lays a mixture out for the solver. The caller has checked it: whole charges, forms that exist, finite constants. */
export function prepare(mixture: Mixture): Work {
  const families = mixture.families.length;
  const steps = Int32Array.from(mixture.families, (family) => family.pKa.length);
  const firstK = new Int32Array(families);
  let count = 0;
  for (let f = 0; f < families; f++) {
    firstK[f] = count;
    count += steps[f] ?? 0;
  }
  const K0 = Float64Array.from(
    mixture.families.flatMap((family) => family.pKa),
    (pKa) => 10 ** -pKa,
  );
  const maxSteps = steps.reduce((most, n) => Math.max(most, n), 0);
  const work: Work = {
    activity: mixture.activity,
    A: mixture.A,
    families,
    maxSteps,
    firstK,
    steps,
    z0: Int32Array.from(mixture.families, (family) => family.z0),
    total: new Float64Array(families),
    totalRest: new Float64Array(families),
    K0,
    K: Float64Array.from(K0),
    level: new Int32Array(families),
    nearest: new Int32Array(families),
    base: { hi: 0, lo: 0 },
    excess: 0,
    ionsI: 0,
    Kw0: 10 ** -mixture.pKw,
    lnGamma1: 0,
    gamma1: 1,
    sums: new Float64Array(SUMS),
    iterations: 0,
    h: 0,
    terms: new Float64Array(maxSteps + 1),
  };
  fillComposition(work, mixture);
  return work;
}

/** Puts a mixture's concentrations into a prepared work whose families are the same. */
export function fillComposition(work: Work, mixture: Mixture): void {
  const totals: Exact[] = mixture.families.map(() => ZERO);
  let base = subtract(ZERO, mixture.netStrongAcid);
  for (const component of mixture.components) {
    totals[component.family] = add(totals[component.family] ?? ZERO, component.concentration);
    base = add(base, multiply(component.concentration, integer(component.lost)));
  }
  totals.forEach((total, f) => {
    const { hi, lo } = toTwoDoubles(total);
    work.total[f] = hi;
    work.totalRest[f] = lo;
    work.nearest[f] = 0;
  });
  for (const component of mixture.components) work.nearest[component.family] = component.lost;
  work.base = toTwoDoubles(base);
  work.ionsI = 0;
  for (const ion of mixture.ions) work.ionsI += (ion.z * ion.z * toNumber(ion.concentration)) / 2;
  takeNearestLevels(work);
}

/**
 * Moves each family's zero level to the form that is nearest to the family's mean protonation, and recounts what strong acid or
 * base is then left over. P is the same function for every choice of levels, but near its root these keep all terms small:
 * nothing large is left to cancel. The recount is in two doubles, so that it costs no digits either.
 */
export function takeNearestLevels(work: Work): void {
  const { base, level, nearest, total, totalRest } = work;
  let hi = base.hi;
  let lo = base.lo;
  for (let f = 0; f < work.families; f++) {
    const m = nearest[f] ?? 0;
    level[f] = m;
    if (m === 0) continue;
    const C = total[f] ?? 0;
    // Exact product m · C as p + e: m has at most 4 bits, so the error of m · C is found from halves (Dekker).
    const p = m * C;
    const e = productError(m, C, p);
    const s = hi - p;
    const b = s - hi;
    lo += hi - (s - b) - (p + b) - e - m * (totalRest[f] ?? 0);
    hi = s;
  }
  work.excess = hi + lo;
}

/** Splits a double into halves of 26 bits (Dekker). */
const SPLITTER = 134217729;

/** The rounding error of p = m · c for a small whole m. */
function productError(m: number, c: number, p: number): number {
  const t = SPLITTER * c;
  const high = t - (t - c);
  return m * high - p + m * (c - high);
}
