import { z } from "zod";

/** What may leave the house of a key: nothing that is not named here, so never the private part. */
export const publicJwk = z.object({
  kty: z.literal("OKP"),
  crv: z.literal("Ed25519"),
  x: z.string(),
  kid: z.string(),
  alg: z.literal("EdDSA"),
  use: z.literal("sig"),
});
