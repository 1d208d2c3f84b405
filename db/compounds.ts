// The library as asked by the page: what a name means, what a substance gives, what belongs together, what hazards are on file.
import { and, asc, desc, eq, inArray, or, type SQL, sql } from "drizzle-orm";
import { z } from "zod";
import type { ConstantInput, FamilyInput, Gives } from "../chem/index.ts";
import { debyeHuckelA25, pKw25 } from "../chem/index.ts";
import type { LibrarySlice } from "../editor/schema/index.ts";
import type { Db } from "./client.ts";
import { comparedFormula, looseFormulas, parseFormula, writtenFormula } from "./formula.ts";
import type { CasCheck } from "./names.ts";
import { casDigits, checkCas, comparedName, isCasShape } from "./names.ts";
import { compoundFamilies, compoundNames, constants, families, hazards, reagents } from "./schema/library.ts";

export type CompoundKind = "reagent" | "family" | "form";

export type CompoundItem = {
  id: string;
  kind: CompoundKind;
  name: string;
  formula: string;
  cas: string | null;
  molarMass: string | null;
  /** "crystals", "aqueous solution" … of a reagent; "family" or "form" else */
  form: string;
  /** current constant versions of the families in it */
  constants: string[];
  /** ids of the families in it */
  families: string[];
  massFraction: string | null;
  density: string | null;
  typicalPurity: string | null;
  /** true when it can stand in a composition by itself */
  neutral: boolean;
  /** the name, synonym, number or formula that the question met */
  matched: string;
};

export type CompoundSearch = {
  items: CompoundItem[];
  /** set when the text is a CAS RN whose check digit does not fit; then there are no items */
  casCheck: CasCheck | null;
};

const MOST_CANDIDATES = 300;
const LONGEST_QUESTION = 200;

/**
 * Finds compounds by name, synonym, CAS RN or formula: exact before prefix before beginnings of words before misspelt.
 * A CAS RN with a wrong check digit finds nothing and says which digit was expected.
 */
export async function searchCompounds(db: Db, text: string, limit: number): Promise<CompoundSearch> {
  const asked = text.normalize("NFC").trim().slice(0, LONGEST_QUESTION);
  if (isCasShape(asked)) {
    const casCheck = checkCas(asked);
    if (casCheck !== null) return { items: [], casCheck };
  }
  const found = await findNames(db, asked, limit);
  const best = new Map<string, string>();
  for (const row of found) if (!best.has(row.compoundId)) best.set(row.compoundId, row.shown);
  const ids = [...best.keys()].slice(0, limit);
  const items = await compoundItems(db, ids);
  return { items: items.map((item) => ({ ...item, matched: best.get(item.id) ?? item.name })), casCheck: null };
}

/** Items for ids, in their order; unknown ids are left out. */
export async function compoundItems(db: Db, ids: readonly string[]): Promise<CompoundItem[]> {
  return (await substances(db, ids)).map(({ item }) => item);
}

/** A compound with what one formula unit gives; a family as such gives nothing. */
type Substance = { item: CompoundItem; gives: Gives[] };

