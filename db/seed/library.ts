// Puts the library's files into their tables. A second start with the same files does nothing; a changed constant becomes a new
// version beside the old one, because pages refer to versions for good.
import { createHash } from "node:crypto";
import { and, eq, inArray, sql } from "drizzle-orm";
import { z } from "zod";
import type { Gives } from "../../chem/index.ts";
import type { Db } from "../client.ts";
import { comparedFormula, formulaWithWaterInside, parseFormula } from "../formula.ts";
import { casDigits, comparedName } from "../names.ts";
import {
  compoundFamilies,
  compoundNames,
  constants,
  families,
  hazards,
  ions,
  mixing,
  reagents,
} from "../schema/library.ts";
import { settings } from "../schema/people.ts";
import acidsFile from "./library/acids.json";
import hazardsFile from "./library/hazards.json";
import reagentsFile from "./library/reagents.json";
import ionsFile from "./library/strong-ions.json";

/** Raised when the same files are to be laid out in another way. */
const LAYOUT = 1;
const ROWS_AT_ONCE = 500;

const decimal = z.string().regex(/^-?\d+(\.\d+)?$/);
const maybeDecimal = decimal.nullable();

const acidsShape = z.object({
  sources: z.record(z.string(), z.string()),
  items: z.array(
    z.object({
      id: z.string(),
      name: z.string(),
      synonyms: z.array(z.string()),
      kind: z.string(),
      formula: z.string(),
      cas: z.string().nullable(),
      molarMass: decimal,
      z0: z.number().int(),
      neutralForm: z.number().int().nullable(),
      forms: z.array(z.string()),
      steps: z.array(
        z.object({
          pKa: decimal,
          basis: z.enum(["thermodynamic", "conditional"]),
          ionicStrength: maybeDecimal,
          temperatureC: decimal,
          uncertainty: maybeDecimal,
          dH_kJ_mol: maybeDecimal,
          dCp_J_mol_K: maybeDecimal,
          source: z.string(),
          from_memory: z.boolean(),
          nominal: z.boolean().optional(),
          disputed: z.string().nullable().optional(),
        }),
      ),
    }),
  ),
});

const citationShape = z.object({ citation: z.string(), reached: z.string() });

const givesShape = z.discriminatedUnion("kind", [
  z.object({
    kind: z.literal("family"),
    family: z.string(),
    lost: z.number().int(),
    z: z.number().int(),
    count: z.number(),
  }),
  z.object({ kind: z.enum(["strong", "metal"]), ion: z.string(), z: z.number().int(), count: z.number() }),
  z.object({ kind: z.enum(["proton", "hydroxide"]), z: z.number().int(), count: z.number() }),
]);

const reagentsShape = z.object({
  sources: z.record(z.string(), citationShape),
  items: z.array(
    z.object({
      id: z.string(),
      name: z.string(),
      synonyms: z.array(z.string()),
      formula: z.string(),
      hydrateWaters: z.number(),
      formulaWithWater: z.string(),
      cas: z.string().nullable(),
      molarMass: decimal,
      gives: z.array(givesShape),
      form: z.string(),
      density: z.object({ value: decimal }).nullable(),
      massFraction: maybeDecimal,
      typicalPurity: maybeDecimal,
      source: z.array(z.string()),
      from_memory: z.boolean(),
      note: z.string().optional(),
    }),
  ),
});

const ionsShape = z.object({
  items: z.array(
    z.object({
      id: z.string(),
      name: z.string(),
      formula: z.string(),
      z: z.number().int(),
      role: z.enum(["spectator", "metal"]),
    }),
  ),
});

const hazardsShape = z.object({
  sources: z.record(z.string(), citationShape),
  pictogramNames: z.record(z.string(), z.string()),
  items: z.array(
    z.object({
      reagent: z.string(),
      pictograms: z.array(z.string()),
      signalWord: z.string().nullable(),
      statements: z.array(z.object({ code: z.string(), text: z.string() })),
      supplemental: z.array(z.unknown()),
      massFractionNote: z.string().nullable(),
      note: z.string().nullable().optional(),
      source: z.string(),
      from_memory: z.boolean(),
    }),
  ),
  notClassified: z.object({ note: z.string(), from_memory: z.boolean(), reagents: z.array(z.string()) }),
  classes: z.record(z.string(), z.unknown()),
  mixing: z.array(
    z.object({
      id: z.string(),
      severity: z.string(),
      when: z.unknown(),
      text: z.string(),
      remark: z.string().optional(),
      source: z.string(),
      from_memory: z.boolean(),
    }),
  ),
});

