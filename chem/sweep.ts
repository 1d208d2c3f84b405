// One pass over pH for what is drawn and tabulated. It reads the written balance at each pH; the root itself was found by bracketing.

import { speciesLatex } from "./latex.ts";
import type { Work } from "./mixture.ts";
import { LEFT, prepare, RIGHT, takeNearestLevels } from "./mixture.ts";
import type { ReadBlock } from "./read-block.ts";
import { readBlock } from "./read-block.ts";
import { evaluate, fillFractions, setIonicStrength } from "./root.ts";
import { capacity, roundingBound } from "./solve.ts";
import { familySymbols } from "./symbols.ts";
import type { BlockInput, SolvedBlock, Sweep, Sweeps } from "./types.ts";

/** What is usually drawn; the root's surroundings are always inside. */
const COARSE_LOW = -1;
const COARSE_HIGH = 15;
const COARSE_STEP = 0.02;
const ROOM = 1;
const REFINED_HALF_WIDTH = 0.02;
const REFINED_STEP = 0.0002;

/**
 * Tabulates both sides of the written proton condition, their difference, the fractions and the buffer capacity against pH, at the
 * activity coefficients of the solution: over the whole range, and finely round the root.
 * @param input   the inputs that gave `solved`; throws a RangeError when they are not solvable
 */
export function sweepBlock(input: BlockInput, solved: SolvedBlock): Sweeps {
  const read = readBlock(input);
  if (!read.ok) throw new RangeError(`not solvable: ${read.refusals.map((refusal) => refusal.code).join(", ")}`);
  const { block } = read;
  const work = prepare(block.mixture);
  setIonicStrength(work, solved.ionicStrength);
  const low = Math.min(COARSE_LOW, Math.floor(solved.pH - ROOM));
  const high = Math.max(COARSE_HIGH, Math.ceil(solved.pH + ROOM));
  const steps = Math.round((high - low) / COARSE_STEP);
  const coarse = Float64Array.from({ length: steps + 1 }, (_, k) => low + ((high - low) * k) / steps);
  const half = Math.round(REFINED_HALF_WIDTH / REFINED_STEP);
  const refined = Float64Array.from(
    { length: 2 * half + 1 },
    (_, k) => solved.pH + ((k - half) * REFINED_HALF_WIDTH) / half,
  );
  return { coarse: sweep(input, block, work, coarse), refined: sweep(input, block, work, refined) };
}

function sweep(input: BlockInput, block: ReadBlock, work: Work, pHs: Float64Array): Sweep {
  const points = pHs.length;
  const symbols = familySymbols(input.families);
  const result: Sweep = {
    pH: Array.from(pHs),
    logResidual: new Array<number>(points).fill(0),
    left: new Array<number>(points).fill(0),
    right: new Array<number>(points).fill(0),
    fractions: input.families.map((family, f) => ({
      family: family.id,
      name: family.name,
      forms: family.forms.map((form) => form.name),
      latex: family.forms.map((_, lost) => speciesLatex(symbols[f]?.forms[lost] ?? "", family.z0 - lost)),
      values: family.forms.map(() => new Array<number>(points).fill(0)),
    })),
    beta: new Array<number>(points).fill(0),
    H: new Array<number>(points).fill(0),
    OH: new Array<number>(points).fill(0),
  };
  // Concentration of each family by the form it was poured in, so that a point costs forms, not rows times forms.
  const poured = input.families.map((family, f) =>
    family.forms.map((_, lost) =>
      block.parts.reduce((sum, part) => (part.family === f && part.lost === lost ? sum + part.concentration : sum), 0),
    ),
  );
  const strongAcid = block.strongParts.reduce(
    (sum, part) => (part.kind === "proton" ? sum + part.concentration : sum),
    0,
  );
  const strongBase = block.strongParts.reduce(
    (sum, part) => (part.kind === "hydroxide" ? sum + part.concentration : sum),
    0,
  );
  const alpha = new Float64Array(work.maxSteps + 1);
  for (let k = 0; k < points; k++) {
    const h = 10 ** -(pHs[k] ?? 0);
    evaluate(work, h);
    takeNearestLevels(work);
    evaluate(work, h);
    const H = h / work.gamma1;
    const OH = work.Kw0 / (h * work.gamma1);
    let left = H + strongBase;
    let right = OH + strongAcid;
    for (let f = 0; f < work.families; f++) {
      const forms = poured[f] ?? [];
      const values = result.fractions[f]?.values ?? [];
      fillFractions(work, f, h, alpha);
      for (let j = 0; j < forms.length; j++) {
        const share = alpha[j] ?? 0;
        const column = values[j];
        if (column !== undefined) column[k] = share;
        for (let reference = 0; reference < forms.length; reference++) {
          const C = forms[reference] ?? 0;
          if (reference > j) left += C * (reference - j) * share;
          else right += C * (j - reference) * share;
        }
      }
    }
    // The difference is taken where nothing large cancels, and never drawn below what rounding lets one see.
    const residual = Math.abs((work.sums[LEFT] ?? 0) - (work.sums[RIGHT] ?? 0));
    result.logResidual[k] = Math.log10(Math.max(residual, roundingBound(work)));
    result.left[k] = left;
    result.right[k] = right;
    result.beta[k] = capacity(work);
    result.H[k] = H;
    result.OH[k] = OH;
  }
  return result;
}