async function substances(db: Db, ids: readonly string[]): Promise<Substance[]> {
  const asked = ids.map(parseCompoundId);
  const reagentIds = asked.flatMap((id) => (id?.kind === "reagent" ? [id.reagent] : []));
  const rows = reagentIds.length === 0 ? [] : await db.select().from(reagents).where(inArray(reagents.id, reagentIds));
  const byReagent = new Map(rows.map((row) => [row.id, { ...row, gives: givesShape.parse(row.gives) }]));
  const familyIds = new Set(asked.flatMap((id) => (id === null || id.kind === "reagent" ? [] : [id.family])));
  for (const row of byReagent.values()) for (const id of familiesOf(row.gives)) familyIds.add(id);
  const byFamily = await familyRows(db, [...familyIds]);
  const current = await currentConstants(db, [...familyIds]);
  const constantsOf = (of: readonly string[]) => of.flatMap((id) => (current.get(id) ?? []).map((row) => row.id));
  return ids.flatMap((id): Substance[] => {
    const parsed = parseCompoundId(id);
    if (parsed === null) return [];
    if (parsed.kind === "reagent") {
      const row = byReagent.get(parsed.reagent);
      if (row === undefined) return [];
      const inIt = familiesOf(row.gives);
      const { name, formula, cas, molarMass, physicalForm: form, massFraction, density, typicalPurity, gives } = row;
      const known = { name, formula, cas, molarMass, form, massFraction, density, typicalPurity };
      const item: CompoundItem = {
        id,
        kind: "reagent",
        ...known,
        constants: constantsOf(inIt),
        families: inIt,
        neutral: true,
        matched: name,
      };
      return [{ item, gives }];
    }
    const family = byFamily.get(parsed.family);
    if (family === undefined) return [];
    const shared = {
      id,
      constants: constantsOf([family.id]),
      families: [family.id],
      massFraction: null,
      density: null,
      typicalPurity: null,
    };
    const { cas, molarMass } = family;
    if (parsed.kind === "family") {
      const { name } = family;
      const formula = formFormula(family.formula, 0);
      return [
        {
          item: {
            ...shared,
            kind: "family",
            name,
            formula,
            cas,
            molarMass,
            form: "family",
            neutral: false,
            matched: name,
          },
          gives: [],
        },
      ];
    }
    const name = family.forms[parsed.lost];
    if (name === undefined) return [];
    const z = family.z0 - parsed.lost;
    const formula = formFormula(family.formula, z);
    // The library states number and molar mass of the uncharged parent only.
    const known = z === 0 ? { cas, molarMass, neutral: true } : { cas: null, molarMass: null, neutral: false };
    return [
      {
        item: { ...shared, kind: "form", name, formula, ...known, form: "form", matched: name },
        gives: [{ kind: "family", family: family.id, lost: parsed.lost, count: 1 }],
      },
    ];
  });
}

/** Names of compounds by id; an unknown id is left out. */
export async function namesOf(db: Db, ids: readonly string[]): Promise<Record<string, string>> {
  const items = await compoundItems(db, [...new Set(ids)]);
  return Object.fromEntries(items.map((item) => [item.id, item.name]));
}

/**
 * What canonicalInputs needs about the compounds of a block: what they give, and their families with the pinned versions of the
 * constants, or the current ones where nothing is pinned. Compounds and families that the library lacks are absent.
 */
export async function slice(
  db: Db,
  compoundIds: readonly string[],
  constantIds: readonly string[],
): Promise<LibrarySlice> {
  const found = await substances(db, [...new Set(compoundIds)]);
  const compounds: LibrarySlice["compounds"] = {};
  for (const { item, gives } of found) {
    // A family by itself is no substance: it may be mentioned, but it has no place in a composition.
    if (item.kind === "family") continue;
    const { name, formula, cas, molarMass, density, massFraction } = item;
    compounds[item.id] = { name, formula, cas, molarMass, gives, density, massFraction };
  }
  const familyIds = [...new Set(found.flatMap(({ item }) => item.families))];
  return {
    compounds,
    families: await familyInputs(db, familyIds, constantIds),
    water: { pKw: pKw25, debyeHuckelA: debyeHuckelA25 },
  };
}

/** Constant ids that the library does not have, so that a page cannot pin what nobody entered. */
export async function unknownConstants(db: Db, ids: readonly string[]): Promise<string[]> {
  if (ids.length === 0) return [];
  const rows = await db
    .select({ id: constants.id })
    .from(constants)
    .where(inArray(constants.id, [...ids]));
  const known = new Set(rows.map((row) => row.id));
  return ids.filter((id) => !known.has(id));
}

