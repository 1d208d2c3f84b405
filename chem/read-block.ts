// From what a person typed to a mixture in numbers, or to every reason at once why there is none, each at its field.

import { daviesConstantAtZero, MODEL_RANGES } from "./activity.ts";
import type { Exact } from "./decimal.ts";
import { add, compare, divide, multiply, parseDecimal, sign, subtract, toNumber, ZERO } from "./decimal.ts";
import type { Refusal, RefusalCode } from "./errors.ts";
import type { Mixture } from "./mixture.ts";
import type { AmountInput, BlockInput, ConstantInput, FamilyInput, Gives, RowInput } from "./types.ts";
import { MOLALITY_TO_CONCENTRATION_25, TEMPERATURE_C } from "./water.ts";

export const MAX_ROWS = 40;
export const MAX_STEPS = 12;
/** More of one substance than any solution holds; water itself is 55 mol/L. */
const LARGEST_CONCENTRATION = 100;
/** Less than one particle in a litre is no concentration (1 / 6.022e23 mol). */
const SMALLEST_CONCENTRATION = 1e-24;
/** Densest and lightest liquids that are poured, g/mL: mercury is 13.5, liquefied butane 0.58. */
const DENSITY_RANGE = { low: 0.3, high: 14 };
/** From hydrogen's atom to a large protein, g/mol. */
const MOLAR_MASS_RANGE = { low: 1, high: 1e6 };
/** Beyond these a constant, a reading or a condition is a slip of the keyboard. */
const LARGEST_PK = 60;
const LARGEST_CHARGE = 24;
const PKW_RANGE = { low: 5, high: 25 };
const A_RANGE = { low: 0, high: 2 };
const PH_RANGE = { low: -10, high: 25 };
/** Longest text that is repeated in a refusal. */
const SHOWN_LENGTH = 40;

/** One family part of a row: `concentration` in mol/L counts the formula unit's number of such parts. */
export type Part = { row: number; family: number; lost: number; count: number; concentration: number };
export type StrongPart = { row: number; kind: "proton" | "hydroxide"; count: number; concentration: number };
export type IonInSolution = {
  ion: string;
  name: string;
  z: number;
  role: "spectator" | "metal";
  concentration: number;
};

export type ReadBlock = {
  mixture: Mixture;
  /** mol/L, in the order of the input's rows */
  concentrations: number[];
  parts: Part[];
  strongParts: StrongPart[];
  ions: IonInSolution[];
  /** constants that were converted from their ionic strength to zero */
  converted: ConstantInput[];
  measuredPH: number | null;
};

type Refuse = (code: RefusalCode, field: string, value: string | number | null, text: string) => void;

/** Reads a block's inputs. Refuses everything that is wrong with them at once; nothing is assumed. */
export function readBlock(input: BlockInput): { ok: true; block: ReadBlock } | { ok: false; refusals: Refusal[] } {
  const refusals: Refusal[] = [];
  const refuse: Refuse = (code, field, value, text) =>
    refusals.push({ code, field, value: typeof value === "string" ? value.slice(0, SHOWN_LENGTH) : value, text });

  const conditions = readConditions(input, refuse);
  const converted: ConstantInput[] = [];
  const families = input.families.map((family) => readFamily(family, input, conditions.A, converted, refuse));
  const familyIndex = new Map(input.families.map((family, f) => [family.id, f]));

  if (input.rows.length === 0)
    refuse("composition.empty", "rows", null, "Nothing is dissolved yet. Add a row for what was poured or weighed in.");
  if (input.rows.length > MAX_ROWS)
    refuse(
      "composition.too-many-rows",
      "rows",
      input.rows.length,
      `The composition has ${input.rows.length} rows; ${MAX_ROWS} can be solved. Put equal substances together.`,
    );
  const volume = readVolume(input, refuse);

  const concentrations: number[] = [];
  const parts: Part[] = [];
  const strongParts: StrongPart[] = [];
  const ions = new Map<string, IonInSolution & { exact: Exact }>();
  const components: Mixture["components"] = [];
  let netStrongAcid = ZERO;
  input.rows.forEach((row, index) => {
    const field = `rows.${row.id}`;
    const amount = readAmount(row.amount, field, volume, refuse);
    checkGives(row, input.families, familyIndex, refuse);
    if (amount === null) return;
    concentrations[index] = toNumber(amount);
    for (const gives of row.gives) {
      const count = parseDecimal(String(gives.count));
      if (count === null) continue;
      const exact = multiply(amount, count.exact);
      const concentration = toNumber(exact);
      switch (gives.kind) {
        case "family": {
          const family = familyIndex.get(gives.family);
          if (family === undefined) break;
          parts.push({ row: index, family, lost: gives.lost, count: gives.count, concentration });
          components.push({ family, lost: gives.lost, concentration: exact });
          break;
        }
        case "ion": {
          const key = `${gives.ion} ${gives.z}`;
          const present = ions.get(key);
          if (present === undefined) {
            const { ion, name, z, role } = gives;
            ions.set(key, { ion, name, z, role, concentration, exact });
          } else {
            present.exact = add(present.exact, exact);
            present.concentration = toNumber(present.exact);
          }
          break;
        }
        case "proton":
          netStrongAcid = add(netStrongAcid, exact);
          strongParts.push({ row: index, kind: "proton", count: gives.count, concentration });
          break;
        case "hydroxide":
          netStrongAcid = subtract(netStrongAcid, exact);
          strongParts.push({ row: index, kind: "hydroxide", count: gives.count, concentration });
          break;
      }
    }
  });

  const measuredPH = readMeasured(input.measuredPH, refuse);
  if (refusals.length > 0) return { ok: false, refusals };
  return {
    ok: true,
    block: {
      mixture: {
        families,
        components,
        ions: [...ions.values()].map(({ z, exact }) => ({ z, concentration: exact })),
        netStrongAcid,
        activity: input.conditions.activity,
        A: conditions.A,
        pKw: conditions.pKw,
      },
      concentrations,
      parts,
      strongParts,
      ions: [...ions.values()].map(({ exact: _, ...ion }) => ion),
      converted,
      measuredPH,
    },
  };
}

