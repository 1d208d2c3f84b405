import { z } from "zod";

export const assignment = z.strictObject({ entryId: z.uuid(), witnessId: z.string().min(1).max(64).nullable() });