export type Expansion = {
  /** what was asked */
  compound: { id: string; name: string };
  /** acids whose forms, salts, hydrates and solutions are taken in; "ion:…" where a strong acid is known by its anion only */
  families: { id: string; name: string }[];
  compounds: {
    id: string;
    name: string;
    formula: string;
    kind: "acid family" | "form" | "salt" | "hydrate" | "solution" | "substance";
  }[];
  /** condensed acids of the same element: families of their own, not taken in */
  separate: { id: string; name: string; note: string }[];
};

/** Everything that a search for the compound takes in unless it is narrowed, with what it deliberately leaves out. */
export async function expansion(db: Db, compoundId: string): Promise<Expansion | null> {
  const [asked] = await compoundItems(db, [compoundId]);
  if (asked === undefined) return null;
  const compound = { id: asked.id, name: asked.name };
  const familyIds = asked.families.length > 0 ? asked.families : await anionsOf(db, asked.id);
  const memberIds = familyIds.length > 0 ? await membersOf(db, familyIds) : await sameSubstance(db, asked.id);
  const members = await substances(db, [...new Set([asked.id, ...memberIds])]);
  const names = await familyRows(db, familyIds);
  const ionNames = familyIds.filter((id) => id.startsWith("ion:"));
  const separateIds = [...new Set(familyIds.flatMap((id) => CONDENSED.get(id) ?? []))].filter(
    (id) => !familyIds.includes(id),
  );
  const separateRows = await familyRows(db, separateIds);
  return {
    compound,
    families: [
      ...[...names.values()].map((row) => ({ id: row.id, name: row.name })),
      ...ionNames.map((id) => ({ id, name: `${id.slice("ion:".length).replaceAll("-", " ")} and its acid` })),
    ],
    compounds: members
      .map(({ item, gives }) => ({
        id: item.id,
        name: item.name,
        formula: item.formula,
        kind: kindInExpansion(item, gives),
      }))
      .sort((a, b) => order(a.kind) - order(b.kind) || a.name.localeCompare(b.name, "en")),
    separate: [...separateRows.values()].map((row) => ({
      id: `family:${row.id}`,
      name: row.name,
      note: `${row.name} is a condensed acid, a family of its own: not included.`,
    })),
  };
}

/** All compound ids that stand with any of the given ones; what entries are searched by. */
export async function expandedIds(db: Db, compoundIds: readonly string[]): Promise<string[]> {
  const ids = new Set<string>();
  for (const id of compoundIds) {
    const found = await expansion(db, id);
    for (const each of found?.compounds ?? []) ids.add(each.id);
  }
  return [...ids];
}

const hazardShape = z.discriminatedUnion("classified", [
  z.object({
    classified: z.literal(true),
    pictograms: z.array(z.object({ code: z.string(), name: z.string() })),
    signalWord: z.string().nullable(),
    statements: z.array(z.object({ code: z.string(), text: z.string() })),
    supplemental: z.array(z.object({ code: z.string(), text: z.string() })),
    note: z.string().nullable(),
    source: z.string(),
    fromMemory: z.boolean(),
  }),
  z.object({ classified: z.literal(false), note: z.string(), fromMemory: z.boolean() }),
]);
/** `classified: false`: listed as carrying no classification in the usual listings, which is no statement of safety. */
export type HazardRecord = z.infer<typeof hazardShape>;
export type HazardEntry = { compound: string; name: string; record: HazardRecord | null };

/** The hazard record of each compound, in the order asked; null where no hazard data are on file. */
export async function hazardsOf(db: Db, compoundIds: readonly string[]): Promise<HazardEntry[]> {
  const ids = [...new Set(compoundIds)];
  const items = await compoundItems(db, ids);
  const reagentIds = items.flatMap((item) => (item.kind === "reagent" ? [item.id.slice("reagent:".length)] : []));
  const rows =
    reagentIds.length === 0 ? [] : await db.select().from(hazards).where(inArray(hazards.reagentId, reagentIds));
  const records = new Map(rows.map((row) => [`reagent:${row.reagentId}`, hazardShape.parse(row.record)]));
  return items.map((item) => ({ compound: item.id, name: item.name, record: records.get(item.id) ?? null }));
}

