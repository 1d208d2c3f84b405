// Conditions, constants and the reading of a block, from text to numbers on the scale and basis that the solver expects.

import { daviesConstantAtZero, MODEL_RANGES } from "./activity.ts";
import { compare, parseDecimal } from "./decimal.ts";
import type { Mixture } from "./mixture.ts";
import type { Refuse } from "./refuse.ts";
import { quoted } from "./refuse.ts";
import type { BlockInput, ConstantInput, FamilyInput } from "./types.ts";
import { MOLALITY_TO_CONCENTRATION_25, TEMPERATURE_C } from "./water.ts";

export const MAX_STEPS = 12;
/** No ion carries more. */
export const LARGEST_CHARGE = 24;
/** Beyond these a constant, a condition or a reading is a slip of the keyboard. */
const LARGEST_PK = 60;
const PKW_RANGE = { low: 5, high: 25 };
const A_RANGE = { low: 0, high: 2 };
const PH_RANGE = { low: -10, high: 25 };

export function readConditions(input: BlockInput, refuse: Refuse): { A: number; pKw: number } {
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
      `Constants are held for ${TEMPERATURE_C} °C only, so nothing is calculated at ${quoted(temperature.text)} °C. Set ${TEMPERATURE_C} °C, and compare with a reading taken there.`,
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

/** A family's constants on the basis that the activity model expects; what was converted is put on `converted`. */
export function readFamily(
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

/** A meter's reading; null when there is none. */
export function readMeasured(text: string | null, refuse: Refuse): number | null {
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
