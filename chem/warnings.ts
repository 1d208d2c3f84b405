// What rides on an answer. Every warning has a code, a gravity, the finding in a few words, a sentence, and what to do.

import { MODEL_RANGES } from "./activity.ts";
import type { Warning } from "./errors.ts";
import type { ReadBlock } from "./read-block.ts";
import { shown } from "./refuse.ts";
import type { BlockInput, Comparison, ConstantUsed, SolvedBlock } from "./types.ts";
import { TEMPERATURE_C } from "./water.ts";

/** Ionic strength above which the ideal model is off by more than about 0.02 in pH, and by more than about 0.1 (Davies at 25 °C). */
const IDEAL_NOTICE = 0.001;
const IDEAL_CAUTION = 0.05;
/** Below this buffer capacity a millionth of a mole in a litre moves the pH by more than 0.01. */
const LOW_CAPACITY = 1e-4;
const TRACE = 1e-6;
/** pH from which carbon dioxide of the air is taken up in earnest, and below which hardly any; common practice, no source. */
const ALKALINE = 8;
const NO_CARBONATE = 5;
/** Extreme pH by which mixtures are judged corrosive in the absence of other data: UN GHS, chapter 3.2 (2 and 11.5; from memory). */
const CORROSIVE_LOW = 2;
const CORROSIVE_HIGH = 11.5;
/** Difference between a reading and a calculation that is remarked on while their uncertainties are not evaluated. Our own choice. */
const REMARKABLE_DIFFERENCE = 0.1;
/** Share of a form below which the constant that leads to it hardly matters. */
const NEGLIGIBLE_SHARE = 1e-3;

/** All warnings of a solved block, the gravest first. */
export function warningsOf(input: BlockInput, block: ReadBlock, solved: SolvedBlock): Warning[] {
  const warnings = [
    activityWarning(solved),
    idealWarning(solved, input),
    ...rangeWarnings(solved),
    corrosiveWarning(solved),
    leftOutWarning(solved),
    capacityWarning(solved),
    carbonDioxideWarning(solved),
    differsWarning(solved.comparison),
    conditionalWarning(input, block),
    temperatureWarning(solved.constants),
    disputedWarning(solved.constants),
    nominalWarning(input, solved),
    memoryWarning(solved.constants),
  ].filter((warning) => warning !== null);
  const gravity = { danger: 0, caution: 1, info: 2 } as const;
  return warnings.sort((a, b) => gravity[a.severity] - gravity[b.severity]);
}

function activityWarning(solved: SolvedBlock): Warning | null {
  const { maxIonicStrength, label, model } = solved.activity;
  if (maxIonicStrength === null || solved.ionicStrength <= maxIonicStrength) return null;
  return {
    code: "activity.outside-range",
    severity: "danger",
    title: "OUTSIDE THE RANGE OF THE ACTIVITY MODEL",
    text:
      `The ionic strength is ${shown(solved.ionicStrength)} mol/L. ${label} is meant for at most ${maxIonicStrength} mol/L (${MODEL_RANGES[model].rangeText}); ` +
      "beyond that this pH may be off by tenths or by whole units.",
    remedy: "Do not rely on this pH. Measure it, or calculate a more dilute solution.",
  };
}

function idealWarning(solved: SolvedBlock, input: BlockInput): Warning | null {
  if (input.conditions.activity !== "ideal" || solved.ionicStrength <= IDEAL_NOTICE) return null;
  return {
    code: "activity.ideal-ionic",
    severity: solved.ionicStrength > IDEAL_CAUTION ? "caution" : "info",
    title: "Ideal model in an ionic solution",
    text: `The ionic strength is ${shown(solved.ionicStrength)} mol/L, but all activity coefficients were taken as 1. The error in pH commonly reaches a tenth at 0.05 mol/L and grows with the charges.`,
    remedy: "Choose the Davies model up to 0.5 mol/L.",
  };
}

