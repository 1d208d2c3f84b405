// The written balances of a solved block, as structure: which species stands on which side, times what, and what it comes to at
// the root. Formulas are made from it in latex.ts.

import {
  bracket,
  constantLatex,
  equationLatex,
  fractionLatex,
  fractionTermLatex,
  HYDROXIDE_LATEX,
  labelLatex,
  namedSumsLatex,
  numbersLatex,
  PROTON_LATEX,
  speciesLatex,
  times,
} from "./latex.ts";
import type { ReadBlock } from "./read-block.ts";
import { shown } from "./refuse.ts";
import type { Root } from "./solve.ts";
import type { FamilySymbols } from "./symbols.ts";
import { familySymbols, ionSymbol } from "./symbols.ts";
import type { Balance, BlockInput, FractionFormulas, Species, Term } from "./types.ts";

const EPSILON = Number.EPSILON;
/** Roundings that a term has been through, in half units in the last place, beside four for each step of its family. */
const ROUNDINGS = 16;
export const WATER = "water";
export const ION = "ion";

export type WrittenBalances = {
  species: Species[];
  protonCondition: { components: Balance[]; sum: Balance };
  massBalances: Balance[];
  chargeBalance: Balance;
  fractions: FractionFormulas[];
};

/** Writes all balances of a solved block, with the numbers at its root. */
export function writeBalances(input: BlockInput, block: ReadBlock, root: Root): WrittenBalances {
  const symbols = familySymbols(input.families);
  const species = writeSpecies(input, block, root, symbols);
  return {
    species,
    protonCondition: writeProtonCondition(input, block, root, symbols),
    massBalances: input.families.map((_, f) => writeMassBalance(input, block, root, symbols, f)),
    chargeBalance: writeChargeBalance(input, species),
    fractions: input.families.map((family, f) => writeFractions(input, family.id, family.name, f, symbols, root)),
  };
}

/** Amount concentration of a whole family, mol/L. */
export function familyTotal(block: ReadBlock, f: number): number {
  return block.parts.reduce((total, part) => (part.family === f ? total + part.concentration : total), 0);
}

function writeSpecies(input: BlockInput, block: ReadBlock, root: Root, symbols: FamilySymbols[]): Species[] {
  const species: Species[] = [
    {
      family: WATER,
      name: "hydrogen ion",
      latex: PROTON_LATEX,
      z: 1,
      lost: null,
      concentration: root.H,
      fraction: null,
    },
    {
      family: WATER,
      name: "hydroxide ion",
      latex: HYDROXIDE_LATEX,
      z: -1,
      lost: null,
      concentration: root.OH,
      fraction: null,
    },
  ];
  input.families.forEach((family, f) => {
    const total = familyTotal(block, f);
    family.forms.forEach((form, lost) => {
      const fraction = root.fractions[f]?.[lost] ?? 0;
      species.push({
        family: family.id,
        name: form.name,
        latex: formLatex(input, symbols, f, lost),
        z: family.z0 - lost,
        lost,
        concentration: total * fraction,
        fraction,
      });
    });
  });
  for (const ion of block.ions) {
    const latex = speciesLatex(ionSymbol(ion.ion), ion.z);
    species.push({
      family: ION,
      name: ion.name,
      latex,
      z: ion.z,
      lost: null,
      concentration: ion.concentration,
      fraction: null,
    });
  }
  return species;
}

function formLatex(input: BlockInput, symbols: FamilySymbols[], f: number, lost: number): string {
  return speciesLatex(symbols[f]?.forms[lost] ?? "", (input.families[f]?.z0 ?? 0) - lost);
}