export type CompoundId =
  | { kind: "reagent"; reagent: string }
  | { kind: "family"; family: string }
  | { kind: "form"; family: string; lost: number };

/** Takes a compound id apart; null when it is none. */
export function parseCompoundId(id: string): CompoundId | null {
  const found = /^(reagent|family|form):([a-z0-9-]{1,80})(?::(\d{1,2}))?$/.exec(id);
  const name = found?.[2];
  if (found === null || name === undefined) return null;
  const lost = found[3];
  if (found[1] === "form") return lost === undefined ? null : { kind: "form", family: name, lost: Number(lost) };
  if (lost !== undefined) return null;
  return found[1] === "reagent" ? { kind: "reagent", reagent: name } : { kind: "family", family: name };
}

/**
 * Condensed acids beside the acid that they are made from. They hydrolyse slowly, so a page with one says nothing of the other.
 * (IUPAC, Nomenclature of Inorganic Chemistry 2005, IR-8: diphosphoric and triphosphoric acid; from memory.)
 */
const CONDENSED: ReadonlyMap<string, readonly string[]> = new Map([
  ["phosphoric-acid", ["pyrophosphoric-acid", "triphosphoric-acid"]],
  ["pyrophosphoric-acid", ["phosphoric-acid", "triphosphoric-acid"]],
  ["triphosphoric-acid", ["phosphoric-acid", "pyrophosphoric-acid"]],
]);

const givesShape: z.ZodType<Gives[]> = z.array(
  z.discriminatedUnion("kind", [
    z.object({ kind: z.literal("family"), family: z.string(), lost: z.number(), count: z.number() }),
    z.object({
      kind: z.literal("ion"),
      ion: z.string(),
      name: z.string(),
      z: z.number(),
      count: z.number(),
      role: z.enum(["spectator", "metal"]),
    }),
    z.object({ kind: z.literal("proton"), count: z.number() }),
    z.object({ kind: z.literal("hydroxide"), count: z.number() }),
  ]),
);

function familiesOf(gives: readonly Gives[]): string[] {
  return [...new Set(gives.flatMap((part) => (part.kind === "family" ? [part.family] : [])))];
}

type FoundName = { compoundId: string; shown: string };

/** Names that fit the text, best first. Misspelt ones are looked for only when nothing fits exactly. */
async function findNames(db: Db, asked: string, limit: number): Promise<FoundName[]> {
  const fitting = await fittingNames(db, asked);
  const name = comparedName(asked);
  const compounds = new Set(fitting.map((row) => row.compoundId));
  if (name.length < 3 || compounds.size >= limit || fitting.some((row) => row.rank === 0)) return fitting;
  return [...fitting, ...(await similarNames(db, name))];
}

const kindOrder = sql`case ${compoundNames.kind} when 'name' then 0 when 'form' then 1 when 'synonym' then 1 else 2 end`;
const compoundOrder = sql`case ${compoundNames.compoundKind} when 'reagent' then 0 when 'family' then 1 else 2 end`;
const tieOrder = [
  kindOrder,
  compoundOrder,
  sql`length(${compoundNames.compared})`,
  asc(compoundNames.compared),
  asc(compoundNames.compoundId),
];
const isNamed = inArray(compoundNames.kind, ["name", "synonym", "form"]);

