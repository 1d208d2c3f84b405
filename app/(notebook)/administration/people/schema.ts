import { z } from "zod";

// The same words as in db/policy.ts, where the browser has no road to; the actions' types compare the two.
export const ROLE_NAMES = ["researcher", "witness", "supervisor", "administrator"] as const;

const reason = z.string().trim().min(3).max(500);
const personId = z.string().min(1).max(64);

export const invitation = z.strictObject({
  printedName: z
    .string()
    .trim()
    .min(2, { error: "Write the name that they sign with." })
    .max(80, { error: "At most 80 characters." }),
  email: z.email({ error: "Write an e-mail address." }).max(254),
  roles: z.array(z.enum(ROLE_NAMES)).max(ROLE_NAMES.length),
});
export const roleChange = z.strictObject({ personId, role: z.enum(ROLE_NAMES), reason });
export const overPerson = z.strictObject({ personId, reason });