/** A family's fraction terms in a row's line of the proton condition, and water's own line. */
function writeProtonCondition(
  input: BlockInput,
  block: ReadBlock,
  root: Root,
  symbols: FamilySymbols[],
): WrittenBalances["protonCondition"] {
  const waterTerms: Term[] = [
    {
      latex: bracket(PROTON_LATEX),
      plain: "the concentration of hydrogen ion",
      side: "left",
      coefficient: 1,
      value: root.H,
      reference: WATER,
      reaction: "water → hydrogen ion (one proton gained)",
    },
    {
      latex: bracket(HYDROXIDE_LATEX),
      plain: "the concentration of hydroxide ion",
      side: "right",
      coefficient: 1,
      value: root.OH,
      reference: WATER,
      reaction: "water → hydroxide ion (one proton lost)",
    },
  ];
  const components = [balance(input, "proton-condition-component", "Protons gained and lost, water", waterTerms, true)];
  const all = [...waterTerms];
  input.rows.forEach((row, index) => {
    const terms = [...familyTerms(input, block, root, symbols, index), ...strongTerms(input, block, index)];
    if (terms.length === 0) return;
    all.push(...terms);
    components.push(
      balance(
        input,
        "proton-condition-component",
        `Protons gained and lost, ${row.name} (row ${index + 1})`,
        terms,
        true,
      ),
    );
  });
  return { components, sum: balance(input, "proton-condition", "Proton condition", all, false) };
}

function familyTerms(input: BlockInput, block: ReadBlock, root: Root, symbols: FamilySymbols[], row: number): Term[] {
  const terms: Term[] = [];
  for (const part of block.parts) {
    const family = input.families[part.family];
    if (part.row !== row || family === undefined) continue;
    const alone = block.parts.filter((other) => other.family === part.family).length === 1;
    const from = family.forms[part.lost]?.name ?? "";
    family.forms.forEach((form, lost) => {
      const protons = Math.abs(part.lost - lost);
      if (protons === 0) return;
      const side = lost < part.lost ? "left" : "right";
      const species = formLatex(input, symbols, part.family, lost);
      const coefficient = alone ? protons : protons * part.count;
      const what = alone
        ? `the concentration of ${form.name}`
        : `the concentration C${row + 1} of ${input.rows[row]?.name ?? ""} and the fraction of ${form.name}`;
      terms.push({
        latex: times(coefficient, alone ? bracket(species) : `C_{${row + 1}}\\,\\alpha_{${species}}`),
        plain: coefficient === 1 ? what : `${coefficient} times ${what}`,
        side,
        coefficient,
        value: protons * part.concentration * (root.fractions[part.family]?.[lost] ?? 0),
        reference: input.rows[row]?.id ?? "",
        reaction: `${from} → ${form.name} (${counted(protons, "proton")} ${side === "left" ? "gained" : "lost"})`,
      });
    });
  }
  return terms;
}

function strongTerms(input: BlockInput, block: ReadBlock, row: number): Term[] {
  const { name = "", id = "" } = input.rows[row] ?? {};
  return block.strongParts
    .filter((part) => part.row === row)
    .map((part): Term => {
      const acid = part.kind === "proton";
      const what = `the concentration C${row + 1} of ${name}`;
      return {
        latex: times(part.count, `C_{${row + 1}}`),
        plain: part.count === 1 ? what : `${part.count} times ${what}`,
        side: acid ? "right" : "left",
        coefficient: part.count,
        value: part.concentration,
        reference: id,
        reaction: acid
          ? `${name}, a strong acid: all its protons lost`
          : `${name}, a strong base: all its hydroxide a proton short of water`,
      };
    });
}

function writeMassBalance(
  input: BlockInput,
  block: ReadBlock,
  root: Root,
  symbols: FamilySymbols[],
  f: number,
): Balance {
  const family = input.families[f];
  const total = familyTotal(block, f);
  const terms: Term[] = [];
  for (const part of block.parts) {
    if (part.family !== f) continue;
    const name = input.rows[part.row]?.name ?? "";
    terms.push({
      latex: times(part.count, `C_{${part.row + 1}}`),
      plain: `${part.count === 1 ? "" : `${part.count} times `}the concentration C${part.row + 1} of ${name}`,
      side: "left",
      coefficient: part.count,
      value: part.concentration,
      reference: input.rows[part.row]?.id ?? "",
      reaction: `what ${name} puts into the water`,
    });
  }
  family?.forms.forEach((form, lost) => {
    terms.push({
      latex: bracket(formLatex(input, symbols, f, lost)),
      plain: `the concentration of ${form.name}`,
      side: "right",
      coefficient: 1,
      value: total * (root.fractions[f]?.[lost] ?? 0),
      reference: family.id,
      reaction: form.name,
    });
  });
  return balance(input, "mass", `Mass balance, ${family?.name ?? ""}`, terms, false);
}

