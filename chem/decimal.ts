// Decimal text as people type it and sources print it, read exactly. A quantity becomes a double only at the end, and where
// a difference of quantities decides (how much strong acid is left over), it is formed on the exact values.

/** An exact rational number; `denominator` is positive. */
export type Exact = { numerator: bigint; denominator: bigint };

/** An unevaluated sum of two doubles, |lo| at most half a unit in the last place of `hi`: about 32 digits. */
export type TwoDoubles = { hi: number; lo: number };

export type ParsedDecimal = { text: string; exact: Exact; number: number };

/** Longest decimal text that is read: more digits than any source prints, few enough to stay fast. */
export const MAX_DECIMAL_LENGTH = 120;
const DECIMAL = /^([+-]?)(\d+(?:\.\d*)?|\.\d+)(?:[eE]([+-]?\d{1,4}))?$/;

export const ZERO: Exact = { numerator: 0n, denominator: 1n };

/**
 * Reads decimal text with a point, such as "0.100", "-3" or "1e-7", exactly.
 * @param text  at most MAX_DECIMAL_LENGTH characters; outer blanks are ignored; no comma, no thousands separator, no unit
 * @returns     the exact value and the nearest double, or null when the text is not such a number. "1e400" is a number
 *              whose nearest double is infinite: the caller decides on the range.
 */
export function parseDecimal(text: string): ParsedDecimal | null {
  const trimmed = text.trim();
  if (trimmed.length > MAX_DECIMAL_LENGTH) return null;
  const match = DECIMAL.exec(trimmed);
  if (match === null) return null;
  const [, sign = "", mantissa = "", exponentText = "0"] = match;
  const [whole = "", fraction = ""] = mantissa.split(".");
  const exponent = Number(exponentText) - fraction.length;
  const magnitude = BigInt(`${whole}${fraction}`);
  const signed = sign === "-" ? -magnitude : magnitude;
  const exact =
    exponent >= 0
      ? { numerator: signed * 10n ** BigInt(exponent), denominator: 1n }
      : { numerator: signed, denominator: 10n ** BigInt(-exponent) };
  return { text: trimmed, exact, number: Number(trimmed) };
}

export function integer(value: number): Exact {
  return { numerator: BigInt(value), denominator: 1n };
}

export function add(a: Exact, b: Exact): Exact {
  if (a.denominator === b.denominator) return { numerator: a.numerator + b.numerator, denominator: a.denominator };
  return {
    numerator: a.numerator * b.denominator + b.numerator * a.denominator,
    denominator: a.denominator * b.denominator,
  };
}

export function subtract(a: Exact, b: Exact): Exact {
  return add(a, { numerator: -b.numerator, denominator: b.denominator });
}

export function multiply(a: Exact, b: Exact): Exact {
  return { numerator: a.numerator * b.numerator, denominator: a.denominator * b.denominator };
}

/** Quotient of two exact numbers; throws a RangeError when `b` is zero, which callers have refused before. */
export function divide(a: Exact, b: Exact): Exact {
  if (b.numerator === 0n) throw new RangeError("division by zero");
  const sign = b.numerator < 0n ? -1n : 1n;
  return { numerator: a.numerator * b.denominator * sign, denominator: a.denominator * b.numerator * sign };
}

export function sign(value: Exact): -1 | 0 | 1 {
  if (value.numerator === 0n) return 0;
  return value.numerator < 0n ? -1 : 1;
}

/** Sign of a − b, decided exactly. */
export function compare(a: Exact, b: Exact): -1 | 0 | 1 {
  return sign(subtract(a, b));
}

/** The nearest double, to within 1e-20 of a unit in the last place. Below 1e-277 in magnitude the result is zero. */
export function toNumber(value: Exact): number {
  const { mantissa, shift } = scaledQuotient(value);
  return shift > VANISHING_SHIFT ? 0 : scale(Number(mantissa), -shift);
}

/** The value as a sum of two doubles, to about 32 significant digits. */
export function toTwoDoubles(value: Exact): TwoDoubles {
  const { mantissa, shift } = scaledQuotient(value);
  if (shift > VANISHING_SHIFT) return { hi: 0, lo: 0 };
  const hi = Number(mantissa);
  const lo = Number.isFinite(hi) ? Number(mantissa - BigInt(hi)) : 0;
  return { hi: scale(hi, -shift), lo: scale(lo, -shift) };
}

const QUOTIENT_BITS = 140;
/** A quotient shifted by more than this lies below 1e-277: as a double it is taken as zero. */
const VANISHING_SHIFT = 1060;
const BITS_A_DIGIT = 4;

/** mantissa · 2^-shift = value, with QUOTIENT_BITS significant bits at least. */
function scaledQuotient(value: Exact): { mantissa: bigint; shift: number } {
  if (value.numerator === 0n) return { mantissa: 0n, shift: 0 };
  const negative = value.numerator < 0n;
  const magnitude = negative ? -value.numerator : value.numerator;
  const shift = QUOTIENT_BITS + bitLength(value.denominator) - bitLength(magnitude);
  const quotient =
    shift >= 0 ? (magnitude << BigInt(shift)) / value.denominator : magnitude / (value.denominator << BigInt(-shift));
  return { mantissa: negative ? -quotient : quotient, shift };
}

function bitLength(value: bigint): number {
  return value.toString(16).length * BITS_A_DIGIT;
}

/** x · 2^power in two halves, so that neither factor leaves the range of a double. */
function scale(x: number, power: number): number {
  const half = Math.trunc(power / 2);
  return x * 2 ** half * 2 ** (power - half);
}
