import { z } from "zod";

export type NewPassword = { password: string; again: string; printedName: string; email: string };

/** What the form asks. The server asks for more of a password (passwords.ts), and says so at the field. */
export function newPassword(asksIdentity: boolean) {
  return z
    .object({
      password: z.string().min(12, { error: "At least 12 characters." }).max(256, { error: "At most 256 characters." }),
      again: z.string(),
      printedName: asksIdentity
        ? z
            .string()
            .trim()
            .min(2, { error: "Write the name that you sign with." })
            .max(80, { error: "At most 80 characters." })
        : z.string(),
      email: asksIdentity
        ? z.email({ error: "Write an e-mail address." }).max(254, { error: "At most 254 characters." })
        : z.string(),
    })
    .refine(({ password, again }) => password === again, { path: ["again"], error: "The two are not the same." });
}
