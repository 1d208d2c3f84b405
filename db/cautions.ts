// Cautions on mixing: which of the library's rules a composition meets. Where the page does not know (no result yet, no amount),
// a rule counts as met, because a caution too many costs less than one too few. No caution found is no statement of safety.
import { asc, eq } from "drizzle-orm";
import { z } from "zod";
import type { BlockInput, SolvedBlock } from "../chem/index.ts";
import type { EquilibriumBlock, LibrarySlice } from "../editor/schema/index.ts";
import type { Db } from "./client.ts";
import { mixing } from "./schema/library.ts";
import { settings } from "./schema/people.ts";

export type Caution = {
  id: string;
  severity: "danger" | "caution" | "note";
  text: string;
  source: string;
  fromMemory: boolean;
};

/** One line of a mixture, as far as it is known. */
export type MixtureRow = {
  /** compound id: `reagent:…` or `form:…` */
  compound: string;
  /** mol/L in the finished mixture; null = not known (no result, no amount): then every threshold counts as reached */
  concentration: number | null;
  /** how the amount was stated; a mass or volume of a concentrate means that the concentrate itself was poured */
  statedAs: "concentration" | "mass" | "volume";
};

/** What the cautions need of a library slice: what each compound gives, and the acids' constants. */
export type MixtureLibrary = Pick<LibrarySlice, "compounds" | "families">;

const numberText = z.string().regex(/^\d+(\.\d+)?$/);
const selectorShape = z
  .object({
    family: z.string(),
    ion: z.string(),
    reagent: z.string(),
    class: z.string(),
    material: z.string(),
    predicted: z.enum(["pH", "water", "heat", "contact"]),
    lostAtLeast: z.number().int(),
    minConcentration: numberText,
    below: numberText,
    above: numberText,
    minVolumeFraction: numberText,
    amountPerLitreAbove: numberText,
    with: z.literal("undiluted"),
  })
  .partial()
  .strict();
type Selector = z.infer<typeof selectorShape>;

const ruleShape = z.object({
  when: z.object({ all: z.array(z.object({ anyOf: z.array(selectorShape) })) }),
  remark: z.string().nullable(),
});

const classShape = z.object({
  rule: z.string().optional(),
  families: z.array(z.string()).optional(),
  ions: z.array(z.string()).optional(),
  reagents: z.array(z.string()).optional(),
});

export type MixingRules = {
  rules: (Caution & { all: { anyOf: Selector[] }[] })[];
  classes: Record<string, z.infer<typeof classShape>>;
};

/** Reads the rules from their table, each checked for shape: a selector that nobody knows is a fault, not a silent "no". */
export async function mixingRules(db: Db): Promise<MixingRules> {
  const rows = await db.select().from(mixing).orderBy(asc(mixing.id));
  const [kept] = await db.select({ value: settings.value }).from(settings).where(eq(settings.key, CLASSES_KEY));
  const classes = kept === undefined ? {} : z.record(z.string(), classShape).parse(JSON.parse(kept.value));
  return {
    rules: rows.map((row) => ({
      id: row.id,
      severity: z.enum(["danger", "caution", "note"]).parse(row.severity),
      text: row.text,
      source: row.source,
      fromMemory: row.fromMemory,
      all: ruleShape.parse(row.rule).when.all,
    })),
    classes,
  };
}

/** Where the import keeps the lists of classes ("acid", "amine", "oxidant" …) that rules refer to. */
const CLASSES_KEY = "library.mixing-classes";

/** The cautions that a mixture calls for, gravest first. `solved` is null when there is no result. */
export async function cautionsFor(
  db: Db,
  library: MixtureLibrary,
  rows: readonly MixtureRow[],
  solved: Pick<SolvedBlock, "pH"> | null,
): Promise<Caution[]> {
  return findCautions(await mixingRules(db), library, rows, solved?.pH ?? null);
}