function rangeWarnings(solved: SolvedBlock): Warning[] {
  const warnings: Warning[] = [];
  const text =
    "It is shown as solved: pH has no end at 0 or 14. Glass electrodes read such solutions with large errors.";
  const remedy = "Titrate for the content of strong acid or base instead of relying on a pH.";
  if (solved.pH < 0) warnings.push({ code: "pH.below-zero", severity: "caution", title: "pH below 0", text, remedy });
  if (solved.pH > 14)
    warnings.push({ code: "pH.above-fourteen", severity: "caution", title: "pH above 14", text, remedy });
  return warnings;
}

function corrosiveWarning(solved: SolvedBlock): Warning | null {
  const acid = solved.pH <= CORROSIVE_LOW;
  if (!acid && solved.pH < CORROSIVE_HIGH) return null;
  return {
    code: "corrosive",
    severity: "danger",
    title: acid ? "Strongly acidic: can burn skin and eyes" : "Strongly alkaline: can burn skin and eyes",
    text: `A calculated pH ${acid ? `of ${CORROSIVE_LOW} or less` : `of ${CORROSIVE_HIGH} or more`} is commonly taken as a sign of a corrosive mixture (UN GHS, chapter 3.2).`,
    remedy:
      "Follow the safety data sheets and local rules; wear eye and skin protection. Add acid or alkali to the water, never the other way round.",
  };
}

function leftOutWarning(solved: SolvedBlock): Warning | null {
  if (solved.leftOut.length === 0) return null;
  return {
    code: "left-out",
    severity: "caution",
    title: "Metal chemistry left out",
    text: `Counted as bare ions only: ${solved.leftOut.join(", ")}. Their complexes, hydroxides and solids are not calculated; with them the pH and the species can be quite different.`,
    remedy: "Take the pH as a first estimate, measure it, and look for a precipitate.",
  };
}

function capacityWarning(solved: SolvedBlock): Warning | null {
  if (solved.beta >= LOW_CAPACITY) return null;
  const shift = TRACE / solved.beta;
  return {
    code: "capacity.low",
    severity: "caution",
    title: "Hardly buffered: the pH means little",
    text: `The buffer capacity is ${shown(solved.beta)} mol/L: about ${shown(TRACE)} mol/L of strong acid or base, a trace, moves the pH by ${shift > 0.5 ? "more than 0.5" : shown(shift)}.`,
    remedy: "Expect a reading to differ and to drift. Use a buffer if the pH has to hold.",
  };
}

function carbonDioxideWarning(solved: SolvedBlock): Warning | null {
  const alkaline = solved.pH >= ALKALINE;
  const dilute = solved.pH >= NO_CARBONATE && solved.beta < LOW_CAPACITY;
  if (!alkaline && !dilute) return null;
  return {
    code: "carbon-dioxide",
    severity: dilute ? "caution" : "info",
    title: "Carbon dioxide from the air",
    text: alkaline
      ? "An alkaline solution takes up carbon dioxide from the air; its pH falls in an open vessel. The calculation is for a closed one."
      : "So weakly buffered a solution is made more acidic by carbon dioxide from the air. The calculation is for water free of it.",
    remedy: "Use freshly boiled water, keep the vessel closed, and note how long it stood open.",
  };
}

function differsWarning(comparison: Comparison | null): Warning | null {
  if (comparison === null) return null;
  const { measured, difference, jointUncertainty } = comparison;
  const limit = jointUncertainty ?? REMARKABLE_DIFFERENCE;
  if (Math.abs(difference) <= limit) return null;
  return {
    code: "measured.differs",
    severity: "caution",
    title: "Measured and calculated pH differ",
    text:
      `The reading ${measured} lies ${Math.abs(difference).toFixed(2)} ${difference > 0 ? "above" : "below"} the calculated pH ${comparison.calculated.toFixed(2)}` +
      (jointUncertainty === null
        ? `. Their uncertainties are not evaluated; differences over ${limit} are remarked on.`
        : `, more than their joint expanded uncertainty ${shown(jointUncertainty)}.`),
    remedy: "Look for the reason: calibration, temperature, purity, a substance left out. Write down what it was.",
  };
}

