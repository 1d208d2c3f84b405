import { z } from "zod";

export const keptQuery = z.strictObject({ revision: z.uuid(), block: z.string().regex(/^[\w-]{1,64}$/) });
