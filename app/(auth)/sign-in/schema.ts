import { z } from "zod";

export const signInInput = z.strictObject({
  email: z
    .string()
    .trim()
    .min(1, { error: "Write the e-mail that your account has." })
    .max(254, { error: "At most 254 characters." }),
  password: z.string().min(1, { error: "Write your password." }).max(256, { error: "At most 256 characters." }),
});
export type SignInForm = z.infer<typeof signInInput>;
