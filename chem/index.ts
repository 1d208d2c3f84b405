// The numerical core's one door.

export type { ModelRange } from "./activity.ts";
export { lnGammaOfUnitCharge, MODEL_RANGES } from "./activity.ts";
export type { Exact, ParsedDecimal } from "./decimal.ts";
export { parseDecimal } from "./decimal.ts";
export type { Refusal, RefusalCode, Warning, WarningCode } from "./errors.ts";
export { REFUSAL_CODES, WARNING_CODES } from "./errors.ts";
export type { Mixture } from "./mixture.ts";
export { MAX_ROWS } from "./read-block.ts";
export { MAX_STEPS } from "./read-conditions.ts";
export type { Opinion } from "./second-opinion.ts";
export { checkCharge } from "./second-opinion.ts";
export type { MixtureText, Root, Solution } from "./solve.ts";
export { fractions, mixtureFromText, solve } from "./solve.ts";
export { solveBlock } from "./solve-block.ts";
export { sweepBlock } from "./sweep.ts";
export type {
  ActivityModel,
  AmountInput,
  Balance,
  BlockInput,
  Comparison,
  ConstantInput,
  ConstantUsed,
  Decimal,
  FamilyInput,
  FractionFormulas,
  Gives,
  Outcome,
  RowInput,
  SolvedBlock,
  Species,
  Sweep,
  Sweeps,
  Term,
} from "./types.ts";
export { ACTIVITY_MODELS } from "./types.ts";
export { ENGINE_VERSION } from "./version.ts";
export { debyeHuckelA25, MOLALITY_TO_CONCENTRATION_25, pKw25, TEMPERATURE_C, WATER_DENSITY_25_KG_L } from "./water.ts";
