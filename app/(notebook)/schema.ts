import { z } from "zod";

export const beginInput = z.strictObject({ notebookId: z.uuid() });
export const identityWords = z.strictObject({
  personId: z.string().min(1).max(64),
  how: z.string().trim().min(3).max(500),
});
