import { z } from "zod";

export const forgottenInput = z.strictObject({
  email: z
    .email({ error: "Write an e-mail address, such as name@laboratory.example." })
    .max(254, { error: "At most 254 characters." }),
});
