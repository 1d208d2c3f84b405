import { z } from "zod";

export const presenceInput = z.strictObject({ bytes: z.base64().min(4).max(5500) });
