import { z } from "zod";

export const strikeInput = z.strictObject({
  revisionId: z.uuid(),
  reason: z
    .string()
    .trim()
    .min(1, { error: "Say why the file is struck." })
    .max(1000, { error: "At most 1,000 characters." }),
});
