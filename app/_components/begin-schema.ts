import { z } from "zod";

export const beginInput = z.strictObject({ notebookId: z.uuid() });
