// The equilibrium block's answer: inputs as typed in, the stored result out.

import { MODEL_RANGES } from "./activity.ts";
import { writeBalances } from "./balances.ts";
import type { Refusal } from "./errors.ts";
import {
  CONDITIONAL_LATEX,
  DAVIES_LATEX,
  IONIC_STRENGTH_LATEX,
  PH_DAVIES_LATEX,
  PH_IDEAL_LATEX,
  SCALE_LATEX,
  valueLatex,
  WATER_DAVIES_LATEX,
  WATER_IDEAL_LATEX,
} from "./latex.ts";
import type { ReadBlock } from "./read-block.ts";
import { readBlock } from "./read-block.ts";
import { shown } from "./refuse.ts";
import { checkCharge } from "./second-opinion.ts";
import type { Root } from "./solve.ts";
import { solve } from "./solve.ts";
import type { BlockInput, ConstantUsed, Outcome, SolvedBlock } from "./types.ts";
import { ENGINE_VERSION } from "./version.ts";
import { warningsOf } from "./warnings.ts";
import { MOLALITY_TO_CONCENTRATION_25 } from "./water.ts";

/**
 * Beyond these a number is no pH any more. The most acidic and alkaline solutions known lie within; an activity model that is
 * driven far past its range does not.
 */
const PLAUSIBLE_PH = { low: -10, high: 25 };

/**
 * Solves an equilibrium block by the proton condition: bracketed, safeguarded Newton iteration, self-consistent ionic strength. pH is
 * −lg a(H+); concentrations are mol/L at 25 °C. Refuses with every field that is wrong, and refuses rather than return an
 * iterate that did not converge or that the charge balance contradicts.
 */
export function solveBlock(input: BlockInput): Outcome<SolvedBlock> {
  const read = readBlock(input);
  if (!read.ok) return read;
  const { block } = read;
  const solution = solve(block.mixture);
  if (!solution.ok)
    return refused(
      "solve.no-convergence",
      `No pH was found that can be vouched for: ${solution.reason} Check the amounts, or choose the ideal model.`,
    );
  const { root } = solution;
  if (root.pH < PLAUSIBLE_PH.low || root.pH > PLAUSIBLE_PH.high)
    return refused(
      "solve.no-convergence",
      "The composition lies so far outside the activity model that no sensible pH comes of it. Check the amounts and their units, or choose the ideal model.",
    );
  const opinion = checkCharge(block.mixture, root);
  if (!opinion.agrees)
    return refused(
      "solve.contradiction",
      `The charge balance, calculated apart, contradicts the result (${shown(opinion.imbalance)} mol/L left over). No pH is shown; please report this block.`,
    );
  const solved = answerOf(input, block, root);
  return { ok: true, value: solved, warnings: warningsOf(input, block, solved) };
}

function refused(code: Refusal["code"], text: string): Outcome<SolvedBlock> {
  return { ok: false, refusals: [{ code, field: "rows", value: null, text }] };
}

function answerOf(input: BlockInput, block: ReadBlock, root: Root): SolvedBlock {
  const { activity: model, pKw } = input.conditions;
  const { rangeText, label, maxIonicStrength } = MODEL_RANGES[model];
  const written = writeBalances(input, block, root);
  const lgGamma1 = root.lnGamma1 / Math.LN10;
  const charges = new Set(written.species.map(({ z }) => Math.abs(z)));
  return {
    engine: ENGINE_VERSION,
    pH: root.pH,
    H: root.H,
    OH: root.OH,
    ionicStrength: root.ionicStrength,
    beta: root.beta,
    activity: { model, label, rangeText, A: block.mixture.A, maxIonicStrength },
    activityCoefficients: [...charges]
      .sort((a, b) => a - b)
      .map((z) => ({ z, gamma: Math.exp(root.lnGamma1 * z * z) })),
    pKw: { thermodynamic: block.mixture.pKw, conditional: block.mixture.pKw + 2 * lgGamma1, source: pKw.source },
    iterations: root.iterations,
    residual: root.residual,
    enclosure: root.enclosure,
    composition: input.rows.map((row, index) => ({
      row: row.id,
      name: row.name,
      formula: row.formula,
      concentration: block.concentrations[index] ?? 0,
    })),
    ...written,
    activityDefinitions: definitions(input, block, root),
    constants: constantsUsed(input, block, lgGamma1),
    leftOut: [
      ...new Set(block.ions.filter((ion) => ion.role === "metal" && ion.concentration > 0).map((ion) => ion.name)),
    ],
    comparison:
      block.measuredPH === null
        ? null
        : {
            measured: block.measuredPH,
            calculated: root.pH,
            difference: block.measuredPH - root.pH,
            jointUncertainty: null,
          },
  };
}

