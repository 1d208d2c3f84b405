// The words of the numerical core: what goes in, what comes out. Every quantity that a person typed stays the decimal
// string that was typed; numbers are derived from it here and nowhere else.

import type { Refusal, Warning } from "./errors.ts";

/** Decimal text as typed or as printed in a source, e.g. "0.100", "1e-7". Digits are kept; the number is derived. */
export type Decimal = string;

export const ACTIVITY_MODELS = ["ideal", "davies"] as const;
export type ActivityModel = (typeof ACTIVITY_MODELS)[number];

/** One dissociation constant, an immutable version of it. The step leads from the form missing n protons to the one missing n + 1. */
export type ConstantInput = {
  id: string;
  pKa: Decimal;
  basis: "thermodynamic" | "conditional";
  /** mol/L; null when thermodynamic (I = 0) */
  ionicStrength: Decimal | null;
  temperatureC: Decimal;
  /** standard uncertainty; null = not evaluated */
  uncertainty: Decimal | null;
  /** the citation in words */
  source: string;
  /** true: not yet compared with its source; shown so wherever the constant is shown */
  fromMemory: boolean;
  /** true: a strong step whose number is only a placeholder */
  nominal: boolean;
  /** what the literature disputes, in words, or null */
  disputed: string | null;
};

/** An acid with all its conjugate forms. `z0` is the charge of the fully protonated form; form i has lost i protons. */
export type FamilyInput = {
  id: string;
  name: string;
  z0: number;
  /** one more than `constants`; index = protons lost */
  forms: { name: string }[];
  constants: ConstantInput[];
};

/** What one formula unit puts into the water. Charges of a reagent's parts add up to zero. */
export type Gives =
  | { kind: "family"; family: string; lost: number; count: number }
  | { kind: "ion"; ion: string; name: string; z: number; count: number; role: "spectator" | "metal" }
  | { kind: "proton"; count: number }
  | { kind: "hydroxide"; count: number };

/** How the amount of a row was stated, with the digits as typed. */
export type AmountInput =
  | { kind: "concentration"; value: Decimal; unit: "mol/L" | "mmol/L" }
  | { kind: "mass"; value: Decimal; unit: "g" | "mg" | "kg"; molarMass: Decimal; massFraction: Decimal }
  | { kind: "volume"; value: Decimal; unit: "mL" | "L"; density: Decimal; molarMass: Decimal; massFraction: Decimal };

/** One line of the composition: a neutral substance of the library, or a form of a family, and how much of it. */
export type RowInput = {
  /** the row's id on the page; refusals name it as `rows.<id>.<field>` */
  id: string;
  /** reagent id of the library */
  reagent: string;
  name: string;
  formula: string;
  gives: Gives[];
  amount: AmountInput;
};

/** Everything that an equilibrium block's answer depends on; what is not here cannot change it. */
export type BlockInput = {
  families: FamilyInput[];
  rows: RowInput[];
  /** final volume; required as soon as one row is a mass or a volume */
  madeUpTo: { value: Decimal; unit: "L" | "mL" } | null;
  conditions: {
    temperatureC: Decimal;
    activity: ActivityModel;
    /** thermodynamic pKw at the temperature, amount-concentration scale, and where it comes from */
    pKw: { value: Decimal; source: string };
    /** Debye–Hückel A at the temperature (base 10, L^½ mol^-½), and where it comes from */
    debyeHuckelA: { value: Decimal; source: string };
  };
  /** a reading, compared and never used to solve */
  measuredPH: Decimal | null;
};

/** A quantity-bearing term of a written balance. */
export type Term = {
  /** LaTeX of the term, made from structure in latex.ts */
  latex: string;
  /** plain words for a screen reader and for the record, e.g. "2 times the concentration of dihydrogen citrate" */
  plain: string;
  side: "left" | "right";
  /** protons gained or lost, stoichiometric factor or charge: the coefficient in front */
  coefficient: number;
  /** value at the root, mol/L, coefficient included */
  value: number;
  /** the reference component (row) the term belongs to, or "water" */
  reference: string;
  /** what happens in the term, e.g. "hydrogen citrate → citric acid" or "water" */
  reaction: string;
};

/** One written balance: terms on two sides, both sums at the root and their difference. */
export type Balance = {
  kind: "proton-condition" | "proton-condition-component" | "mass" | "charge";
  /** what it is, in words, e.g. "Mass balance, citric acid" */
  title: string;
  terms: Term[];
  left: number;
  right: number;
  difference: number;
  /** bound on the rounding error of `difference`; |difference| below it reads "zero within rounding" */
  roundingBound: number;
  /** the whole balance as one display formula */
  latex: string;
  /** the same with the numbers put in */
  latexNumbers: string;
  /** one sentence or more for reading aloud and for the record */
  plain: string;
};

export type Species = {
  /** family id, or "water" for H+ and OH-, or "ion" for a strong ion */
  family: string;
  name: string;
  latex: string;
  z: number;
  /** protons lost; null for ions and water's own */
  lost: number | null;
  /** mol/L at the root */
  concentration: number;
  /** of the family's total; null for ions and water's own */
  fraction: number | null;
};

/** The fractions of one family with their shared denominator, as formulas and numbers. */
export type FractionFormulas = {
  family: string;
  name: string;
  /** one display formula per form, then the denominator last */
  latex: string[];
  plain: string;
  /** fractions at the root, index = protons lost */
  values: number[];
};

/** A constant as used: with the conditional value at the solution's ionic strength beside it. */
export type ConstantUsed = ConstantInput & { family: string; familyName: string; step: number; conditional: number };

export type Comparison = { measured: number; calculated: number; difference: number; jointUncertainty: number | null };

/** The stored answer of a block. Plain JSON; the stored pH is not rounded. */
export type SolvedBlock = {
  engine: string;
  pH: number;
  /** mol/L */
  H: number;
  OH: number;
  /** mol/L, self-consistent */
  ionicStrength: number;
  /** buffer capacity dC/dpH, mol/L */
  beta: number;
  activity: { model: ActivityModel; label: string; rangeText: string; A: number; maxIonicStrength: number | null };
  /** activity coefficient of each |charge| that occurs: what a pocket calculator needs */
  activityCoefficients: { z: number; gamma: number }[];
  pKw: { thermodynamic: number; conditional: number; source: string };
  iterations: number;
  /** P at the returned root, mol/L, with the bound on its rounding error */
  residual: { value: number; bound: number };
  /** P has opposite signs, beyond its rounding bound, at these two ends */
  enclosure: { lowPH: number; highPH: number };
  composition: { row: string; name: string; formula: string /** mol/L */; concentration: number }[];
  species: Species[];
  protonCondition: { components: Balance[]; sum: Balance };
  massBalances: Balance[];
  chargeBalance: Balance;
  fractions: FractionFormulas[];
  activityDefinitions: { latex: string; plain: string }[];
  constants: ConstantUsed[];
  /** named as left out: metals without complexes, solids, gases */
  leftOut: string[];
  comparison: Comparison | null;
};

/** One pass over pH: what is drawn and tabulated. Arrays of equal length. */
export type Sweep = {
  pH: number[];
  /** log10 |P|, mol/L */
  logResidual: number[];
  left: number[];
  right: number[];
  /** [family][lost][point] */
  fractions: { family: string; name: string; forms: string[]; latex: string[]; values: number[][] }[];
  beta: number[];
  H: number[];
  OH: number[];
};

export type Sweeps = { coarse: Sweep; refined: Sweep };

export type Outcome<T> = { ok: true; value: T; warnings: Warning[] } | { ok: false; refusals: Refusal[] };
