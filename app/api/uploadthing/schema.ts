import { z } from "zod";

/** A page only ever asks to upload; the callback comes from this process itself, not over HTTP. */
export const uploadQuery = z.strictObject({ actionType: z.literal("upload"), slug: z.literal("attachment") });
export const UPLOAD_REQUEST_LIMIT_BYTES = 16_384;
