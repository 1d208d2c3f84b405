import { z } from "zod";

const compoundId = z
  .string()
  .regex(/^(reagent|form|family):[\w.:-]{1,120}$/, { error: "This does not name a compound." });

/** What a person typed, or the ids of compounds that are on a page already. */
export const compoundsQuery = z.union([
  z.strictObject({
    q: z.string().max(200, { error: "At most 200 characters." }),
    limit: z.coerce.number().int().min(1).max(50).default(20),
  }),
  z.strictObject({
    ids: z
      .string()
      .max(12_000)
      .transform((text) => text.split(",").filter((id) => id !== ""))
      .pipe(z.array(compoundId).max(100, { error: "At most 100 at once." })),
  }),
]);
