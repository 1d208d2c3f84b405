// From a block's attributes to the inputs that its answer depends on, and the one text that stands for a value (RFC 8785).
import serialize from "canonicalize";
import type { AmountInput, BlockInput, FamilyInput, Gives, Refusal, RowInput } from "../../chem/index.ts";
import type { CompositionRow, EquilibriumBlock } from "./equilibrium.ts";

/** What the server knows of the substances of a block; constants are those that the rows have pinned. */
export type LibrarySlice = {
  compounds: Record<string, LibraryCompound>;
  families: Record<string, FamilyInput>;
  water: { pKw: { value: string; source: string }; debyeHuckelA: { value: string; source: string } };
};
export type LibraryCompound = {
  name: string;
  formula: string;
  cas: string | null;
  /** g/mol */
  molarMass: string | null;
  gives: Gives[];
  /** as on a usual label: offered, never assumed */
  density: string | null;
  massFraction: string | null;
};

/** The canonical JSON text of a value (RFC 8785). Throws for what JSON cannot hold. */
export function canonicalText(value: unknown): string {
  const text = serialize(value);
  if (text === undefined) throw new TypeError("A value without a JSON text cannot be made canonical.");
  return text;
}

/**
 * The inputs of a block in canonical form: rows named r1, r2 …, constants put in from the library, nothing that does not change
 * the answer (title, lot, what is shown, a volume that no row needs). Quantities stay as typed; what is wrong with a number is
 * for the solver to say. Refuses a row without a compound, one whose substance or constants the library does not hold, and one
 * whose constants are not pinned or differ from those of another row, with fields `rows.r1.compound` or `rows.r1.constants`.
 */
export function canonicalInputs(
  block: EquilibriumBlock,
  slice: LibrarySlice,
): { ok: true; input: BlockInput } | { ok: false; refusals: Refusal[] } {
  const refusals: Refusal[] = [];
  const rows: RowInput[] = [];
  const families = new Map<string, FamilyInput>();
  block.rows.forEach((row, index) => {
    const id = `r${index + 1}`;
    const compound = Object.hasOwn(slice.compounds, row.compound) ? slice.compounds[row.compound] : undefined;
    if (compound === undefined) {
      const text =
        row.compound === ""
          ? `Row ${index + 1} has no compound yet. Choose one, or take the row out.`
          : `The library has no compound "${row.compound}". Choose another one.`;
      refusals.push({ code: "form.unknown", field: `rows.${id}.compound`, value: row.compound, text });
      return;
    }
    for (const part of compound.gives) {
      if (part.kind !== "family") continue;
      const family = Object.hasOwn(slice.families, part.family) ? slice.families[part.family] : undefined;
      if (family === undefined) {
        const text = `The library has no constants for ${compound.name}.`;
        refusals.push({ code: "family.unknown", field: `rows.${id}.compound`, value: part.family, text });
        continue;
      }
      const pinned = row.constants.split(" ");
      if (!family.constants.every((constant) => pinned.includes(constant.id))) {
        const text =
          `The constants of ${compound.name} in this row are not fixed, or not the versions that the other rows use. ` +
          "Choose the compound again.";
        refusals.push({ code: "family.constants-count", field: `rows.${id}.constants`, value: row.constants, text });
        continue;
      }
      families.set(part.family, family);
    }
    rows.push({
      id,
      reagent: row.compound,
      name: compound.name,
      formula: compound.formula,
      gives: compound.gives,
      amount: amountOf(row, compound),
    });
  });
  if (refusals.length > 0) return { ok: false, refusals };
  return {
    ok: true,
    input: {
      families: [...families.values()],
      rows,
      madeUpTo: volumeOf(block),
      conditions: {
        temperatureC: block.temperatureC,
        activity: block.activity,
        pKw: slice.water.pKw,
        debyeHuckelA: slice.water.debyeHuckelA,
      },
      measuredPH: block.measuredPH === "" ? null : block.measuredPH,
    },
  };
}

function amountOf(row: CompositionRow, compound: LibraryCompound): AmountInput {
  const value = row.amount;
  // A substance without a molar mass leaves it blank: the solver refuses the row, nothing is assumed.
  const molarMass = compound.molarMass ?? "";
  switch (row.unit) {
    case "mol/L":
    case "mmol/L":
      return { kind: "concentration", value, unit: row.unit };
    case "g":
    case "mg":
    case "kg":
      return { kind: "mass", value, unit: row.unit, molarMass, massFraction: row.massFraction };
    case "mL":
    case "L":
      return { kind: "volume", value, unit: row.unit, density: row.density, molarMass, massFraction: row.massFraction };
  }
}

/** A well-formed volume is left out when every row is a concentration; a malformed one goes on, to be refused. */
function volumeOf(block: EquilibriumBlock): BlockInput["madeUpTo"] {
  if (block.volume === "") return null;
  const idle = block.rows.every((row) => row.unit === "mol/L" || row.unit === "mmol/L");
  if (idle && /^\d+([.]\d+)?$/.test(block.volume) && Number(block.volume) > 0) return null;
  return { value: block.volume, unit: block.volumeUnit };
}