/** Exact (rank 0), beginning with the text (1), or with words that begin with the words of the text (2). */
async function fittingNames(db: Db, asked: string): Promise<(FoundName & { rank: number })[]> {
  const n = compoundNames;
  const name = comparedName(asked);
  const formulas = formulasOf(asked);
  const cas = /^[\d\s‐‑–-]{4,}$/.test(asked) ? casDigits(asked) : "";
  const words = name.split(" ").filter((word) => word !== "");
  const named = (condition: SQL) => (name === "" ? undefined : and(isNamed, condition));
  const formula = (condition: (formula: string) => SQL) =>
    formulas.length === 0 ? undefined : and(eq(n.kind, "formula"), or(...formulas.map(condition)));
  const numbered = (condition: SQL) => (cas.length < 4 ? undefined : and(eq(n.kind, "cas"), condition));
  const lanes = [
    or(
      named(eq(n.compared, name)),
      formula((each) => eq(n.compared, each)),
      numbered(eq(n.compared, cas)),
    ),
    or(
      named(sql`${n.compared} like ${`${name}%`}`),
      formula((each) => sql`${n.compared} like ${`${each}.%`}`),
      numbered(sql`${n.compared} like ${`${cas}%`}`),
    ),
    named(
      sql.join(
        words.map((word) => sql`(' ' || ${n.compared}) like ${`% ${word}%`}`),
        sql` and `,
      ),
    ),
  ];
  const fits = or(...lanes);
  if (fits === undefined) return [];
  const rank = sql<number>`case ${sql.join(
    lanes.flatMap((lane, place) => (lane === undefined ? [] : [sql`when ${lane} then ${sql.raw(String(place))}`])),
    sql` `,
  )} else 3 end`.mapWith(Number);
  return db
    .select({ compoundId: n.compoundId, shown: n.shown, rank })
    .from(n)
    .where(fits)
    .orderBy(asc(rank), ...tieOrder)
    .limit(MOST_CANDIDATES);
}

function similarNames(db: Db, name: string): Promise<FoundName[]> {
  const n = compoundNames;
  const likeness = sql`greatest(similarity(${n.compared}, ${name}), word_similarity(${name}, ${n.compared}) * 0.9)`;
  return db
    .select({ compoundId: n.compoundId, shown: n.shown })
    .from(n)
    .where(and(isNamed, or(sql`${n.compared} % ${name}`, sql`${name} <% ${n.compared}`)))
    .orderBy(desc(likeness), ...tieOrder)
    .limit(MOST_CANDIDATES);
}

function formulasOf(text: string): string[] {
  const strict = parseFormula(text);
  const all = strict === null ? looseFormulas(text) : [strict];
  return [...new Set(all.map(comparedFormula))];
}

async function familyRows(db: Db, ids: readonly string[]) {
  const asked = ids.filter((id) => !id.startsWith("ion:"));
  const rows = asked.length === 0 ? [] : await db.select().from(families).where(inArray(families.id, asked));
  return new Map(rows.map((row) => [row.id, row]));
}

async function currentConstants(db: Db, familyIds: readonly string[]) {
  const rows =
    familyIds.length === 0
      ? []
      : await db
          .select({ id: constants.id, familyId: constants.familyId })
          .from(constants)
          .where(and(inArray(constants.familyId, [...familyIds]), eq(constants.current, true)))
          .orderBy(constants.familyId, constants.step);
  return groupBy(rows, (row) => row.familyId);
}

async function familyInputs(
  db: Db,
  familyIds: readonly string[],
  pinned: readonly string[],
): Promise<Record<string, FamilyInput>> {
  const rows = await familyRows(db, familyIds);
  if (rows.size === 0) return {};
  const wanted = or(eq(constants.current, true), ...(pinned.length === 0 ? [] : [inArray(constants.id, [...pinned])]));
  const versions = await db
    .select()
    .from(constants)
    .where(and(inArray(constants.familyId, [...rows.keys()]), wanted))
    .orderBy(constants.familyId, constants.step, constants.version);
  const isPinned = new Set(pinned);
  const byFamily = groupBy(versions, (row) => row.familyId);
  const inputs: Record<string, FamilyInput> = {};
  for (const [id, row] of rows) {
    const steps = groupBy(byFamily.get(id) ?? [], (version) => version.step);
    const chosen = [...steps.keys()]
      .sort((a, b) => a - b)
      .flatMap((step) => {
        const offered = steps.get(step) ?? [];
        return offered.find((version) => isPinned.has(version.id)) ?? offered.find((version) => version.current) ?? [];
      });
    inputs[id] = {
      id,
      name: row.name,
      z0: row.z0,
      forms: row.forms.map((name) => ({ name })),
      constants: chosen.map(toConstantInput),
    };
  }
  return inputs;
}