/** The constants with −lg of [H+][base]/[acid] at the solution's ionic strength beside them. */
function constantsUsed(input: BlockInput, block: ReadBlock, lgGamma1: number): ConstantUsed[] {
  return input.families.flatMap((family, f) =>
    family.constants.map((constant, step): ConstantUsed => {
      const pKa = block.mixture.families[f]?.pKa[step] ?? Number.NaN;
      const unitCharges = 2 * (1 - (family.z0 - step));
      return {
        ...constant,
        family: family.id,
        familyName: family.name,
        step: step + 1,
        conditional: pKa + unitCharges * lgGamma1,
      };
    }),
  );
}

function definitions(input: BlockInput, block: ReadBlock, root: Root): SolvedBlock["activityDefinitions"] {
  const I = {
    latex: IONIC_STRENGTH_LATEX,
    plain: "The ionic strength is half the sum, over all ions, of charge squared times concentration.",
  };
  const IValue = {
    latex: valueLatex("I", root.ionicStrength, "mol/L"),
    plain: `Ionic strength: ${shown(root.ionicStrength)} mol/L.`,
  };
  const scale = {
    latex: SCALE_LATEX,
    plain:
      `Thermodynamic constants are tabulated for molalities. For amount concentrations at 25 °C each such pKa was raised by ${MOLALITY_TO_CONCENTRATION_25} ` +
      "(minus lg of the density of water in kg/L); pKw stands as given, on the amount-concentration scale. Conditional constants were not shifted.",
  };
  if (input.conditions.activity === "ideal")
    return [
      {
        latex: PH_IDEAL_LATEX,
        plain: "pH is minus lg of the concentration of hydrogen ion; all activity coefficients are taken as 1.",
      },
      {
        latex: WATER_IDEAL_LATEX,
        plain: "The ion product of water is the product of the concentrations of hydrogen ion and hydroxide ion.",
      },
      I,
      IValue,
      scale,
    ];
  return [
    {
      latex: PH_DAVIES_LATEX,
      plain:
        "pH is minus lg of the activity of hydrogen ion: its concentration times the activity coefficient of a singly charged ion.",
    },
    {
      latex: DAVIES_LATEX,
      plain:
        "Davies equation: lg of the activity coefficient of an ion is minus A times its charge squared times (root I over one plus root I, minus 0.3 I). Neutral species have 1.",
    },
    {
      latex: valueLatex("A", block.mixture.A, "L^{1/2}\\,mol^{-1/2}"),
      plain: `Debye–Hückel A: ${input.conditions.debyeHuckelA.value}, ${input.conditions.debyeHuckelA.source}.`,
    },
    I,
    IValue,
    {
      latex: CONDITIONAL_LATEX,
      plain:
        "Conditional constant of a step at this ionic strength, in concentrations: the thermodynamic constant times the activity coefficient of the acid, over those of hydrogen ion and of the base.",
    },
    {
      latex: WATER_DAVIES_LATEX,
      plain:
        "The ion product of water in concentrations is the thermodynamic one over the square of the activity coefficient of a singly charged ion.",
    },
    scale,
  ];
}
