// Blocks for tests, made from the library's files: families with their constants, shelf reagents with what they give.

import { readFileSync } from "node:fs";
import { z } from "zod";
import type { AmountInput, BlockInput, FamilyInput, Gives, RowInput } from "../../chem/index.ts";
import { debyeHuckelA25, pKw25 } from "../../chem/index.ts";

const acidsShape = z.object({
  items: z.array(
    z.object({
      id: z.string(),
      name: z.string(),
      z0: z.number().int(),
      forms: z.array(z.string()),
      steps: z.array(
        z.object({
          pKa: z.string(),
          basis: z.enum(["thermodynamic", "conditional"]),
          ionicStrength: z.string().nullable(),
          temperatureC: z.string(),
          uncertainty: z.string().nullable(),
          source: z.string(),
          from_memory: z.boolean(),
          nominal: z.boolean().optional(),
          disputed: z.string().nullish(),
        }),
      ),
    }),
  ),
});
const reagentsShape = z.object({
  items: z.array(
    z.object({
      id: z.string(),
      name: z.string(),
      formulaWithWater: z.string(),
      molarMass: z.string(),
      gives: z.array(
        z.discriminatedUnion("kind", [
          z.object({ kind: z.literal("family"), family: z.string(), lost: z.number(), count: z.number() }),
          z.object({ kind: z.enum(["strong", "metal"]), ion: z.string(), z: z.number(), count: z.number() }),
          z.object({ kind: z.enum(["proton", "hydroxide"]), count: z.number() }),
        ]),
      ),
    }),
  ),
});

const read = (name: string): unknown =>
  JSON.parse(readFileSync(new URL(`../../db/seed/library/${name}`, import.meta.url), "utf8"));

export const libraryFamilies: ReadonlyMap<string, FamilyInput> = new Map(
  acidsShape.parse(read("acids.json")).items.map((item) => [
    item.id,
    {
      id: item.id,
      name: item.name,
      z0: item.z0,
      forms: item.forms.map((name) => ({ name })),
      constants: item.steps.map((step, k) => ({
        id: `${item.id}.${k + 1}.v1`,
        pKa: step.pKa,
        basis: step.basis,
        ionicStrength: step.ionicStrength,
        temperatureC: step.temperatureC,
        uncertainty: step.uncertainty,
        source: step.source,
        fromMemory: step.from_memory,
        nominal: step.nominal ?? false,
        disputed: step.disputed ?? null,
      })),
    },
  ]),
);

export type Reagent = { id: string; name: string; formula: string; molarMass: string; gives: Gives[] };

export const libraryReagents: ReadonlyMap<string, Reagent> = new Map(
  reagentsShape.parse(read("reagents.json")).items.map((item) => [
    item.id,
    {
      id: item.id,
      name: item.name,
      formula: item.formulaWithWater,
      molarMass: item.molarMass,
      gives: item.gives.map((gives): Gives => {
        switch (gives.kind) {
          case "strong":
          case "metal": {
            const role = gives.kind === "metal" ? "metal" : "spectator";
            return { kind: "ion", ion: gives.ion, name: gives.ion, z: gives.z, count: gives.count, role };
          }
          default:
            return gives;
        }
      }),
    },
  ]),
);

export function family(id: string): FamilyInput {
  const found = libraryFamilies.get(id);
  if (found === undefined) throw new Error(`no family ${id}`);
  return found;
}

export function reagent(id: string): Reagent {
  const found = libraryReagents.get(id);
  if (found === undefined) throw new Error(`no reagent ${id}`);
  return found;
}

export function molar(value: string): AmountInput {
  return { kind: "concentration", value, unit: "mol/L" };
}

export function grams(value: string, id: string, massFraction: string): AmountInput {
  return { kind: "mass", value, unit: "g", molarMass: reagent(id).molarMass, massFraction };
}

/** A row of a shelf reagent. */
export function row(id: string, reagentId: string, amount: AmountInput): RowInput {
  const { name, formula, gives } = reagent(reagentId);
  return { id, reagent: `reagent:${reagentId}`, name, formula, gives, amount };
}

/** A block at 25 °C with the core's own water constants, holding the families that its rows need. */
export function block(rows: RowInput[], activity: "ideal" | "davies" = "davies"): BlockInput {
  const ids = new Set(
    rows.flatMap(({ gives }) => gives.flatMap((part) => (part.kind === "family" ? [part.family] : []))),
  );
  return {
    families: [...ids].flatMap((id) => libraryFamilies.get(id) ?? []),
    rows,
    madeUpTo: null,
    conditions: { temperatureC: "25", activity, pKw: pKw25, debyeHuckelA: debyeHuckelA25 },
    measuredPH: null,
  };
}