export type LibraryImport = {
  outcome: "imported" | "same";
  hash: string;
  families: number;
  reagents: number;
  constants: number;
};

/** Imports the library. Two starts at once wait for each other on the settings row. */
export async function importLibrary(db: Db): Promise<LibraryImport> {
  const hash = createHash("sha256")
    .update(JSON.stringify([LAYOUT, acidsFile, reagentsFile, ionsFile, hazardsFile]))
    .digest("hex");
  const counts = {
    families: acidsFile.items.length,
    reagents: reagentsFile.items.length,
    constants: acidsFile.items.reduce((sum, item) => sum + item.steps.length, 0),
  };
  return db.transaction(async (tx) => {
    await tx.insert(settings).values({ key: "library", value: "" }).onConflictDoNothing();
    const [row] = await tx
      .select({ value: settings.value })
      .from(settings)
      .where(eq(settings.key, "library"))
      .for("update");
    if (row?.value === hash) return { outcome: "same", hash, ...counts };
    const acids = acidsShape.parse(acidsFile);
    const shelf = reagentsShape.parse(reagentsFile);
    const charged = ionsShape.parse(ionsFile);
    const dangers = hazardsShape.parse(hazardsFile);
    await putFamilies(tx, acids);
    await putConstants(tx, acids);
    await putIons(tx, charged);
    await putReagents(tx, shelf, charged);
    await putNames(tx, acids, shelf);
    await putMemberships(tx, acids, shelf);
    await putHazards(tx, dangers);
    await tx.update(settings).set({ value: hash }).where(eq(settings.key, "library"));
    return { outcome: "imported", hash, ...counts };
  });
}

async function putFamilies(tx: Db, acids: z.infer<typeof acidsShape>): Promise<void> {
  const rows = acids.items.map((item) => ({
    id: item.id,
    name: item.name,
    kind: item.kind,
    formula: item.formula,
    cas: item.cas,
    molarMass: item.molarMass,
    z0: item.z0,
    neutralForm: item.neutralForm,
    forms: item.forms,
  }));
  for (const some of inLots(rows)) {
    await tx
      .insert(families)
      .values(some)
      .onConflictDoUpdate({
        target: families.id,
        set: {
          name: sql`excluded.name`,
          kind: sql`excluded.kind`,
          formula: sql`excluded.formula`,
          cas: sql`excluded.cas`,
          molarMass: sql`excluded.molar_mass`,
          z0: sql`excluded.z0`,
          neutralForm: sql`excluded.neutral_form`,
          forms: sql`excluded.forms`,
        },
      });
  }
}

async function putConstants(tx: Db, acids: z.infer<typeof acidsShape>): Promise<void> {
  const kept = await tx.select().from(constants).where(eq(constants.current, true));
  const versions = await tx
    .select({
      familyId: constants.familyId,
      step: constants.step,
      version: sql<number>`max(${constants.version})`.mapWith(Number),
    })
    .from(constants)
    .groupBy(constants.familyId, constants.step);
  const keptAt = new Map(kept.map((row) => [`${row.familyId}.${row.step}`, row]));
  const newest = new Map(versions.map((row) => [`${row.familyId}.${row.step}`, row.version]));
  const since = new Date();
  const fresh: (typeof constants.$inferInsert)[] = [];
  const replaced: string[] = [];
  for (const item of acids.items) {
    item.steps.forEach((step, index) => {
      const place = `${item.id}.${index + 1}`;
      const values = {
        pKa: step.pKa,
        basis: step.basis,
        ionicStrength: step.ionicStrength,
        temperatureC: step.temperatureC,
        uncertainty: step.uncertainty,
        dHkJmol: step.dH_kJ_mol,
        dCpJmolK: step.dCp_J_mol_K,
        source: citation(acids.sources[step.source] ?? step.source),
        fromMemory: step.from_memory,
        nominal: step.nominal ?? false,
        disputed: step.disputed ?? null,
      };
      const present = keptAt.get(place);
      if (present !== undefined && Object.entries(values).every(([key, value]) => Reflect.get(present, key) === value))
        return;
      if (present !== undefined) replaced.push(present.id);
      const version = (newest.get(place) ?? 0) + 1;
      fresh.push({
        id: `${place}.v${version}`,
        familyId: item.id,
        step: index + 1,
        version,
        ...values,
        since,
        current: true,
      });
    });
  }
  if (replaced.length > 0) {
    await tx
      .update(constants)
      .set({ current: false })
      .where(and(inArray(constants.id, replaced), eq(constants.current, true)));
  }
  for (const some of inLots(fresh)) await tx.insert(constants).values(some);
}

