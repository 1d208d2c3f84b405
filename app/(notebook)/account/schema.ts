import { z } from "zod";

export const passwordChange = z
  .strictObject({
    currentPassword: z.string().min(1, { error: "Write the password that you have now." }).max(256),
    newPassword: z
      .string()
      .min(12, { error: "At least 12 characters." })
      .max(256, { error: "At most 256 characters." }),
    again: z.string().max(256),
  })
  .refine(({ newPassword, again }) => newPassword === again, { path: ["again"], error: "The two are not the same." });

export const preferences = z.strictObject({
  decimalSign: z.enum([".", ","]),
  timeZone: z.string().min(1, { error: "Choose a time zone." }).max(64),
});

export const sessionChoice = z.strictObject({ sessionId: z.string().min(1).max(64) });
