// The second opinion: a plain charge balance with every ion in it, coded apart from the proton condition and in twice the
// precision, must vanish at the root.

import type { TwoDoubles } from "./decimal.ts";
import { add, toTwoDoubles, ZERO } from "./decimal.ts";
import {
  ddAdd,
  ddDivide,
  ddMultiply,
  ddNegate,
  ddOne,
  ddPowerOfTen,
  ddSqrt,
  ddZero,
  fromNumber,
  fromText,
} from "./double-double.ts";
import type { Mixture } from "./mixture.ts";

/** What the imbalance may come to in pH: the root's own rounding and the tolerance of its ionic strength stay far below. */
const TOLERANCE_PH = 1e-10;
/** Relative terms below 10 to this are zero beside the largest. */
const NEGLIGIBLE = -60;

export type Opinion = {
  agrees: boolean;
  /** sum of charges times concentrations at the root, mol/L */
  imbalance: number;
  /** what would still pass, mol/L */
  bound: number;
};

/**
 * Sums charge times concentration over all ions at the given pH and ionic strength, in double-double arithmetic.
 * @param at  the root to be checked, and its buffer capacity in mol/L, which turns the imbalance into a difference in pH
 */
export function checkCharge(mixture: Mixture, at: { pH: number; ionicStrength: number; beta: number }): Opinion {
  const pH = fromNumber(at.pH);
  const lgGamma = lgGammaOfUnitCharge(mixture, at.ionicStrength);
  const H = ddPowerOfTen(ddNegate(ddAdd(pH, lgGamma)));
  const OH = ddPowerOfTen(ddAdd(ddAdd(pH, fromNumber(-mixture.pKw)), ddNegate(lgGamma)));
  let charge = ddAdd(H, ddNegate(OH));
  for (const ion of mixture.ions)
    charge = ddAdd(charge, ddMultiply(toTwoDoubles(ion.concentration), fromNumber(ion.z)));
  mixture.families.forEach((family, f) => {
    const total = mixture.components.reduce(
      (sum, component) => (component.family === f ? add(sum, component.concentration) : sum),
      ZERO,
    );
    charge = ddAdd(charge, ddMultiply(toTwoDoubles(total), meanCharge(family, pH, lgGamma)));
  });
  const imbalance = charge.hi + charge.lo;
  const bound = at.beta * TOLERANCE_PH;
  return { agrees: Math.abs(imbalance) <= bound, imbalance, bound };
}

/** Mean charge of a family: each form's lg of abundance from the first form's, the largest taken out, then the weighted mean. */
function meanCharge(family: Mixture["families"][number], pH: TwoDoubles, lgGamma: TwoDoubles): TwoDoubles {
  const z = (lost: number) => family.z0 - lost;
  let lg = ddZero;
  const abundances = [lg];
  family.pKa.forEach((pKa, step) => {
    const squares = z(step) ** 2 - z(step + 1) ** 2;
    lg = ddAdd(ddAdd(lg, ddAdd(pH, fromNumber(-pKa))), ddMultiply(lgGamma, fromNumber(squares)));
    abundances.push(lg);
  });
  const largest = abundances.reduce((most, one) => (one.hi > most.hi ? one : most), ddZero);
  let sum = ddZero;
  let charges = ddZero;
  abundances.forEach((abundance, lost) => {
    const relative = ddAdd(abundance, ddNegate(largest));
    if (relative.hi < NEGLIGIBLE) return;
    const weight = ddPowerOfTen(relative);
    sum = ddAdd(sum, weight);
    charges = ddAdd(charges, ddMultiply(weight, fromNumber(z(lost))));
  });
  return ddDivide(charges, sum);
}

function lgGammaOfUnitCharge(mixture: Mixture, ionicStrength: number): TwoDoubles {
  switch (mixture.activity) {
    case "ideal":
      return ddZero;
    case "davies": {
      const I = fromNumber(ionicStrength);
      const root = ddSqrt(I);
      const term = ddAdd(ddDivide(root, ddAdd(ddOne, root)), ddNegate(ddMultiply(fromText("0.3"), I)));
      return ddNegate(ddMultiply(fromNumber(mixture.A), term));
    }
  }
}
