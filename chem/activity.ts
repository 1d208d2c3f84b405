// Activity models: what one says of an ion's activity coefficient, and where it may be trusted.

import type { ActivityModel } from "./types.ts";

/** The Davies equation's linear term, per mol/L. C. W. Davies, Ion Association, Butterworths, London 1962 (from memory). */
export const DAVIES_LINEAR = 0.3;

export type ModelRange = {
  label: string;
  rangeText: string /** mol/L; null: no ions at all */;
  maxIonicStrength: number | null;
};

/** The models' names and the ionic strengths up to which each is usually trusted. */
export const MODEL_RANGES = {
  ideal: {
    label: "Ideal (activity coefficients 1)",
    rangeText:
      "exact only at infinite dilution; below about 0.001 mol/L ionic strength the error in pH stays under 0.02",
    maxIonicStrength: null,
  },
  davies: {
    label: "Davies (0.3 I)",
    rangeText: "to about 0.5 mol/L ionic strength",
    maxIonicStrength: 0.5,
  },
} as const satisfies Record<ActivityModel, ModelRange>;

/**
 * ln γ of a singly charged ion; an ion of charge z has z² times as much, a neutral species none.
 * Davies: lg γ = −A z² (√I / (1 + √I) − 0.3 I).
 * @param A  base-10 Debye–Hückel coefficient at the temperature, L^½ mol^-½
 * @param I  ionic strength, mol/L, ≥ 0
 */
export function lnGammaOfUnitCharge(model: ActivityModel, A: number, I: number): number {
  switch (model) {
    case "ideal":
      return 0;
    case "davies": {
      const root = Math.sqrt(I);
      return -Math.LN10 * A * (root / (1 + root) - DAVIES_LINEAR * I);
    }
  }
}

/**
 * The constant at I = 0 that the Davies equation gives for a concentration constant measured at ionic strength `I`.
 * pK° = pK' − lg γ(H+) − lg γ(base) + lg γ(acid); for an acid of charge z that is 2 (1 − z) times −lg γ of a unit charge.
 * @param pK   −lg of [H+][base]/[acid] at ionic strength I
 * @param z    charge of the acid of the step
 */
export function daviesConstantAtZero(pK: number, z: number, A: number, I: number): number {
  return pK - (2 * (1 - z) * lnGammaOfUnitCharge("davies", A, I)) / Math.LN10;
}
