import { compactVerify, importJWK } from "jose";
import { expect, it } from "vitest";
import { makeSigningKey, openSeal } from "../../app/_server/seal.ts";

const SECRET = "a secret that is used by this test only";

it("signs a manifest so that the published key verifies it (RFC 7515)", async () => {
  const key = await makeSigningKey(SECRET);
  const seal = await openSeal(key, SECRET);
  const { jws, kid } = await seal('{"sha256":"00"}');
  const verified = await compactVerify(jws, await importJWK(JSON.parse(key.publicJwk), "EdDSA"));
  expect(new TextDecoder().decode(verified.payload)).toBe('{"sha256":"00"}');
  expect(verified.protectedHeader).toMatchObject({ alg: "EdDSA", kid });
  expect(kid).toBe(key.kid);
});

it("publishes no private part and keeps none in clear", async () => {
  const key = await makeSigningKey(SECRET);
  expect(Object.keys(JSON.parse(key.publicJwk)).sort()).toEqual(["alg", "crv", "kid", "kty", "use", "x"]);
  expect(key.sealedPrivate).not.toContain(JSON.parse(key.publicJwk).x);
});

it("does not open under another secret, nor in another key's row", async () => {
  const key = await makeSigningKey(SECRET);
  const other = await makeSigningKey(SECRET);
  await expect(openSeal(key, `${SECRET}.`)).rejects.toThrow("COUNTERLEAF_SECRET");
  await expect(openSeal({ kid: key.kid, sealedPrivate: other.sealedPrivate }, SECRET)).rejects.toThrow(
    "COUNTERLEAF_SECRET",
  );
});
