// A search as it stands in an address. The page of the search and its CSV read the same names, so what is seen is what is saved.
import { z } from "zod";
import { DATE_KINDS, PH_KINDS, SEARCH_ROLES, type SearchQuery } from "../../../../db/search.ts";
import { STATES } from "../../../../db/states.ts";

const day = z.union([z.literal(""), z.iso.date({ error: "A day is written YYYY-MM-DD." })]).optional();
const words = (most: number) => z.string().max(most).optional();
const list = <T extends string>(of: readonly [T, ...T[]]) =>
  z
    .string()
    .max(500)
    .transform((text) => text.split(",").filter((word) => word !== ""))
    .pipe(z.array(z.enum(of)).max(of.length))
    .optional();
const compoundId = z.union([z.literal(""), z.string().regex(/^(reagent|form|family):[\w.:-]{1,120}$/)]);
const pH = z
  .union([z.literal(""), z.string().regex(/^[-+]?\d{1,3}([.,]\d{1,6})?$/, { error: "A pH is a number." })])
  .transform((text) => (text === "" ? undefined : Number(text.replace(",", "."))))
  .optional();

export const searchAddress = z
  .strictObject({
    compound: compoundId.optional(),
    narrow: z
      .string()
      .max(8000)
      .transform((text) => text.split(",").filter((id) => id !== ""))
      .pipe(z.array(compoundId).max(200))
      .optional(),
    role: list(SEARCH_ROLES),
    words: words(400),
    state: list(STATES),
    notebook: z.union([z.literal(""), z.uuid()]).optional(),
    author: z.union([z.literal(""), z.uuid()]).optional(),
    date: z.union([z.literal(""), z.enum(DATE_KINDS)]).optional(),
    from: day,
    to: day,
    pHOf: z.union([z.literal(""), z.enum(PH_KINDS)]).optional(),
    pHFrom: pH,
    pHTo: pH,
    newest: z.enum(["", "1"]).optional(),
    asOf: z.union([z.literal(""), z.iso.datetime()]).optional(),
  })
  .refine((asked) => (asked.pHFrom === undefined && asked.pHTo === undefined) || (asked.pHOf ?? "") !== "", {
    path: ["pHOf"],
    error: "Say which pH is meant, calculated or measured.",
  })
  .transform(
    (asked): SearchQuery => ({
      compound: asked.compound || undefined,
      narrow: asked.narrow,
      roles: asked.role,
      words: asked.words || undefined,
      states: asked.state,
      notebookId: asked.notebook || undefined,
      authorId: asked.author || undefined,
      dates:
        asked.from || asked.to
          ? { kind: asked.date || "recorded", from: asked.from || undefined, to: asked.to || undefined }
          : undefined,
      pH:
        asked.pHOf && (asked.pHFrom !== undefined || asked.pHTo !== undefined)
          ? { kind: asked.pHOf, from: asked.pHFrom ?? -5, to: asked.pHTo ?? 20 }
          : undefined,
      newestOnly: asked.newest === "1",
      asOf: asked.asOf || undefined,
    }),
  );