function writeChargeBalance(input: BlockInput, species: Species[]): Balance {
  const terms = species
    .filter(({ z }) => z !== 0)
    .map((one): Term => {
      const size = Math.abs(one.z);
      return {
        latex: times(size, bracket(one.latex)),
        plain: `${size === 1 ? "" : `${size} times `}the concentration of ${one.name}`,
        side: one.z > 0 ? "left" : "right",
        coefficient: size,
        value: size * one.concentration,
        reference: one.family,
        reaction: one.name,
      };
    });
  return balance(input, "charge", "Charge balance", terms, false);
}

/** Adds a balance up. A component's line is no equation by itself: it names gains and losses, and only their sum over all lines is zero. */
function balance(input: BlockInput, kind: Balance["kind"], title: string, terms: Term[], line: boolean): Balance {
  const onSide = (side: Term["side"]) => terms.filter((term) => term.side === side);
  const [left, right] = [onSide("left"), onSide("right")];
  const sum = (side: Term[]) => side.reduce((total, term) => total + term.value, 0);
  const latexOf = (side: Term[]) => side.map((term) => term.latex);
  const [leftSum, rightSum] = [sum(left), sum(right)];
  const steps = input.families.reduce((most, family) => Math.max(most, family.constants.length), 0);
  const roundings = ROUNDINGS + 4 * steps + terms.length;
  const plainOf = (side: Term[]) => (side.length === 0 ? "nothing" : side.map((term) => term.plain).join(", plus "));
  const numbers = `${shown(leftSum)} against ${shown(rightSum)} mol/L`;
  return {
    kind,
    title,
    terms,
    left: leftSum,
    right: rightSum,
    difference: leftSum - rightSum,
    roundingBound: (roundings * EPSILON * (leftSum + rightSum)) / 2,
    latex: line
      ? namedSumsLatex([
          { name: "\\text{gained}", terms: latexOf(left) },
          { name: "\\text{lost}", terms: latexOf(right) },
        ])
      : equationLatex(latexOf(left), latexOf(right)),
    latexNumbers: numbersLatex(
      left.map((term) => term.value),
      right.map((term) => term.value),
    ),
    plain: line
      ? `${title}. Gained: ${plainOf(left)}. Lost: ${plainOf(right)}. At the root: ${numbers}.`
      : `${title}: ${plainOf(left)}, equals ${plainOf(right)}. At the root: ${numbers}.`,
  };
}

function writeFractions(
  input: BlockInput,
  id: string,
  name: string,
  f: number,
  symbols: FamilySymbols[],
  root: Root,
): FractionFormulas {
  const family = input.families[f];
  const label = symbols[f]?.label ?? "";
  const steps = family?.constants.length ?? 0;
  const conditional = input.conditions.activity !== "ideal";
  const constants = Array.from({ length: steps }, (_, k) => constantLatex(label, k + 1, conditional));
  const denominator = `D_{${labelLatex(label)}}`;
  const terms = Array.from({ length: steps + 1 }, (_, lost) => fractionTermLatex(constants, steps, lost));
  const formulas = terms.map((term, lost) => fractionLatex(formLatex(input, symbols, f, lost), term, denominator));
  const forms = family?.forms.map((form) => form.name) ?? [];
  return {
    family: id,
    name,
    latex: [...formulas, equationLatex([denominator], terms)],
    plain:
      `Fractions of ${name}: each form's term over the sum of all ${forms.length} terms. The term of the form that lost j of ${counted(steps, "proton")} is ` +
      `the concentration of hydrogen ion to the power ${steps} minus j, times the first j ${conditional ? "conditional " : ""}constants. At the root: ` +
      `${forms.map((form, lost) => `${form} ${shown(root.fractions[f]?.[lost] ?? 0)}`).join(", ")}.`,
    values: root.fractions[f] ?? [],
  };
}

function counted(number: number, noun: string): string {
  return `${number} ${noun}${number === 1 ? "" : "s"}`;
}
