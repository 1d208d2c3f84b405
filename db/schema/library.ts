// The library: families with their constants (immutable versions), shelf reagents, ions, hazards, and every name that finds one.
import { boolean, index, integer, jsonb, pgTable, primaryKey, text, timestamp } from "drizzle-orm/pg-core";

const at = (name: string) => timestamp(name, { withTimezone: true, mode: "date" });

export const families = pgTable("families", {
  id: text("id").primaryKey(),
  name: text("name").notNull(),
  kind: text("kind").notNull(),
  formula: text("formula").notNull(),
  cas: text("cas"),
  molarMass: text("molar_mass").notNull(),
  z0: integer("z0").notNull(),
  neutralForm: integer("neutral_form"),
  /** names of the forms, index = protons lost */
  forms: jsonb("forms").$type<string[]>().notNull(),
});

/** A version of a constant never changes; a new value is a new row. */
export const constants = pgTable(
  "constants",
  {
    id: text("id").primaryKey(),
    familyId: text("family_id")
      .notNull()
      .references(() => families.id),
    step: integer("step").notNull(),
    version: integer("version").notNull(),
    pKa: text("pka").notNull(),
    basis: text("basis").notNull(),
    ionicStrength: text("ionic_strength"),
    temperatureC: text("temperature_c").notNull(),
    uncertainty: text("uncertainty"),
    dHkJmol: text("dh_kj_mol"),
    dCpJmolK: text("dcp_j_mol_k"),
    source: text("source").notNull(),
    fromMemory: boolean("from_memory").notNull(),
    nominal: boolean("nominal").notNull(),
    disputed: text("disputed"),
    since: at("since").notNull(),
    /** the one that new blocks take */
    current: boolean("current").notNull(),
  },
  (t) => [index("constants_family").on(t.familyId, t.step)],
);

export const reagents = pgTable("reagents", {
  id: text("id").primaryKey(),
  name: text("name").notNull(),
  formula: text("formula").notNull(),
  hydrateWaters: text("hydrate_waters").notNull(),
  cas: text("cas"),
  molarMass: text("molar_mass").notNull(),
  /** Gives[] of chem/types.ts */
  gives: jsonb("gives").notNull(),
  physicalForm: text("physical_form").notNull(),
  density: text("density"),
  massFraction: text("mass_fraction"),
  typicalPurity: text("typical_purity"),
  source: text("source").notNull(),
  fromMemory: boolean("from_memory").notNull(),
  note: text("note"),
});

export const ions = pgTable("ions", {
  id: text("id").primaryKey(),
  name: text("name").notNull(),
  formula: text("formula").notNull(),
  z: integer("z").notNull(),
  role: text("role").notNull(),
});

/** Which families and ions a substance belongs to: a salt stands with each of its acids. The family itself is a compound too. */
export const compoundFamilies = pgTable(
  "compound_families",
  {
    compoundId: text("compound_id").notNull(),
    familyId: text("family_id").notNull(),
  },
  (t) => [primaryKey({ columns: [t.compoundId, t.familyId] }), index("compound_families_family").on(t.familyId)],
);

/** Every name, synonym, CAS RN and formula, in the spelling that is compared (see db/compounds.ts). */
export const compoundNames = pgTable(
  "compound_names",
  {
    compoundId: text("compound_id").notNull(),
    /** "family" or "reagent" or "form" */
    compoundKind: text("compound_kind").notNull(),
    /** "name" | "synonym" | "cas" | "formula" | "form" */
    kind: text("kind").notNull(),
    shown: text("shown").notNull(),
    /** lower case, unaccented, without punctuation; formulas in Hill order */
    compared: text("compared").notNull(),
    /** for a form: protons lost */
    lost: integer("lost"),
  },
  (t) => [primaryKey({ columns: [t.compoundId, t.kind, t.compared] }), index("compound_names_compared").on(t.compared)],
);

export const hazards = pgTable("hazards", {
  reagentId: text("reagent_id").primaryKey(),
  /** pictograms, signalWord, statements with code and text, source, fromMemory; or classified: false with the note */
  record: jsonb("record").notNull(),
});

/** Cautions on mixing: conditions in the form of the library file, read by db/compounds.ts. */
export const mixing = pgTable("mixing", {
  id: text("id").primaryKey(),
  severity: text("severity").notNull(),
  rule: jsonb("rule").notNull(),
  text: text("text").notNull(),
  source: text("source").notNull(),
  fromMemory: boolean("from_memory").notNull(),
});