async function putIons(tx: Db, charged: z.infer<typeof ionsShape>): Promise<void> {
  await tx
    .insert(ions)
    .values(charged.items)
    .onConflictDoUpdate({
      target: ions.id,
      set: { name: sql`excluded.name`, formula: sql`excluded.formula`, z: sql`excluded.z`, role: sql`excluded.role` },
    });
}

async function putReagents(
  tx: Db,
  shelf: z.infer<typeof reagentsShape>,
  charged: z.infer<typeof ionsShape>,
): Promise<void> {
  const ionNames = new Map(charged.items.map((ion) => [ion.id, ion]));
  const rows = shelf.items.map((item) => ({
    id: item.id,
    name: item.name,
    formula: item.formulaWithWater,
    hydrateWaters: String(item.hydrateWaters),
    cas: item.cas,
    molarMass: item.molarMass,
    gives: item.gives.map((part) => toGives(part, ionNames)),
    physicalForm: item.form,
    density: item.density?.value ?? null,
    massFraction: item.massFraction,
    typicalPurity: item.typicalPurity,
    source: item.source.map((key) => shelf.sources[key]?.citation ?? key).join("; "),
    fromMemory: item.from_memory,
    note: item.note ?? null,
  }));
  for (const some of inLots(rows)) {
    await tx
      .insert(reagents)
      .values(some)
      .onConflictDoUpdate({
        target: reagents.id,
        set: {
          name: sql`excluded.name`,
          formula: sql`excluded.formula`,
          hydrateWaters: sql`excluded.hydrate_waters`,
          cas: sql`excluded.cas`,
          molarMass: sql`excluded.molar_mass`,
          gives: sql`excluded.gives`,
          physicalForm: sql`excluded.physical_form`,
          density: sql`excluded.density`,
          massFraction: sql`excluded.mass_fraction`,
          typicalPurity: sql`excluded.typical_purity`,
          source: sql`excluded.source`,
          fromMemory: sql`excluded.from_memory`,
          note: sql`excluded.note`,
        },
      });
  }
}

function toGives(
  part: z.infer<typeof givesShape>,
  ionNames: ReadonlyMap<string, { name: string; role: "spectator" | "metal" }>,
): Gives {
  switch (part.kind) {
    case "family":
      return { kind: "family", family: part.family, lost: part.lost, count: part.count };
    case "strong":
    case "metal": {
      const ion = ionNames.get(part.ion);
      if (ion === undefined) throw new Error(`The library has no ion "${part.ion}".`);
      return { kind: "ion", ion: part.ion, name: ion.name, z: part.z, count: part.count, role: ion.role };
    }
    case "proton":
    case "hydroxide":
      return { kind: part.kind, count: part.count };
    default:
      return part satisfies never;
  }
}

type NameRow = typeof compoundNames.$inferInsert;

async function putNames(
  tx: Db,
  acids: z.infer<typeof acidsShape>,
  shelf: z.infer<typeof reagentsShape>,
): Promise<void> {
  const rows = new Map<string, NameRow>();
  const put = (row: NameRow) => {
    const key = [row.compoundId, row.kind, row.compared].join("\n");
    if (row.compared !== "" && !rows.has(key)) rows.set(key, row);
  };
  for (const item of acids.items) {
    const compound = { compoundId: `family:${item.id}`, compoundKind: "family" };
    put({ ...compound, kind: "name", shown: item.name, compared: comparedName(item.name) });
    for (const name of item.synonyms) put({ ...compound, kind: "synonym", shown: name, compared: comparedName(name) });
    if (item.cas !== null) put({ ...compound, kind: "cas", shown: item.cas, compared: casDigits(item.cas) });
    for (const compared of formulaSpellings(item.formula))
      put({ ...compound, kind: "formula", shown: item.formula, compared });
    item.forms.forEach((name, lost) => {
      put({
        compoundId: `form:${item.id}:${lost}`,
        compoundKind: "form",
        kind: "form",
        shown: name,
        compared: comparedName(name),
        lost,
      });
    });
  }
  for (const item of shelf.items) {
    const compound = { compoundId: `reagent:${item.id}`, compoundKind: "reagent" };
    put({ ...compound, kind: "name", shown: item.name, compared: comparedName(item.name) });
    for (const name of item.synonyms) put({ ...compound, kind: "synonym", shown: name, compared: comparedName(name) });
    if (item.cas !== null) put({ ...compound, kind: "cas", shown: item.cas, compared: casDigits(item.cas) });
    for (const compared of formulaSpellings(item.formulaWithWater)) {
      put({ ...compound, kind: "formula", shown: item.formulaWithWater, compared });
    }
  }
  await tx.delete(compoundNames);
  for (const some of inLots([...rows.values()])) await tx.insert(compoundNames).values(some);
}

