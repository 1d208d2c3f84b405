import { listPublicKeys } from "../../../db/keys.ts";
import { openRoute } from "../../_server/answer.ts";
import { publicJwk } from "./schema.ts";

export const dynamic = "force-dynamic";

/** The public halves of every key that ever signed, as a JWK set (RFC 7517). Open to everybody: others check with them. */
export const GET = openRoute(async ({ db }) => {
  const keys = await listPublicKeys(db);
  const jwks = keys.map(({ publicJwk: text, createdAt, retiredAt }) => ({
    ...publicJwk.parse(JSON.parse(text)),
    since: createdAt.toISOString(),
    until: retiredAt?.toISOString() ?? null,
  }));
  return Response.json({ keys: jwks }, { headers: { "content-type": "application/jwk-set+json" } });
});
