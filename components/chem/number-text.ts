// The words that go with the numbers of a calculation. How a number itself is shown lives in components/format.ts. Pure.

import { fixed } from "../format.ts";

/** What a difference or a residual is called when it is no larger than the bound on its rounding error. */
export const ZERO_WITHIN_ROUNDING = "zero within rounding";
/** What stands where no uncertainty was given; never "0". */
export const NOT_EVALUATED = "not evaluated";

/** Says a mantissa and a power of ten in words for reading aloud. */
export function spoken({ mantissa, exponent }: { mantissa: string; exponent: number }): string {
  const words = mantissa.replace("−", "minus ");
  return `${words} times 10 to the power of ${exponent < 0 ? "minus " : ""}${Math.abs(exponent)}`;
}

/** Writes a share of one as a percentage to one decimal; what would read as nothing or all is said in words. */
export function percent(share: number): string {
  if (share > 0 && share < 0.0005) return "less than 0.1 %";
  if (share < 1 && share > 0.9995) return "more than 99.9 %";
  return `${fixed(share * 100, 1)} %`;
}

/** Joins words the English way: "a", "a and b", "a, b and c". */
export function listed(words: readonly string[]): string {
  if (words.length < 2) return words.join("");
  return `${words.slice(0, -1).join(", ")} and ${words.at(-1)}`;
}
