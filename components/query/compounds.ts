// Compounds of the library as a person looks them up.
import { keepPreviousData, queryOptions } from "@tanstack/react-query";
import { z } from "zod";
import { getJson } from "./http.ts";

const compoundShape = z.object({
  /** `reagent:…`, `form:<family>:<protons lost>` or `family:…` */
  id: z.string(),
  name: z.string(),
  formula: z.string(),
  cas: z.string().nullable(),
  /** g/mol */
  molarMass: z.string().nullable(),
  /** "crystals", "aqueous solution" …, or "family" or "form" */
  form: z.string(),
  /** ids of the current versions of its constants */
  constants: z.array(z.string()),
  /** as on a usual label: offered, never filled in */
  massFraction: z.string().nullable(),
  density: z.string().nullable(),
  typicalPurity: z.string().nullable(),
  /** can stand in a composition by itself */
  neutral: z.boolean(),
  /** the name, number or formula that the question met */
  matched: z.string(),
});
export type CompoundItem = z.infer<typeof compoundShape>;

const searchShape = z.object({
  items: z.array(compoundShape),
  /** set when the text is a CAS RN whose check digit does not fit */
  casCheck: z.object({ given: z.string(), expected: z.number(), corrected: z.string() }).nullish(),
});
const itemsShape = z.object({ items: z.array(compoundShape) });

const LIBRARY_STAYS_FRESH_MS = 5 * 60_000;

/** Compounds that a name, synonym, CAS RN or formula finds; while the next answer is on its way the last one stays. */
export const compoundsQuery = (text: string, limit = 12) =>
  queryOptions({
    queryKey: ["compounds", "search", text.trim(), limit],
    queryFn: ({ signal }) =>
      getJson(`/api/compounds?${new URLSearchParams({ q: text.trim(), limit: String(limit) })}`, searchShape, signal),
    enabled: text.trim() !== "",
    staleTime: LIBRARY_STAYS_FRESH_MS,
    placeholderData: keepPreviousData,
  });

/** The compounds with these ids; unknown ones are missing from the answer. */
export const compoundsByIdQuery = (ids: readonly string[]) => {
  const asked = [...new Set(ids)].filter((id) => id !== "").sort();
  return queryOptions({
    queryKey: ["compounds", "ids", ...asked],
    queryFn: async ({ signal }) => {
      const items: CompoundItem[] = [];
      for (let from = 0; from < asked.length; from += IDS_A_QUESTION) {
        const some = asked.slice(from, from + IDS_A_QUESTION).join(",");
        const answer = await getJson(`/api/compounds?${new URLSearchParams({ ids: some })}`, itemsShape, signal);
        items.push(...answer.items);
      }
      return new Map(items.map((item) => [item.id, item]));
    },
    enabled: asked.length > 0,
    staleTime: LIBRARY_STAYS_FRESH_MS,
    placeholderData: keepPreviousData,
  });
};

const IDS_A_QUESTION = 80;
