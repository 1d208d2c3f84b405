// How names and CAS registry numbers are compared.

/** Spellings that differ from one side of the ocean to the other; both sides of a comparison are brought to one. */
const SPELLINGS: readonly (readonly [RegExp, string])[] = [
  [/sulph/g, "sulf"],
  [/\bcesium/g, "caesium"],
  [/aluminum/g, "aluminium"],
  [/\bpropanoic/g, "propionic"],
  [/\bbutanoic/g, "butyric"],
];

/** Numbers of waters as words: "2-hydrate" is a dihydrate. */
const WATERS: ReadonlyMap<string, string> = new Map([
  ["0.5", "hemi"],
  ["1", "mono"],
  ["1.5", "sesqui"],
  ["2", "di"],
  ["2.5", "hemipenta"],
  ["3", "tri"],
  ["4", "tetra"],
  ["5", "penta"],
  ["6", "hexa"],
  ["7", "hepta"],
  ["8", "octa"],
  ["9", "nona"],
  ["10", "deca"],
  ["12", "dodeca"],
  ["18", "octadeca"],
]);

const GREEK: ReadonlyMap<string, string> = new Map([
  ["α", "alpha"],
  ["β", "beta"],
  ["γ", "gamma"],
  ["δ", "delta"],
  ["ε", "epsilon"],
]);

/** The spelling under which names are compared: lower case, no accents, no punctuation, words parted by one space. */
export function comparedName(text: string): string {
  let name = text.normalize("NFKD").replace(/\p{M}/gu, "").toLowerCase();
  name = name.replace(/[αβγδε]/g, (letter) => GREEK.get(letter) ?? letter);
  name = name.replace(/\(\d*[+\-−]\)/g, " ");
  name = name.replace(/\b(\d+(?:[.,]5)?)[\s-]*hydrate\b/g, (whole, count: string) => {
    const words = WATERS.get(count.replace(",", "."));
    return words === undefined ? whole : `${words}hydrate`;
  });
  for (const [from, to] of SPELLINGS) name = name.replace(from, to);
  return name.replace(/[^a-z0-9]+/g, " ").trim();
}

/** A text that can only be meant as a CAS registry number: digits in the usual three groups. */
export function isCasShape(text: string): boolean {
  return /^\d{2,7}[-‐‑–]\d{2}[-‐‑–]\d$/.test(text.trim());
}

export function casDigits(text: string): string {
  return text.replace(/\D/g, "");
}

/**
 * The check digit of a CAS registry number: the sum of the other digits, each times its place counted from the right, modulo 10.
 * @param digits the whole number without hyphens; its last digit is the one that is checked
 */
export function casCheckDigit(digits: string): number {
  const others = digits.slice(0, -1);
  let sum = 0;
  for (let i = 0; i < others.length; i++) sum += Number(others[others.length - 1 - i]) * (i + 1);
  return sum % 10;
}

export type CasCheck = { given: string; expected: number; corrected: string };

/** What is wrong with the check digit of a CAS RN, or null when it fits. */
export function checkCas(text: string): CasCheck | null {
  const digits = casDigits(text);
  const expected = casCheckDigit(digits);
  if (digits.endsWith(String(expected))) return null;
  return { given: text.trim(), expected, corrected: writeCas(digits.slice(0, -1) + String(expected)) };
}

/** Digits in the three groups of a CAS RN. */
export function writeCas(digits: string): string {
  return `${digits.slice(0, -3)}-${digits.slice(-3, -1)}-${digits.slice(-1)}`;
}
