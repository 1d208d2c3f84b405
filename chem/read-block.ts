// From what a person typed to a mixture in numbers, or to every reason at once why there is none, each at its field.

import type { Exact } from "./decimal.ts";
import { add, integer, multiply, parseDecimal, sign, subtract, toNumber, ZERO } from "./decimal.ts";
import type { Refusal } from "./errors.ts";
import type { Mixture } from "./mixture.ts";
import { readAmount, readVolume } from "./read-amount.ts";
import { LARGEST_CHARGE, readConditions, readFamily, readMeasured } from "./read-conditions.ts";
import type { Refuse } from "./refuse.ts";
import { quoted, refuseInto } from "./refuse.ts";
import type { BlockInput, ConstantInput, FamilyInput, Gives, RowInput } from "./types.ts";

export const MAX_ROWS = 40;

/** One family part of a row: `concentration` in mol/L counts the formula unit's number of such parts. */
export type Part = { row: number; family: number; lost: number; count: number; concentration: number };
export type StrongPart = { row: number; kind: "proton" | "hydroxide"; count: number; concentration: number };
export type IonInSolution = {
  ion: string;
  name: string;
  z: number;
  role: "spectator" | "metal";
  concentration: number;
};

export type ReadBlock = {
  mixture: Mixture;
  /** mol/L, in the order of the input's rows */
  concentrations: number[];
  parts: Part[];
  strongParts: StrongPart[];
  ions: IonInSolution[];
  /** constants that were converted from their ionic strength to zero */
  converted: ConstantInput[];
  measuredPH: number | null;
};

/** Reads a block's inputs. Refuses everything that is wrong with them at once; nothing is assumed. */
export function readBlock(input: BlockInput): { ok: true; block: ReadBlock } | { ok: false; refusals: Refusal[] } {
  const refusals: Refusal[] = [];
  const refuse = refuseInto(refusals);

  const conditions = readConditions(input, refuse);
  const converted: ConstantInput[] = [];
  const families = input.families.map((family) => readFamily(family, input, conditions.A, converted, refuse));
  const familyIndex = new Map(input.families.map((family, f) => [family.id, f]));

  if (input.rows.length === 0)
    refuse("composition.empty", "rows", null, "Nothing is dissolved yet. Add a row for what was poured or weighed in.");
  if (input.rows.length > MAX_ROWS)
    refuse(
      "composition.too-many-rows",
      "rows",
      input.rows.length,
      `The composition has ${input.rows.length} rows; ${MAX_ROWS} can be solved. Put equal substances together.`,
    );
  const volume = readVolume(input, refuse);

  const concentrations: number[] = [];
  const parts: Part[] = [];
  const strongParts: StrongPart[] = [];
  const ions = new Map<string, IonInSolution & { exact: Exact }>();
  const components: Mixture["components"] = [];
  let netStrongAcid = ZERO;
  input.rows.forEach((row, index) => {
    const field = `rows.${row.id}`;
    const amount = readAmount(row.amount, field, volume, refuse);
    checkGives(row, input.families, familyIndex, refuse);
    if (amount === null) return;
    concentrations[index] = toNumber(amount);
    for (const gives of row.gives) {
      const count = parseDecimal(String(gives.count));
      if (count === null) continue;
      const exact = multiply(amount, count.exact);
      const concentration = toNumber(exact);
      switch (gives.kind) {
        case "family": {
          const family = familyIndex.get(gives.family);
          if (family === undefined) break;
          parts.push({ row: index, family, lost: gives.lost, count: gives.count, concentration });
          components.push({ family, lost: gives.lost, concentration: exact });
          break;
        }
        case "ion": {
          const key = `${gives.ion} ${gives.z}`;
          const present = ions.get(key);
          if (present === undefined) {
            const { ion, name, z, role } = gives;
            ions.set(key, { ion, name, z, role, concentration, exact });
          } else {
            present.exact = add(present.exact, exact);
            present.concentration = toNumber(present.exact);
          }
          break;
        }
        case "proton":
          netStrongAcid = add(netStrongAcid, exact);
          strongParts.push({ row: index, kind: "proton", count: gives.count, concentration });
          break;
        case "hydroxide":
          netStrongAcid = subtract(netStrongAcid, exact);
          strongParts.push({ row: index, kind: "hydroxide", count: gives.count, concentration });
          break;
      }
    }
  });

  const measuredPH = readMeasured(input.measuredPH, refuse);
  if (refusals.length > 0) return { ok: false, refusals };
  return {
    ok: true,
    block: {
      mixture: {
        families,
        components,
        ions: [...ions.values()].map(({ z, exact }) => ({ z, concentration: exact })),
        netStrongAcid,
        activity: input.conditions.activity,
        A: conditions.A,
        pKw: conditions.pKw,
      },
      concentrations,
      parts,
      strongParts,
      ions: [...ions.values()].map(({ exact: _, ...ion }) => ion),
      converted,
      measuredPH,
    },
  };
}

function checkGives(
  row: RowInput,
  families: readonly FamilyInput[],
  familyIndex: ReadonlyMap<string, number>,
  refuse: Refuse,
): void {
  const field = `rows.${row.id}.reagent`;
  let known = true;
  let charge = ZERO;
  for (const gives of row.gives) {
    const count = parseDecimal(String(gives.count));
    const z = chargeOf(gives, families, familyIndex);
    if (gives.kind === "family") {
      const family = families[familyIndex.get(gives.family) ?? -1];
      if (family === undefined) {
        refuse(
          "family.unknown",
          field,
          gives.family,
          `No constants are given for the acid family ${quoted(gives.family)} of ${row.name}.`,
        );
        known = false;
        continue;
      }
      if (!Number.isInteger(gives.lost) || gives.lost < 0 || gives.lost >= family.forms.length) {
        refuse(
          "form.unknown",
          field,
          gives.lost,
          `${family.name} has no form that lost ${gives.lost} protons; it has ${family.forms.length} forms, from 0 to ${family.forms.length - 1} lost.`,
        );
        known = false;
        continue;
      }
    }
    if (count === null || sign(count.exact) <= 0 || z === null) {
      refuse(
        "composition.not-neutral",
        field,
        gives.count,
        `The library's entry for ${row.name} is not usable: a count or a charge in it is not a whole number.`,
      );
      known = false;
      continue;
    }
    charge = add(charge, multiply(count.exact, integer(z)));
  }
  if (known && (row.gives.length === 0 || sign(charge) !== 0))
    refuse(
      "composition.not-neutral",
      field,
      row.gives.length === 0 ? null : toNumber(charge),
      `${row.name} is not a neutral substance as it stands (charge ${toNumber(charge)} per formula unit), so it cannot be weighed or poured by itself. Choose the salt or the acid that was used.`,
    );
}

function chargeOf(
  gives: Gives,
  families: readonly FamilyInput[],
  familyIndex: ReadonlyMap<string, number>,
): number | null {
  switch (gives.kind) {
    case "family": {
      const z = (families[familyIndex.get(gives.family) ?? -1]?.z0 ?? Number.NaN) - gives.lost;
      return Number.isInteger(z) ? z : null;
    }
    case "ion":
      return Number.isInteger(gives.z) && Math.abs(gives.z) <= LARGEST_CHARGE ? gives.z : null;
    case "proton":
      return 1;
    case "hydroxide":
      return -1;
  }
}