function readConditions(input: BlockInput, refuse: Refuse): { A: number; pKw: number } {
  const { temperatureC, pKw, debyeHuckelA } = input.conditions;
  const temperature = parseDecimal(temperatureC);
  const assumed = parseDecimal(TEMPERATURE_C);
  if (temperature === null) {
    refuse(
      "conditions.not-a-number",
      "conditions.temperatureC",
      temperatureC,
      `The temperature ${quoted(temperatureC)} is not a number. Write 25.`,
    );
  } else if (assumed === null || compare(temperature.exact, assumed.exact) !== 0) {
    refuse(
      "temperature.outside-data",
      "conditions.temperatureC",
      temperatureC,
      `Constants are held for ${TEMPERATURE_C} °C only, so nothing is calculated at ${temperature.text.slice(0, SHOWN_LENGTH)} °C. Set ${TEMPERATURE_C} °C, and compare with a reading taken there.`,
    );
  }
  return {
    A: readCondition(debyeHuckelA.value, "conditions.debyeHuckelA", "The Debye–Hückel coefficient A", A_RANGE, refuse),
    pKw: readCondition(pKw.value, "conditions.pKw", "pKw", PKW_RANGE, refuse),
  };
}

function readCondition(
  text: string,
  field: string,
  name: string,
  range: { low: number; high: number },
  refuse: Refuse,
): number {
  const parsed = parseDecimal(text);
  if (parsed !== null && parsed.number >= range.low && parsed.number <= range.high) return parsed.number;
  refuse(
    "conditions.not-a-number",
    field,
    text,
    `${name} must be a number between ${range.low} and ${range.high}, not ${quoted(text)}.`,
  );
  return Number.NaN;
}

function readFamily(
  family: FamilyInput,
  input: BlockInput,
  A: number,
  converted: ConstantInput[],
  refuse: Refuse,
): Mixture["families"][number] {
  const field = `families.${family.id}`;
  const steps = family.constants.length;
  if (steps !== family.forms.length - 1)
    refuse(
      "family.constants-count",
      field,
      steps,
      `${family.name} has ${family.forms.length} forms and so needs ${Math.max(0, family.forms.length - 1)} constants, but ${steps} are given.`,
    );
  if (steps > MAX_STEPS)
    refuse(
      "family.too-many-steps",
      field,
      steps,
      `${family.name} has ${steps} dissociation steps; ${MAX_STEPS} can be solved.`,
    );
  if (!Number.isInteger(family.z0) || Math.abs(family.z0) > LARGEST_CHARGE)
    refuse("conditions.not-a-number", `${field}.z0`, family.z0, `The charge of ${family.name} must be a whole number.`);
  const pKa = family.constants.map((constant, step) =>
    readConstant(family, constant, step, input, A, converted, refuse),
  );
  return { name: family.id, z0: family.z0, pKa };
}

/** The constant on the amount-concentration scale and on the basis that the activity model expects; NaN when refused. */
function readConstant(
  family: FamilyInput,
  constant: ConstantInput,
  step: number,
  input: BlockInput,
  A: number,
  converted: ConstantInput[],
  refuse: Refuse,
): number {
  const field = `families.${family.id}.constants.${step + 1}`;
  const parsed = parseDecimal(constant.pKa);
  if (parsed === null || Math.abs(parsed.number) > LARGEST_PK) {
    refuse(
      "conditions.not-a-number",
      field,
      constant.pKa,
      `pKa ${step + 1} of ${family.name} is not a usable number: ${quoted(constant.pKa)}.`,
    );
    return Number.NaN;
  }
  // Thermodynamic constants are tabulated for molalities; conditional ones for amount concentrations.
  if (constant.basis === "thermodynamic") return parsed.number + MOLALITY_TO_CONCENTRATION_25;
  if (input.conditions.activity === "ideal") return parsed.number;
  const I = constant.ionicStrength === null ? null : parseDecimal(constant.ionicStrength);
  const most = MODEL_RANGES.davies.maxIonicStrength;
  if (I === null || I.number < 0 || I.number > most) {
    refuse(
      "constant.not-convertible",
      field,
      constant.ionicStrength,
      `pKa ${step + 1} of ${family.name} was measured at ionic strength ${I === null ? "unknown" : `${I.text} mol/L`}, beyond the ${most} mol/L to which ` +
        "the Davies equation reaches, so it cannot be converted to zero. Solve with the ideal model, or use a constant on another basis.",
    );
    return Number.NaN;
  }
  converted.push(constant);
  return daviesConstantAtZero(parsed.number, family.z0 - step, A, I.number);
}

