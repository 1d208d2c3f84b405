// The root of the proton condition. P(pH) = left − right, where the left sum holds what has gained protons (and the strong base),
// the right sum what has lost them (and the strong acid). ln(left/right) rises with ln a(H+) without exception, so its only root
// is bracketed and a safeguarded Newton step closes in on it. The ionic strength is a second, outer root.

import { lnGammaOfUnitCharge } from "./activity.ts";
import type { Work } from "./mixture.ts";
import { LEFT, LEFT_SLOPE, RIGHT, RIGHT_SLOPE, takeNearestLevels } from "./mixture.ts";

/** Where the search starts: neutral water. */
const START = 1e-7;
/** Longest Newton step in ln a(H+): four decades. Far out the function is nearly straight, so this only guards a flat middle. */
const LONGEST_STEP = 4 * Math.LN10;
const MAX_ITERATIONS = 200;
const MAX_IONIC_ITERATIONS = 100;
/** A sum of relative terms beyond this is formed again on logarithms. */
const OVERFLOW = 1e280;
/** Sides this near to each other make the difference itself, not the logarithm of their quotient, the better function to follow. */
const CLOSE = 1e-3;
/** A step in ln a(H+) below this is as good as a relative change. */
const SMALL_STEP = 1e-8;
/** The step after which Newton's next would vanish in rounding. */
const LAST_STEP = 1e-9;
/** A step below this that does not shrink is rounding noise. */
const NOISE_STEP = 1e-12;
const EPSILON = Number.EPSILON;
/** Self-consistency asked of the ionic strength, relative; its own rounding error is about this large. */
const IONIC_TOLERANCE = 4e-15;
/** A gap of so many tolerances that does not shrink any more is noise. */
const NOISE = 16;

export type RootFound = { h: number; ionicStrength: number; iterations: number };

/**
 * Evaluates both sides of the proton condition and their derivatives by ln h into `work.sums`, and notes for each family which form is
 * nearest to its mean. Cost is linear in the number of forms; nothing is allocated.
 * @param h  activity of H+, > 0
 */
export function evaluate(work: Work, h: number): void {
  const { K, firstK, steps, level, nearest, total, sums, gamma1 } = work;
  const H = h / gamma1;
  const OH = work.Kw0 / (h * gamma1);
  let left = H;
  let right = OH;
  let leftSlope = H;
  let rightSlope = -OH;
  if (work.excess > 0) left += work.excess;
  else right -= work.excess;
  const inverse = 1 / h;
  for (let f = 0; f < work.families; f++) {
    const C = total[f] ?? 0;
    const n = steps[f] ?? 0;
    const first = firstK[f] ?? 0;
    const m = level[f] ?? 0;
    let sum = 1;
    let gained = 0;
    let gained2 = 0;
    let lost = 0;
    let lost2 = 0;
    let term = 1;
    for (let j = m - 1; j >= 0; j--) {
      term *= h / (K[first + j] ?? 1);
      const d = m - j;
      sum += term;
      gained += d * term;
      gained2 += d * d * term;
    }
    term = 1;
    for (let j = m + 1; j <= n; j++) {
      term *= (K[first + j - 1] ?? 0) * inverse;
      const d = j - m;
      sum += term;
      lost += d * term;
      lost2 += d * d * term;
    }
    if (!(sum < OVERFLOW)) {
      const largest = scaledTerms(work, f, h);
      sum = 0;
      gained = 0;
      gained2 = 0;
      lost = 0;
      lost2 = 0;
      for (let j = 0; j <= n; j++) {
        const scaled = Math.exp((work.terms[j] ?? 0) - largest);
        const d = m - j;
        sum += scaled;
        if (d > 0) {
          gained += d * scaled;
          gained2 += d * d * scaled;
        } else {
          lost -= d * scaled;
          lost2 += d * d * scaled;
        }
      }
    }
    const share = 1 / sum;
    const meanGained = gained * share;
    const meanLost = lost * share;
    const drift = meanGained - meanLost;
    nearest[f] = m - Math.round(drift);
    left += C * meanGained;
    right += C * meanLost;
    leftSlope += C * (gained2 * share - meanGained * drift);
    rightSlope -= C * (lost2 * share + meanLost * drift);
  }
  sums[LEFT] = left;
  sums[RIGHT] = right;
  sums[LEFT_SLOPE] = leftSlope;
  sums[RIGHT_SLOPE] = rightSlope;
}

