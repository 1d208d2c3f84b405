// Arithmetic on unevaluated sums of two doubles, about 31 digits: T. J. Dekker, Numer. Math. 18 (1971) 224–242, with D. E. Knuth's
// two-sum (The Art of Computer Programming, vol. 2, §4.2.2). Used where an answer is checked, not where it is found.

import type { TwoDoubles } from "./decimal.ts";
import { parseDecimal, toTwoDoubles } from "./decimal.ts";

/** Splits a double into halves of 26 bits. */
const SPLITTER = 134217729;
/** ln 10 and ln 2 to 40 digits (computed). */
const LN10 = fromText("2.302585092994045684017991454684364207601");
const LN2 = fromText("0.6931471805599453094172321214581765680755");
/** The exponential's argument is halved this often, and its series has so many terms. */
const HALVINGS = 9;
const SERIES_TERMS = 12;

export const ddZero: TwoDoubles = { hi: 0, lo: 0 };
export const ddOne: TwoDoubles = { hi: 1, lo: 0 };

export function fromText(text: string): TwoDoubles {
  const parsed = parseDecimal(text);
  return parsed === null ? { hi: Number.NaN, lo: 0 } : toTwoDoubles(parsed.exact);
}

export function fromNumber(value: number): TwoDoubles {
  return { hi: value, lo: 0 };
}

export function ddAdd(a: TwoDoubles, b: TwoDoubles): TwoDoubles {
  const s = twoSum(a.hi, b.hi);
  const t = twoSum(a.lo, b.lo);
  const first = quickSum(s.hi, s.lo + t.hi);
  return quickSum(first.hi, first.lo + t.lo);
}

export function ddNegate(a: TwoDoubles): TwoDoubles {
  return { hi: -a.hi, lo: -a.lo };
}

export function ddMultiply(a: TwoDoubles, b: TwoDoubles): TwoDoubles {
  const p = twoProduct(a.hi, b.hi);
  return quickSum(p.hi, p.lo + (a.hi * b.lo + a.lo * b.hi));
}

export function ddDivide(a: TwoDoubles, b: TwoDoubles): TwoDoubles {
  const first = a.hi / b.hi;
  const rest = ddAdd(a, ddNegate(ddMultiply(b, fromNumber(first))));
  const second = rest.hi / b.hi;
  const last = ddAdd(rest, ddNegate(ddMultiply(b, fromNumber(second))));
  return ddAdd(quickSum(first, second), fromNumber(last.hi / b.hi));
}

/** Square root by one Newton step on the double's; of zero it is zero. */
export function ddSqrt(a: TwoDoubles): TwoDoubles {
  if (a.hi <= 0) return ddZero;
  const guess = fromNumber(Math.sqrt(a.hi));
  return ddMultiply(ddAdd(guess, ddDivide(a, guess)), fromNumber(0.5));
}

/** e to the power x, |x| ≤ 700: argument reduced by ln 2 and halved, series, squared back. */
export function ddExp(x: TwoDoubles): TwoDoubles {
  const k = Math.round(x.hi / Math.LN2);
  const reduced = ddAdd(x, ddNegate(ddMultiply(LN2, fromNumber(k))));
  const r = { hi: reduced.hi / 2 ** HALVINGS, lo: reduced.lo / 2 ** HALVINGS };
  // Summed without the leading 1, so that small arguments keep their digits through the squarings.
  let term = r;
  let sum = r;
  for (let n = 2; n <= SERIES_TERMS; n++) {
    term = ddDivide(ddMultiply(term, r), fromNumber(n));
    sum = ddAdd(sum, term);
  }
  for (let n = 0; n < HALVINGS; n++) sum = ddAdd(ddMultiply(sum, fromNumber(2)), ddMultiply(sum, sum));
  const result = ddAdd(sum, ddOne);
  return { hi: result.hi * 2 ** k, lo: result.lo * 2 ** k };
}

export function ddPowerOfTen(x: TwoDoubles): TwoDoubles {
  return ddExp(ddMultiply(x, LN10));
}

function twoSum(a: number, b: number): TwoDoubles {
  const hi = a + b;
  const part = hi - a;
  return { hi, lo: a - (hi - part) + (b - part) };
}

function quickSum(a: number, b: number): TwoDoubles {
  const hi = a + b;
  return { hi, lo: b - (hi - a) };
}

function twoProduct(a: number, b: number): TwoDoubles {
  const hi = a * b;
  const [aHigh, bHigh] = [upperHalf(a), upperHalf(b)];
  const [aLow, bLow] = [a - aHigh, b - bHigh];
  return { hi, lo: aHigh * bHigh - hi + aHigh * bLow + aLow * bHigh + aLow * bLow };
}

function upperHalf(a: number): number {
  const t = SPLITTER * a;
  return t - (t - a);
}
