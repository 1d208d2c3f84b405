// What the core says when it will not answer (a refusal, with its field) and what rides on an answer (a warning).

export const REFUSAL_CODES = [
  "amount.not-a-number",
  "amount.negative",
  "amount.out-of-range",
  "amount.missing",
  "volume.missing",
  "volume.not-positive",
  "form.unknown",
  "family.constants-count",
  "family.unknown",
  "family.too-many-steps",
  "composition.not-neutral",
  "composition.empty",
  "composition.too-many-rows",
  "mass-fraction.out-of-range",
  "density.out-of-range",
  "molar-mass.out-of-range",
  "temperature.outside-data",
  "constant.not-convertible",
  "conditions.not-a-number",
  "measured.not-a-number",
  "solve.no-convergence",
  "solve.contradiction",
] as const;
export type RefusalCode = (typeof REFUSAL_CODES)[number];

/** Why there is no number: the code, the field (`rows.<id>.amount`, `madeUpTo`, `conditions.temperatureC`), what stood there, and a sentence. */
export type Refusal = { code: RefusalCode; field: string; value: string | number | null; text: string };

export const WARNING_CODES = [
  "activity.outside-range",
  "activity.ideal-ionic",
  "constants.other-temperature",
  "constants.conditional-basis",
  "constants.disputed",
  "constants.from-memory",
  "constants.nominal",
  "pH.below-zero",
  "pH.above-fourteen",
  "capacity.low",
  "carbon-dioxide",
  "corrosive",
  "left-out",
  "measured.differs",
] as const;
export type WarningCode = (typeof WARNING_CODES)[number];

/** What rides on an answer: how grave, the finding in a few bold words, the sentence after it, and what to do. */
export type Warning = {
  code: WarningCode;
  severity: "info" | "caution" | "danger";
  title: string;
  text: string;
  remedy: string;
};