/** Natural logarithms of one family's relative terms into `work.terms`; returns the largest. */
function scaledTerms(work: Work, f: number, h: number): number {
  const first = work.firstK[f] ?? 0;
  const n = work.steps[f] ?? 0;
  const lnH = Math.log(h);
  let lnTerm = 0;
  let largest = 0;
  work.terms[0] = 0;
  for (let j = 1; j <= n; j++) {
    lnTerm += Math.log(work.K[first + j - 1] ?? 1) - lnH;
    work.terms[j] = lnTerm;
    if (lnTerm > largest) largest = lnTerm;
  }
  return largest;
}

/**
 * Fractions of one family's forms, in order of protons lost, into `fractions`. Each is accurate to a few units in the last place;
 * no overflow and no loss of digits for twelve steps from pH −2 to 16.
 */
export function fillFractions(work: Work, f: number, h: number, fractions: Float64Array): void {
  const n = work.steps[f] ?? 0;
  const first = work.firstK[f] ?? 0;
  const m = work.nearest[f] ?? 0;
  let sum = 1;
  let term = 1;
  fractions[m] = 1;
  for (let j = m - 1; j >= 0; j--) {
    term *= h / (work.K[first + j] ?? 1);
    fractions[j] = term;
    sum += term;
  }
  term = 1;
  for (let j = m + 1; j <= n; j++) {
    term *= (work.K[first + j - 1] ?? 0) / h;
    fractions[j] = term;
    sum += term;
  }
  if (!(sum < OVERFLOW)) {
    const largest = scaledTerms(work, f, h);
    sum = 0;
    for (let j = 0; j <= n; j++) {
      const scaled = Math.exp((work.terms[j] ?? 0) - largest);
      fractions[j] = scaled;
      sum += scaled;
    }
  }
  for (let j = 0; j <= n; j++) fractions[j] = (fractions[j] ?? 0) / sum;
}

/** Sets activity coefficients and conditional constants for ionic strength `I` in mol/L. */
export function setIonicStrength(work: Work, I: number): void {
  const lnGamma1 = lnGammaOfUnitCharge(work.activity, work.A, I);
  work.lnGamma1 = lnGamma1;
  work.gamma1 = Math.exp(lnGamma1);
  if (lnGamma1 === 0) {
    work.K.set(work.K0);
    return;
  }
  for (let f = 0; f < work.families; f++) {
    const first = work.firstK[f] ?? 0;
    const n = work.steps[f] ?? 0;
    const z0 = work.z0[f] ?? 0;
    for (let j = 0; j < n; j++) {
      // γ(acid)/γ(base) of the step: z² − (z − 1)² = 2 z − 1 unit charges' worth.
      work.K[first + j] = (work.K0[first + j] ?? 0) * Math.exp(lnGamma1 * (2 * (z0 - j) - 1));
    }
  }
}

/**
 * The root at fixed activity coefficients.
 * @param start  a guess of a(H+); any positive number will do
 * @returns      a(H+); NaN when no root was found. `work.sums` holds the sides at the last point evaluated, at most 1e-9 away; iterations are
 *               added to `work.iterations`.
 */
export function rootAtFixedGamma(work: Work, start: number): number {
  let h = start;
  let low = 0;
  let high = Number.POSITIVE_INFINITY;
  let lastStep = Number.POSITIVE_INFINITY;
  for (let k = 0; k < MAX_ITERATIONS; k++) {
    evaluate(work, h);
    work.iterations++;
    let left = work.sums[LEFT] ?? 0;
    let right = work.sums[RIGHT] ?? 0;
    if (levelsMoved(work)) {
      takeNearestLevels(work);
      // Far from the root the sums just formed do as well; near it their difference may be nothing but cancellation.
      if (Math.abs(left - right) < CLOSE * left) {
        evaluate(work, h);
        left = work.sums[LEFT] ?? 0;
        right = work.sums[RIGHT] ?? 0;
      }
    }
    if (!(left > 0 && right > 0 && left < OVERFLOW && right < OVERFLOW)) return Number.NaN;
    const difference = left - right;
    if (difference === 0) return h;
    if (difference < 0) low = h;
    else high = h;
    const close = Math.abs(difference) < CLOSE * left;
    const slopeOfLog = (work.sums[LEFT_SLOPE] ?? 0) / left - (work.sums[RIGHT_SLOPE] ?? 0) / right;
    let step = close
      ? difference / ((work.sums[LEFT_SLOPE] ?? 0) - (work.sums[RIGHT_SLOPE] ?? 0))
      : Math.log(left / right) / slopeOfLog;
    // At the rounding level the step no longer shrinks: this is the root.
    if (Math.abs(step) < NOISE_STEP && Math.abs(step) >= Math.abs(lastStep) / 2) return h;
    // Newton's error is the square of its step: after one so short nothing is left to correct.
    if (close && Math.abs(step) < LAST_STEP) return h - h * step;
    if (!(step < LONGEST_STEP)) step = LONGEST_STEP;
    if (!(step > -LONGEST_STEP)) step = -LONGEST_STEP;
    let next = Math.abs(step) < SMALL_STEP ? h - h * step : h * Math.exp(-step);
    if (!(next > low && next < high)) {
      if (Math.abs(step) <= 2 * EPSILON) return h;
      next = low > 0 && high < Number.POSITIVE_INFINITY ? Math.sqrt(low) * Math.sqrt(high) : next;
      if (!(next > low && next < high)) return h;
      lastStep = Number.POSITIVE_INFINITY;
    } else {
      lastStep = step;
    }
    if (next === h) return h;
    h = next;
  }
  return Number.NaN;
}