const TO_LITRE = { L: "1", mL: "0.001" } as const;
const TO_GRAM = { g: "1", mg: "0.001", kg: "1000" } as const;
const TO_MOL_PER_LITRE = { "mol/L": "1", "mmol/L": "0.001" } as const;
const TO_MILLILITRE = { mL: "1", L: "1000" } as const;

function inUnit(value: Exact, factor: string): Exact {
  return multiply(value, parseDecimal(factor)?.exact ?? ZERO);
}

/** "missing" when no row may rely on it, null when it was refused. */
function readVolume(input: BlockInput, refuse: Refuse): Exact | null {
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
  if (parsed === null || sign(parsed.exact) <= 0 || !Number.isFinite(parsed.number) || parsed.number > 1e9) {
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
function readAmount(amount: AmountInput, field: string, volume: Exact | null, refuse: Refuse): Exact | null {
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
  if (parsed !== null && sign(parsed.exact) > 0 && compare(parsed.exact, { numerator: 1n, denominator: 1n }) <= 0)
    return parsed.exact;
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

function checkGives(
  row: RowInput,
  families: readonly FamilyInput[],
  familyIndex: ReadonlyMap<string, number>,
  refuse: Refuse,
): void {
  const field = `rows.${row.id}.reagent`;
  let known = true;
  let charge = ZERO;
  for (const gives of row.gives) {
    const count = parseDecimal(String(gives.count));
    const z = chargeOf(gives, families, familyIndex);
    if (gives.kind === "family") {
      const family = families[familyIndex.get(gives.family) ?? -1];
      if (family === undefined) {
        refuse(
          "family.unknown",
          field,
          gives.family,
          `No constants are given for the acid family ${quoted(gives.family)} of ${row.name}.`,
        );
        known = false;
        continue;
      }
      if (!Number.isInteger(gives.lost) || gives.lost < 0 || gives.lost >= family.forms.length) {
        refuse(
          "form.unknown",
          field,
          gives.lost,
          `${family.name} has no form that lost ${gives.lost} protons; it has ${family.forms.length} forms, from 0 to ${family.forms.length - 1} lost.`,
        );
        known = false;
        continue;
      }
    }
    if (count === null || sign(count.exact) <= 0 || z === null) {
      refuse(
        "composition.not-neutral",
        field,
        gives.count,
        `The library's entry for ${row.name} is not usable: a count or a charge in it is not a whole number.`,
      );
      known = false;
      continue;
    }
    charge = add(charge, multiply(count.exact, { numerator: BigInt(z), denominator: 1n }));
  }
  if (known && (row.gives.length === 0 || sign(charge) !== 0))
    refuse(
      "composition.not-neutral",
      field,
      row.gives.length === 0 ? null : toNumber(charge),
      `${row.name} is not a neutral substance as it stands (charge ${toNumber(charge)} per formula unit), so it cannot be weighed or poured by itself. Choose the salt or the acid that was used.`,
    );
}

function chargeOf(
  gives: Gives,
  families: readonly FamilyInput[],
  familyIndex: ReadonlyMap<string, number>,
): number | null {
  switch (gives.kind) {
    case "family": {
      const z = (families[familyIndex.get(gives.family) ?? -1]?.z0 ?? Number.NaN) - gives.lost;
      return Number.isInteger(z) ? z : null;
    }
    case "ion":
      return Number.isInteger(gives.z) && Math.abs(gives.z) <= LARGEST_CHARGE ? gives.z : null;
    case "proton":
      return 1;
    case "hydroxide":
      return -1;
  }
}

function readMeasured(text: string | null, refuse: Refuse): number | null {
  if (text === null) return null;
  const parsed = parseDecimal(text);
  if (parsed !== null && parsed.number >= PH_RANGE.low && parsed.number <= PH_RANGE.high) return parsed.number;
  refuse(
    "measured.not-a-number",
    "measuredPH",
    text,
    `The measured pH must be a number such as 4.02, not ${quoted(text)}. Leave it empty when nothing was measured.`,
  );
  return null;
}

function quoted(text: string): string {
  return text.length > SHOWN_LENGTH ? `“${text.slice(0, SHOWN_LENGTH)}…”` : `“${text}”`;
}

/** A number for a sentence: three significant digits. */
export function shown(value: number): string {
  return value === 0
    ? "0"
    : Number(value.toPrecision(3)).toString().replace("-", "−").replace("e−", "e-").replace("e+", "e");
}