/** The same over rules that are at hand. Pure. */
export function findCautions(
  { rules, classes }: MixingRules,
  library: MixtureLibrary,
  rows: readonly MixtureRow[],
  pH: number | null,
): Caution[] {
  const poured = rows.map((row) => pour(row, library));
  const mixture: Mixture = { poured, pH, classes, library };
  return rules
    .filter((rule) => poured.length > 0 && isMet(rule.all, mixture))
    .map(({ id, severity, text, source, fromMemory }) => ({ id, severity, text, source, fromMemory }))
    .sort((a, b) => SEVERITIES.indexOf(a.severity) - SEVERITIES.indexOf(b.severity) || (a.id < b.id ? -1 : 1));
}

const SEVERITIES = ["danger", "caution", "note"];

/** The lines of a block's canonical inputs, with concentrations from its result where there is one. */
export function mixtureOfInput(input: BlockInput, solved: Pick<SolvedBlock, "composition"> | null): MixtureRow[] {
  const concentrations = new Map(solved?.composition.map((line) => [line.row, line.concentration]));
  return input.rows.map((row) => ({
    compound: row.reagent.includes(":") ? row.reagent : `reagent:${row.reagent}`,
    concentration: concentrations.get(row.id) ?? null,
    statedAs: row.amount.kind,
  }));
}

/** The lines of a block as it stands on the page, whether or not it can be solved. */
export function mixtureOfBlock(block: Pick<EquilibriumBlock, "rows">): MixtureRow[] {
  return block.rows
    .filter((row) => row.compound !== "")
    .map((row) => {
      const inMoles = row.unit === "mol/L" ? 1 : row.unit === "mmol/L" ? 1e-3 : null;
      const typed = /^\d+([.,]\d+)?(e[+-]?\d+)?$/i.test(row.amount) ? Number(row.amount.replace(",", ".")) : null;
      return {
        compound: row.compound,
        concentration: inMoles === null || typed === null ? null : typed * inMoles,
        statedAs: inMoles !== null ? "concentration" : row.unit === "mL" || row.unit === "L" ? "volume" : "mass",
      };
    });
}

type Poured = {
  reagent: string | null;
  concentration: number | null;
  statedAs: MixtureRow["statedAs"];
  compound: LibrarySlice["compounds"][string] | null;
  families: { family: string; lost: number; count: number }[];
  ions: { ion: string; count: number }[];
  givesProtons: boolean;
};

type Mixture = {
  poured: Poured[];
  pH: number | null;
  classes: MixingRules["classes"];
  library: MixtureLibrary;
};

function pour(row: MixtureRow, library: MixtureLibrary): Poured {
  const compound = library.compounds[row.compound] ?? null;
  const gives = compound?.gives ?? [];
  return {
    reagent: row.compound.startsWith("reagent:") ? row.compound.slice("reagent:".length) : null,
    concentration: row.concentration,
    statedAs: row.statedAs,
    compound,
    families: gives.flatMap((part) => (part.kind === "family" ? [part] : [])),
    ions: gives.flatMap((part) => (part.kind === "ion" ? [part] : [])),
    givesProtons: gives.some((part) => part.kind === "proton"),
  };
}

/**
 * Every side needs one of its selectors. A side that says "heat" speaks of what the other sides found, so these are asked first.
 */
function isMet(all: readonly { anyOf: Selector[] }[], mixture: Mixture): boolean {
  let found: Poured[] = [];
  const later: Selector[][] = [];
  for (const { anyOf } of all) {
    if (anyOf.some((selector) => selector.predicted === "heat" || selector.predicted === "contact")) {
      later.push(anyOf);
      continue;
    }
    const side = anyOf.map((selector) => meets(selector, mixture));
    if (!side.some((one) => one.met)) return false;
    found = [...found, ...side.flatMap((one) => one.rows)];
  }
  return later.every((anyOf) => anyOf.some((selector) => meetsOf(selector, found, mixture)));
}

type Met = { met: boolean; rows: Poured[] };
const NOT_MET: Met = { met: false, rows: [] };

