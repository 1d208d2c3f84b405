// A row's amount and the final volume, from the digits as typed to an exact amount concentration.

import type { Exact } from "./decimal.ts";
import { compare, divide, integer, multiply, parseDecimal, sign, toNumber, ZERO } from "./decimal.ts";
import type { Refuse } from "./refuse.ts";
import { quoted, shown } from "./refuse.ts";
import type { AmountInput, BlockInput } from "./types.ts";

/** More of one substance than any solution holds; water itself is 55 mol/L. */
const LARGEST_CONCENTRATION = 100;
/** Less than one particle in a litre is no concentration (1 / 6.022e23 mol). */
const SMALLEST_CONCENTRATION = 1e-24;
/** Densest and lightest liquids that are poured, g/mL: mercury is 13.5, liquefied butane 0.58. */
const DENSITY_RANGE = { low: 0.3, high: 14 };
/** From hydrogen's atom to a large protein, g/mol. */
const MOLAR_MASS_RANGE = { low: 1, high: 1e6 };
/** No vessel is larger, in the unit typed. */
const LARGEST_VOLUME = 1e9;

const TO_LITRE = { L: "1", mL: "0.001" } as const;
const TO_GRAM = { g: "1", mg: "0.001", kg: "1000" } as const;
const TO_MOL_PER_LITRE = { "mol/L": "1", "mmol/L": "0.001" } as const;
const TO_MILLILITRE = { mL: "1", L: "1000" } as const;

function inUnit(value: Exact, factor: string): Exact {
  return multiply(value, parseDecimal(factor)?.exact ?? ZERO);
}

/** "missing" when no row may rely on it, null when it was refused. */
export function readVolume(input: BlockInput, refuse: Refuse): Exact | null {
  const needed = input.rows.some((row) => row.amount.kind !== "concentration");
  const { madeUpTo } = input;
  if (madeUpTo === null || madeUpTo.value.trim() === "") {
    if (needed)
      refuse(
        "volume.missing",
        "madeUpTo",
        null,
        "A row is a mass or a volume: say to what final volume the solution was made up.",
      );
    return null;
  }
  const parsed = parseDecimal(madeUpTo.value);
  if (parsed === null || sign(parsed.exact) <= 0 || !Number.isFinite(parsed.number) || parsed.number > LARGEST_VOLUME) {
    refuse(
      "volume.not-positive",
      "madeUpTo",
      madeUpTo.value,
      `The final volume must be a number above zero with a decimal point, such as 0.500, not ${quoted(madeUpTo.value)}.`,
    );
    return null;
  }
  return inUnit(parsed.exact, TO_LITRE[madeUpTo.unit]);
}

/** Amount concentration in mol/L; null when something about it was refused or the final volume is not known. */
export function readAmount(amount: AmountInput, field: string, volume: Exact | null, refuse: Refuse): Exact | null {
  const value = readValue(amount, `${field}.amount`, refuse);
  switch (amount.kind) {
    case "concentration": {
      if (value === null) return null;
      return checkRange(inUnit(value, TO_MOL_PER_LITRE[amount.unit]), amount.value, field, refuse);
    }
    case "mass":
    case "volume": {
      const density = amount.kind === "volume" ? readDensity(amount.density, field, refuse) : null;
      const molarMass = readMolarMass(amount.molarMass, field, refuse);
      const massFraction = readMassFraction(amount.massFraction, field, refuse);
      if (value === null || molarMass === null || massFraction === null || volume === null) return null;
      const gram =
        amount.kind === "mass"
          ? inUnit(value, TO_GRAM[amount.unit])
          : density === null
            ? null
            : multiply(inUnit(value, TO_MILLILITRE[amount.unit]), density);
      if (gram === null) return null;
      const mole = divide(multiply(gram, massFraction), molarMass);
      return checkRange(divide(mole, volume), amount.value, field, refuse);
    }
  }
}

function readValue(amount: AmountInput, field: string, refuse: Refuse): Exact | null {
  const text = amount.value;
  if (text.trim() === "") {
    refuse("amount.missing", field, text, "No amount yet. Type how much of it there is.");
    return null;
  }
  const parsed = parseDecimal(text);
  if (parsed === null) {
    refuse(
      "amount.not-a-number",
      field,
      text,
      `${quoted(text)} is not a number. Use digits and one decimal point, such as 0.100 or 1e-7.`,
    );
    return null;
  }
  if (sign(parsed.exact) < 0) {
    refuse("amount.negative", field, text, `An amount cannot be negative: ${quoted(text)}.`);
    return null;
  }
  if (!Number.isFinite(parsed.number)) {
    refuse("amount.out-of-range", field, text, `${quoted(text)} is larger than any amount that can be dissolved.`);
    return null;
  }
  return parsed.exact;
}

function checkRange(concentration: Exact, text: string, field: string, refuse: Refuse): Exact | null {
  const C = toNumber(concentration);
  if (C > LARGEST_CONCENTRATION) {
    refuse(
      "amount.out-of-range",
      `${field}.amount`,
      text,
      `This comes to ${shown(C)} mol/L, more than can be in a solution (at most ${LARGEST_CONCENTRATION} mol/L). Check the amount and its unit.`,
    );
    return null;
  }
  if (sign(concentration) > 0 && C < SMALLEST_CONCENTRATION) {
    refuse(
      "amount.out-of-range",
      `${field}.amount`,
      text,
      "This is less than one particle in a litre. Check the amount, or leave the row out.",
    );
    return null;
  }
  return concentration;
}

function readDensity(text: string, field: string, refuse: Refuse): Exact | null {
  const parsed = parseDecimal(text);
  if (parsed !== null && parsed.number >= DENSITY_RANGE.low && parsed.number <= DENSITY_RANGE.high) return parsed.exact;
  refuse(
    "density.out-of-range",
    `${field}.density`,
    text,
    text.trim() === ""
      ? "A poured volume needs the liquid's density in g/mL. Read it from the lot's certificate; nothing is assumed."
      : `The density must be a number of g/mL between ${DENSITY_RANGE.low} and ${DENSITY_RANGE.high}, not ${quoted(text)}.`,
  );
  return null;
}

function readMolarMass(text: string, field: string, refuse: Refuse): Exact | null {
  const parsed = parseDecimal(text);
  if (parsed !== null && parsed.number >= MOLAR_MASS_RANGE.low && parsed.number <= MOLAR_MASS_RANGE.high)
    return parsed.exact;
  refuse(
    "molar-mass.out-of-range",
    `${field}.molarMass`,
    text,
    text.trim() === ""
      ? "The library holds no molar mass for this substance. Give its amount concentration instead."
      : `The molar mass must be a number of g/mol from ${MOLAR_MASS_RANGE.low} up, not ${quoted(text)}.`,
  );
  return null;
}

function readMassFraction(text: string, field: string, refuse: Refuse): Exact | null {
  const parsed = parseDecimal(text);
  if (parsed !== null && sign(parsed.exact) > 0 && compare(parsed.exact, integer(1)) <= 0) return parsed.exact;
  refuse(
    "mass-fraction.out-of-range",
    `${field}.massFraction`,
    text,
    text.trim() === ""
      ? "Say how much of what was taken is the substance itself: its mass fraction, such as 0.995 from the certificate, or 1. Nothing is assumed."
      : `The mass fraction must be a number above 0 and at most 1, not ${quoted(text)}. Write 37 % as 0.37.`,
  );
  return null;
}