function toConstantInput(row: typeof constants.$inferSelect): ConstantInput {
  return {
    id: row.id,
    pKa: row.pKa,
    basis: row.basis === "conditional" ? "conditional" : "thermodynamic",
    ionicStrength: row.ionicStrength,
    temperatureC: row.temperatureC,
    uncertainty: row.uncertainty,
    source: row.source,
    fromMemory: row.fromMemory,
    nominal: row.nominal,
    disputed: row.disputed,
  };
}

async function anionsOf(db: Db, compoundId: string): Promise<string[]> {
  const rows = await db
    .select({ familyId: compoundFamilies.familyId })
    .from(compoundFamilies)
    .where(and(eq(compoundFamilies.compoundId, compoundId), sql`${compoundFamilies.familyId} like 'ion:%'`))
    .orderBy(compoundFamilies.familyId);
  return rows.map((row) => row.familyId);
}

async function membersOf(db: Db, familyIds: readonly string[]): Promise<string[]> {
  const rows = await db
    .selectDistinct({ compoundId: compoundFamilies.compoundId })
    .from(compoundFamilies)
    .where(inArray(compoundFamilies.familyId, [...familyIds]));
  return rows.map((row) => row.compoundId);
}

/** Reagents that put the same into water: a base as pellets, as a hydrate, and as solutions of any strength. */
async function sameSubstance(db: Db, compoundId: string): Promise<string[]> {
  const parsed = parseCompoundId(compoundId);
  if (parsed?.kind !== "reagent") return [];
  const rows = await db
    .select({ id: reagents.id })
    .from(reagents)
    .where(sql`${reagents.gives} = (select r.gives from ${reagents} r where r.id = ${parsed.reagent})`);
  return rows.map((row) => `reagent:${row.id}`);
}

type ExpansionKind = Expansion["compounds"][number]["kind"];

function kindInExpansion(item: CompoundItem, gives: readonly Gives[]): ExpansionKind {
  if (item.kind === "family") return "acid family";
  if (item.kind === "form") return "form";
  if (item.massFraction !== null || item.form === "aqueous solution") return "solution";
  if ((parseFormula(item.formula)?.waters ?? 0) > 0) return "hydrate";
  return isSalt(gives) ? "salt" : "substance";
}

/** An ion of a metal or a strong acid, or two families of which one is charged: more than an acid or a base by itself. */
function isSalt(gives: readonly Gives[]): boolean {
  const isAcidOrBase = gives.some((part) => part.kind === "proton" || part.kind === "hydroxide");
  return !isAcidOrBase && gives.length > 1;
}

function order(kind: ExpansionKind): number {
  return ["acid family", "form", "substance", "salt", "hydrate", "solution"].indexOf(kind);
}

/** Formula of a form: the uncharged parent with hydrogens added or taken, and the charge that brings. */
function formFormula(parent: string, z: number): string {
  const formula = parseFormula(parent);
  if (formula === null) return parent;
  const atoms = new Map(formula.atoms);
  atoms.set("H", (atoms.get("H") ?? 0) + z);
  const charge = z === 0 ? "" : `^${Math.abs(z) === 1 ? "" : Math.abs(z)}${z > 0 ? "+" : "-"}`;
  return writtenFormula(atoms) + charge;
}

function groupBy<T, K>(rows: readonly T[], keyOf: (row: T) => K): Map<K, T[]> {
  const groups = new Map<K, T[]>();
  for (const row of rows) {
    const key = keyOf(row);
    const group = groups.get(key);
    if (group === undefined) groups.set(key, [row]);
    else group.push(row);
  }
  return groups;
}