function levelsMoved(work: Work): boolean {
  for (let f = 0; f < work.families; f++) if (work.level[f] !== work.nearest[f]) return true;
  return false;
}

/** Ionic strength of the solution at h with the constants that are set, mol/L. */
export function ionicStrengthAt(work: Work, h: number): number {
  let I = work.ionsI + (h / work.gamma1 + work.Kw0 / (h * work.gamma1)) / 2;
  for (let f = 0; f < work.families; f++) {
    const n = work.steps[f] ?? 0;
    const z0 = work.z0[f] ?? 0;
    fillFractions(work, f, h, work.terms);
    let sum = 0;
    for (let j = 0; j <= n; j++) sum += (z0 - j) * (z0 - j) * (work.terms[j] ?? 0);
    I += ((work.total[f] ?? 0) * sum) / 2;
  }
  return I;
}

/**
 * Solves the mixture that `work` holds: pH root inside, self-consistent ionic strength outside (secant steps kept inside a
 * bracket). For an ideal mixture the inner root is all. The physical branch, the one that grows from I = 0, is looked for;
 * far outside a model's range others may exist.
 * @returns whether it converged; `found` is filled only then
 */
export function findRoot(work: Work, found: RootFound): boolean {
  work.iterations = 0;
  setIonicStrength(work, 0);
  let h = rootAtFixedGamma(work, START);
  if (!(h > 0)) return false;
  let I = ionicStrengthAt(work, h);
  if (work.activity !== "ideal") {
    I = selfConsistent(work, h, I);
    if (!(I >= 0)) return false;
    h = work.h;
  }
  found.h = h;
  found.ionicStrength = I;
  found.iterations = work.iterations;
  return Number.isFinite(I);
}

/** Root of G(I) = I(solution at I) − I, with G(0) ≥ 0 known; NaN when it does not converge. Leaves a(H+) in `work.h`. */
function selfConsistent(work: Work, hAtZero: number, IAtZero: number): number {
  let low = 0;
  let high = Number.POSITIVE_INFINITY;
  let before = 0;
  let gapBefore = IAtZero;
  let I = IAtZero;
  let h = hAtZero;
  let smallest = Number.POSITIVE_INFINITY;
  for (let k = 0; k < MAX_IONIC_ITERATIONS; k++) {
    setIonicStrength(work, I);
    h = rootAtFixedGamma(work, h);
    if (!(h > 0)) return Number.NaN;
    const gap = ionicStrengthAt(work, h) - I;
    if (!Number.isFinite(gap)) return Number.NaN;
    work.h = h;
    if (Math.abs(gap) <= IONIC_TOLERANCE * I) return I;
    if (gap > 0) low = I;
    else high = I;
    // The bracket has closed to neighbouring doubles, or the gap is rounding noise that no longer shrinks.
    if (high < Number.POSITIVE_INFINITY && high - low <= 2 * EPSILON * high) return I;
    if (Math.abs(gap) <= NOISE * IONIC_TOLERANCE * I && Math.abs(gap) >= smallest) return I;
    smallest = Math.min(smallest, Math.abs(gap));
    const slope = (gap - gapBefore) / (I - before);
    before = I;
    gapBefore = gap;
    let next = slope < 0 ? I - gap / slope : I + gap;
    if (!(next > low && next < high)) next = high < Number.POSITIVE_INFINITY ? (low + high) / 2 : I + gap;
    if (next === I) return I;
    I = next;
  }
  return Number.NaN;
}
