// The equilibrium block: its attributes, which are inputs only, as typed.
import { z } from "zod";
import { PAGE_LIMITS, type PageNode, textAttribute } from "./page.ts";

export const AMOUNT_UNITS = ["mol/L", "mmol/L", "g", "mg", "kg", "mL", "L"] as const;
export type AmountUnit = (typeof AMOUNT_UNITS)[number];
export const VOLUME_UNITS = ["L", "mL"] as const;
export const ACTIVITY_CHOICES = ["davies", "ideal"] as const;

/** The most rows that are solved; a page may hold more, so that nothing typed is lost. */
export const MOST_ROWS_SOLVED = 40;

const quantity = z.string().max(60);
/** Ids are made in the browser: letters, digits, hyphen, underline. */
export const blockId = z.string().regex(/^[A-Za-z0-9_-]{1,40}$/);
export const compoundId = z
  .string()
  .regex(/^$|^(reagent|family):[A-Za-z0-9._-]{1,80}$|^form:[A-Za-z0-9._-]{1,80}:\d{1,2}$/);

const rowAttributes = {
  compound: compoundId,
  /** ids of immutable constant versions, parted by one space */
  constants: z
    .string()
    .max(2000)
    .regex(/^$|^[A-Za-z0-9._-]+( [A-Za-z0-9._-]+)*$/),
  amount: quantity,
  unit: z.enum(AMOUNT_UNITS),
  massFraction: quantity,
  density: quantity,
  lot: z.string().max(120),
};
const blockAttributes = {
  title: z.string().max(200),
  volume: quantity,
  volumeUnit: z.enum(VOLUME_UNITS),
  temperatureC: quantity,
  activity: z.enum(ACTIVITY_CHOICES),
  measuredPH: quantity,
  show: z.string().max(200),
};

export const compositionRow = z.strictObject({ id: blockId, ...rowAttributes });
export type CompositionRow = z.infer<typeof compositionRow>;

export const equilibriumBlock = z.strictObject({
  id: blockId,
  ...blockAttributes,
  rows: z.array(compositionRow).max(PAGE_LIMITS.rowsOfBlock),
});
export type EquilibriumBlock = z.infer<typeof equilibriumBlock>;

/** The same attributes as they stand on nodes of a page, where an id may still be missing. */
export const rowNodeAttributes = z.strictObject({ id: blockId.or(z.literal("")), ...rowAttributes }).partial();
export const blockNodeAttributes = z.strictObject({ id: blockId.or(z.literal("")), ...blockAttributes }).partial();

/** Reads a block off its node in a validated page. */
export function blockOfNode(node: PageNode): EquilibriumBlock {
  return equilibriumBlock.parse({
    id: textAttribute(node, "id") || "unnamed",
    title: textAttribute(node, "title"),
    volume: textAttribute(node, "volume"),
    volumeUnit: withDefault(node, "volumeUnit", "L"),
    temperatureC: withDefault(node, "temperatureC", "25"),
    activity: withDefault(node, "activity", "davies"),
    measuredPH: textAttribute(node, "measuredPH"),
    show: textAttribute(node, "show"),
    rows: (node.content ?? []).map((row, index) => ({
      id: textAttribute(row, "id") || `unnamed-${index + 1}`,
      compound: textAttribute(row, "compound"),
      constants: textAttribute(row, "constants"),
      amount: textAttribute(row, "amount"),
      unit: withDefault(row, "unit", "mol/L"),
      massFraction: textAttribute(row, "massFraction"),
      density: textAttribute(row, "density"),
      lot: textAttribute(row, "lot"),
    })),
  });
}

/** The schema's own default where the JSON leaves an attribute out; a page that was validated has them all. */
function withDefault(node: PageNode, name: string, fallback: string): string {
  return node.attrs?.[name] === undefined ? fallback : textAttribute(node, name);
}