function conditionalWarning(input: BlockInput, block: ReadBlock): Warning | null {
  const conditional = input.families.flatMap((family) =>
    family.constants
      .filter((constant) => constant.basis === "conditional")
      .map((constant) => `${family.name} (I = ${constant.ionicStrength ?? "not stated"} mol/L)`),
  );
  if (conditional.length === 0) return null;
  const ideal = input.conditions.activity === "ideal";
  return {
    code: "constants.conditional-basis",
    severity: ideal ? "caution" : "info",
    title: ideal ? "Constants used away from their ionic strength" : "Constants converted to zero ionic strength",
    text: ideal
      ? `Measured at an ionic strength of their own and used as they stand: ${list(conditional)}. They hold at that ionic strength only.`
      : `${block.converted.length} constant${block.converted.length === 1 ? " was" : "s were"} measured at an ionic strength of their own and converted to zero by the Davies equation before use: ${list(conditional)}. The conversion adds a few hundredths of uncertainty.`,
    remedy: ideal
      ? "Choose the Davies model, which converts them."
      : "Keep the ionic strength near that of the constants if the second decimal matters.",
  };
}

function temperatureWarning(constants: ConstantUsed[]): Warning | null {
  const others = constants.filter((constant) => Number(constant.temperatureC) !== Number(TEMPERATURE_C));
  if (others.length === 0) return null;
  return {
    code: "constants.other-temperature",
    severity: "caution",
    title: "Constants of another temperature",
    text: `Used at ${TEMPERATURE_C} °C as they stand: ${list(others.map((one) => `${stepName(one)} (${one.temperatureC} °C)`))}.`,
    remedy: `Expect a shift of some hundredths for each such constant; amines move by about 0.03 per kelvin. Use a constant measured at ${TEMPERATURE_C} °C if there is one.`,
  };
}

function disputedWarning(constants: ConstantUsed[]): Warning | null {
  const disputed = constants.filter((constant) => constant.disputed !== null && !constant.nominal);
  if (disputed.length === 0) return null;
  return {
    code: "constants.disputed",
    severity: "caution",
    title: "Constants that the literature disputes",
    text: disputed.map((one) => `${stepName(one)}: ${one.disputed ?? ""}`).join(" "),
    remedy: "See whether the answer depends on them, and name the choice in the entry.",
  };
}

function nominalWarning(input: BlockInput, solved: SolvedBlock): Warning | null {
  const nominal = solved.constants.filter((constant) => constant.nominal);
  if (nominal.length === 0) return null;
  const share = nominal.reduce((most, one) => {
    const values = solved.fractions.find((fractions) => fractions.family === one.family)?.values;
    return Math.max(most, values?.[one.step - 1] ?? 0);
  }, 0);
  const matters = share > NEGLIGIBLE_SHARE || input.families.length === 0;
  return {
    code: "constants.nominal",
    severity: matters ? "caution" : "info",
    title: matters ? "The answer leans on a placeholder constant" : "Placeholder for a strong step",
    text: `${list(nominal.map(stepName))}: the number only says that the step is strong. The undissociated share here is ${shown(share)}${matters ? ", so the placeholder shows in the pH." : " and does not show in the pH."}`,
    remedy: matters ? "Calculate a more dilute solution, or put in a measured constant." : "Nothing to do.",
  };
}

function memoryWarning(constants: ConstantUsed[]): Warning | null {
  const unchecked = constants.filter((constant) => constant.fromMemory);
  if (unchecked.length === 0) return null;
  return {
    code: "constants.from-memory",
    severity: "info",
    title: "Constants not yet compared with their source",
    text: `Entered from memory of the source named: ${list([...new Set(unchecked.map((one) => one.familyName))])}.`,
    remedy: "Compare them with the printed source before the result is relied on.",
  };
}

function stepName(constant: ConstantUsed): string {
  return `pKa ${constant.step} of ${constant.familyName}`;
}

function list(words: readonly string[]): string {
  return [...new Set(words)].join(", ");
}
