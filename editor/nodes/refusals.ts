// Which of the solver's refusals belongs to which field of the block as it is edited.
import type { Refusal } from "../../chem/index.ts";

export type FieldErrors = {
  /** by the row's place and the field's name */
  row: (index: number, field: RowErrorField) => string | undefined;
  block: (field: "volume" | "temperature" | "measuredPH") => string | undefined;
  /** said where no field of the block is to blame */
  rest: string[];
};
export type RowErrorField = "compound" | "amount" | "unit" | "massFraction" | "density";

const ROW_FIELDS: Readonly<Record<string, RowErrorField>> = {
  compound: "compound",
  reagent: "compound",
  constants: "compound",
  molarMass: "compound",
  gives: "compound",
  name: "compound",
  formula: "compound",
  amount: "amount",
  unit: "unit",
  massFraction: "massFraction",
  density: "density",
};

export function fieldErrors(refusals: readonly Refusal[]): FieldErrors {
  const byField = new Map<string, string>();
  const rest: string[] = [];
  for (const refusal of refusals) {
    const field = fieldOf(refusal.field);
    if (field === null) rest.push(refusal.text);
    else byField.set(field, byField.has(field) ? `${byField.get(field)} ${refusal.text}` : refusal.text);
  }
  return {
    row: (index, field) => byField.get(`row ${index} ${field}`),
    block: (field) => byField.get(field),
    rest,
  };
}

function fieldOf(path: string): string | null {
  const row = /^rows\.r(\d+)(?:\.([A-Za-z]+))?/.exec(path);
  if (row !== null) {
    const name = row[2] ?? "compound";
    return `row ${Number(row[1]) - 1} ${Object.hasOwn(ROW_FIELDS, name) ? ROW_FIELDS[name] : "amount"}`;
  }
  if (path.startsWith("madeUpTo")) return "volume";
  if (path.startsWith("conditions.temperatureC")) return "temperature";
  if (path.startsWith("measuredPH")) return "measuredPH";
  return null;
}
