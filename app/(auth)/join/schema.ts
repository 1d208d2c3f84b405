import { z } from "zod";

export const joinInput = z.strictObject({
  code: z.string().min(1).max(512),
  email: z.email().max(254).optional(),
  printedName: z.string().trim().min(2).max(80).optional(),
  password: z.string().min(1).max(256),
});
