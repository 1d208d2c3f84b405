import { z } from "zod";

const revisionId = z.uuid();
const sha256 = z.string().regex(/^[0-9a-f]{64}$/);
const password = z.string().min(1, { error: "Write your password." }).max(256, { error: "At most 256 characters." });

export const opening = z.strictObject({ revisionId });
export const whole = z.strictObject({ revisionId, contentSha256: sha256 });
export const signing = z.strictObject({ revisionId, shownHash: sha256, password });
export const countersigning = z.strictObject({
  revisionId,
  shownHash: sha256,
  findingId: z.uuid(),
  acknowledgement: z.string().trim().max(1000, { error: "At most 1000 characters." }),
  password,
});
export const returning = z.strictObject({
  revisionId,
  reason: z
    .string()
    .trim()
    .min(3, { error: "Write why, so that the author knows what to do." })
    .max(1000, { error: "At most 1000 characters." }),
});
