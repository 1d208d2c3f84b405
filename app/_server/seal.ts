// The server's signing key: made at the first start, kept closed under the secret of the environment, opened only here.
import "server-only";
import { createCipheriv, createDecipheriv, hkdfSync, randomBytes } from "node:crypto";
import { CompactSign, calculateJwkThumbprint, exportJWK, generateKeyPair, importJWK, type JWK } from "jose";
import { z } from "zod";

const okp = z.strictObject({ kty: z.literal("OKP"), crv: z.literal("Ed25519"), x: z.string(), d: z.string() });
const sealedText = z.strictObject({
  v: z.literal(1),
  salt: z.string(),
  iv: z.string(),
  tag: z.string(),
  text: z.string(),
});

export type NewKey = { kid: string; publicJwk: string; sealedPrivate: string };
export type Seal = (manifest: string) => Promise<{ jws: string; kid: string }>;

/** Makes an Ed25519 pair (RFC 8032). The key id is the RFC 7638 thumbprint, so that it says which key and nothing else. */
export async function makeSigningKey(secret: string): Promise<NewKey> {
  const pair = await generateKeyPair("EdDSA", { crv: "Ed25519", extractable: true });
  const publicJwk = await exportJWK(pair.publicKey);
  const kid = await calculateJwkThumbprint(publicJwk);
  const whole: JWK = { ...publicJwk, kid, alg: "EdDSA", use: "sig" };
  return {
    kid,
    publicJwk: JSON.stringify(whole),
    sealedPrivate: close(JSON.stringify(await exportJWK(pair.privateKey)), kid, secret),
  };
}

/** Opens the key and returns what signs a manifest: a compact JWS (RFC 7515, EdDSA by RFC 8037). Throws when the secret is another one. */
export async function openSeal(key: { kid: string; sealedPrivate: string }, secret: string): Promise<Seal> {
  const jwk = okp.parse(JSON.parse(open(key.sealedPrivate, key.kid, secret)));
  const privateKey = await importJWK(jwk, "EdDSA");
  return async (manifest) => {
    const jws = await new CompactSign(new TextEncoder().encode(manifest))
      .setProtectedHeader({ alg: "EdDSA", kid: key.kid, typ: "counterleaf-manifest+jws" })
      .sign(privateKey);
    return { jws, kid: key.kid };
  };
}

function wrappingKey(secret: string, salt: Buffer): Buffer {
  return Buffer.from(hkdfSync("sha256", secret, salt, "counterleaf signing key 1", 32));
}

/** AES-256-GCM; the key id is authenticated with it, so that a closed key cannot be put in another's row. */
function close(text: string, kid: string, secret: string): string {
  const salt = randomBytes(16);
  const iv = randomBytes(12);
  const cipher = createCipheriv("aes-256-gcm", wrappingKey(secret, salt), iv).setAAD(Buffer.from(kid));
  const closed = Buffer.concat([cipher.update(text, "utf8"), cipher.final()]);
  const parts = { salt, iv, tag: cipher.getAuthTag(), text: closed };
  return JSON.stringify({
    v: 1,
    ...Object.fromEntries(Object.entries(parts).map(([name, bytes]) => [name, bytes.toString("base64url")])),
  });
}

function open(sealed: string, kid: string, secret: string): string {
  const parts = sealedText.parse(JSON.parse(sealed));
  const bytes = (text: string) => Buffer.from(text, "base64url");
  const decipher = createDecipheriv("aes-256-gcm", wrappingKey(secret, bytes(parts.salt)), bytes(parts.iv), {
    authTagLength: 16,
  })
    .setAAD(Buffer.from(kid))
    .setAuthTag(bytes(parts.tag));
  try {
    return Buffer.concat([decipher.update(bytes(parts.text)), decipher.final()]).toString("utf8");
  } catch {
    throw new Error("The signing key does not open: COUNTERLEAF_SECRET is not the one that it was made with.");
  }
}