function meets(selector: Selector, mixture: Mixture): Met {
  if (selector.predicted === "pH") return { met: isPH(selector, mixture.pH), rows: [] };
  if (selector.predicted === "water") return { met: hasWater(selector, mixture), rows: [] };
  // What the liquid touches is not on the page yet, so no rule about a material can be met.
  if (selector.material !== undefined) return NOT_MET;
  const parts = mixture.poured.flatMap((row) => {
    const count = countOf(selector, row, mixture);
    return count === 0 ? [] : [{ row, count }];
  });
  const rows = parts.map((part) => part.row);
  if (rows.length === 0) return NOT_MET;
  if (selector.minConcentration === undefined) {
    const some = rows.filter((row) => row.concentration === null || row.concentration > 0);
    return { met: some.length > 0, rows: some };
  }
  const unknown = parts.some((part) => part.row.concentration === null);
  const sum = parts.reduce((total, part) => total + (part.row.concentration ?? 0) * part.count, 0);
  return { met: unknown || sum >= Number(selector.minConcentration), rows };
}

function meetsOf(selector: Selector, found: readonly Poured[], mixture: Mixture): boolean {
  if (selector.predicted === "heat") {
    const unknown = found.some((row) => row.concentration === null);
    const sum = found.reduce((total, row) => total + (row.concentration ?? 0), 0);
    return unknown || sum > Number(selector.amountPerLitreAbove ?? "0");
  }
  // The page does not know in which order things were poured: a concentrate taken by mass or volume may meet the rest undiluted.
  if (selector.predicted === "contact")
    return found.some((row) => row.reagent !== null && row.statedAs !== "concentration");
  return meets(selector, mixture).met;
}

function isPH(selector: Selector, pH: number | null): boolean {
  if (pH === null) return false;
  if (selector.below !== undefined) return pH < Number(selector.below);
  return selector.above !== undefined && pH > Number(selector.above);
}

/** A composition of the page is always made up with water, so it is there unless concentrates fill the volume by themselves. */
function hasWater(selector: Selector, { poured }: Mixture): boolean {
  let filled = 0;
  for (const { compound, concentration } of poured) {
    if (compound?.density == null || compound.massFraction == null || concentration === null) continue;
    const litresPerMole =
      Number(compound.molarMass) / (1000 * Number(compound.density) * Number(compound.massFraction));
    filled += concentration * litresPerMole;
  }
  return 1 - filled >= Number(selector.minVolumeFraction ?? "0");
}

/** How many moles of what the selector asks for one mole of the row brings; 0 = none. */
function countOf(selector: Selector, row: Poured, mixture: Mixture): number {
  if (selector.family !== undefined) {
    return row.families
      .filter((part) => part.family === selector.family && part.lost >= (selector.lostAtLeast ?? 0))
      .reduce((sum, part) => sum + part.count, 0);
  }
  if (selector.ion !== undefined) return countIon(selector.ion, row);
  if (selector.reagent !== undefined) return row.reagent === selector.reagent ? 1 : 0;
  if (selector.class === "acid") return isAcid(row, mixture.library) ? 1 : 0;
  if (selector.class !== undefined) return countClass(selector.class, row, mixture);
  return 0;
}

function countIon(ion: string, row: Poured): number {
  return row.ions.filter((part) => part.ion === ion).reduce((sum, part) => sum + part.count, 0);
}

function countClass(name: string, row: Poured, mixture: Mixture): number {
  const members = mixture.classes[name];
  if (members === undefined) throw new Error(`The mixing rules name a class "${name}" that the library lacks.`);
  if (row.reagent !== null && members.reagents?.includes(row.reagent)) return 1;
  const families = row.families.filter((part) => members.families?.includes(part.family));
  const ions = row.ions.filter((part) => members.ions?.includes(part.ion));
  return [...families, ...ions].reduce((sum, part) => sum + part.count, 0);
}

/** Below this, what a form can still lose counts as acid: the library's own rule for the class. */
const ACID_PKA = 7;

/** Gives a proton, or a family's form that can still lose one with a pKa below 7. */
function isAcid(row: Poured, library: MixtureLibrary): boolean {
  if (row.givesProtons) return true;
  return row.families.some((part) => {
    const next = library.families[part.family]?.constants.slice(part.lost) ?? [];
    return next.some((constant) => Number(constant.pKa) < ACID_PKA);
  });
}