function formulaSpellings(text: string): string[] {
  const formula = parseFormula(text);
  if (formula === null) throw new Error(`The library's formula "${text}" cannot be read.`);
  return formula.waters === 0
    ? [comparedFormula(formula)]
    : [comparedFormula(formula), formulaWithWaterInside(formula)];
}

/**
 * A salt stands with each of its acids. Anions of strong acids that are no family (chloride, nitrate …) stand for their acid as
 * "ion:chloride", so that hydrochloric acid and its salts are found together too.
 */
async function putMemberships(
  tx: Db,
  acids: z.infer<typeof acidsShape>,
  shelf: z.infer<typeof reagentsShape>,
): Promise<void> {
  const rows = new Map<string, typeof compoundFamilies.$inferInsert>();
  const put = (compoundId: string, familyId: string) =>
    rows.set(`${compoundId}\n${familyId}`, { compoundId, familyId });
  for (const item of acids.items) {
    put(`family:${item.id}`, item.id);
    for (const lost of item.forms.keys()) put(`form:${item.id}:${lost}`, item.id);
  }
  for (const item of shelf.items) {
    for (const part of item.gives) {
      if (part.kind === "family") put(`reagent:${item.id}`, part.family);
      if (part.kind === "strong" && part.z < 0) put(`reagent:${item.id}`, `ion:${part.ion}`);
    }
  }
  await tx.delete(compoundFamilies);
  for (const some of inLots([...rows.values()])) await tx.insert(compoundFamilies).values(some);
}

async function putHazards(tx: Db, dangers: z.infer<typeof hazardsShape>): Promise<void> {
  const cite = (key: string) => dangers.sources[key]?.citation ?? key;
  const rows = dangers.items.map((item) => ({
    reagentId: item.reagent,
    record: {
      classified: true,
      pictograms: item.pictograms.map((code) => ({ code, name: dangers.pictogramNames[code] ?? code })),
      signalWord: item.signalWord,
      statements: item.statements,
      supplemental: item.supplemental,
      note: [item.massFractionNote, item.note].filter((note) => note).join(" ") || null,
      source: cite(item.source),
      fromMemory: item.from_memory,
    },
  }));
  const unclassified = dangers.notClassified.reagents.map((reagentId) => ({
    reagentId,
    record: { classified: false, note: dangers.notClassified.note, fromMemory: dangers.notClassified.from_memory },
  }));
  await tx.delete(hazards);
  for (const some of inLots([...rows, ...unclassified])) await tx.insert(hazards).values(some);
  await tx.delete(mixing);
  for (const some of inLots(dangers.mixing)) {
    await tx.insert(mixing).values(
      some.map((item) => ({
        id: item.id,
        severity: item.severity,
        rule: { when: item.when, remark: item.remark ?? null },
        text: item.text,
        source: cite(item.source),
        fromMemory: item.from_memory,
      })),
    );
  }
  await tx
    .insert(settings)
    .values({ key: "library.mixing-classes", value: JSON.stringify(dangers.classes) })
    .onConflictDoUpdate({ target: settings.key, set: { value: sql`excluded.value` } });
}

/** The citation and how the number was reached, without web addresses: those stand in the library file. */
export function citation(text: string): string {
  return text
    .replace(/\s*Reached:\s*/, " Obtained: ")
    .replace(/\s*(?:\b(?:at|in)\s+)?https?:\/\/\S+(?:\s*(?:,|and)\s*https?:\/\/\S+)*/g, "")
    .replace(/\s+([;,.)])/g, "$1")
    .trim();
}

function* inLots<T>(rows: T[]): Generator<T[]> {
  for (let i = 0; i < rows.length; i += ROWS_AT_ONCE) yield rows.slice(i, i + ROWS_AT_ONCE);
}
