import { z } from "zod";

export const resetInput = z.strictObject({
  token: z.string().min(1).max(512),
  newPassword: z.string().min(1).max(256),
});
