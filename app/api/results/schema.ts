import { z } from "zod";

/** The block is checked by its own schema (editor/schema) where it is solved; here only that it is one thing of bounded size. */
export const resultInput = z.strictObject({
  revisionId: z.uuid(),
  block: z.record(z.string(), z.unknown()),
  sweeps: z.boolean(),
});
export const RESULT_LIMIT_BYTES = 131_072;
