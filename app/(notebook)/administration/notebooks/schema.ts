import { z } from "zod";

export const notebookInput = z.strictObject({
  code: z
    .string()
    .trim()
    .regex(/^[A-Z][A-Z0-9]{1,7}$/, { error: "Two to eight capitals or digits, a capital first, such as DSB." }),
  title: z.string().trim().min(2, { error: "Write a title." }).max(120, { error: "At most 120 characters." }),
  about: z.string().trim().max(500, { error: "At most 500 characters." }),
});
export const membership = z.strictObject({
  notebookId: z.uuid(),
  personId: z.string().min(1).max(64),
  reason: z.string().trim().min(3).max(500),
});
