import { z } from "zod";

export const updateId = z.string().regex(/^[\w-]{1,64}$/, { error: "x-update-id is missing or not an id." });
export const UPDATE_LIMIT_BYTES = 1024 * 1024;
