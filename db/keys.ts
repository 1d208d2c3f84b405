// Rows of signing keys. The private half is sealed under a secret that the database never sees; app/_server/seal.ts opens it.
import { and, desc, eq, isNull } from "drizzle-orm";
import { record } from "./audit.ts";
import type { Db } from "./client.ts";
import { signingKeys } from "./schema/people.ts";

export type SigningKey = { kid: string; publicJwk: string; sealedPrivate: string; createdAt: Date };
export type PublicKey = { kid: string; publicJwk: string; createdAt: Date; retiredAt: Date | null };

/** The newest key that is not retired, or null in a fresh store. */
export async function currentKey(db: Db): Promise<SigningKey | null> {
  const [key] = await db
    .select({
      kid: signingKeys.kid,
      publicJwk: signingKeys.publicJwk,
      sealedPrivate: signingKeys.sealedPrivate,
      createdAt: signingKeys.createdAt,
    })
    .from(signingKeys)
    .where(isNull(signingKeys.retiredAt))
    .orderBy(desc(signingKeys.createdAt), desc(signingKeys.kid))
    .limit(1);
  return key ?? null;
}

/** Every public key that ever signed, with its period. Old ones stay, or old signatures could not be checked. */
export function listPublicKeys(db: Db): Promise<PublicKey[]> {
  return db
    .select({
      kid: signingKeys.kid,
      publicJwk: signingKeys.publicJwk,
      createdAt: signingKeys.createdAt,
      retiredAt: signingKeys.retiredAt,
    })
    .from(signingKeys)
    .orderBy(desc(signingKeys.createdAt), desc(signingKeys.kid));
}

/** Keeps a new key. Of two servers that make one at the same moment both stay; the newest signs. */
export function keepKey(db: Db, key: Omit<SigningKey, "createdAt">): Promise<void> {
  return db.transaction(async (tx) => {
    await tx.insert(signingKeys).values({ ...key, createdAt: new Date() });
    await record(tx, null, "key.made", { objectKind: "key", objectId: key.kid, detail: { kid: key.kid } });
  });
}

/** Retires a key: it signs no more, and stays published. */
export function retireKey(db: Db, kid: string): Promise<void> {
  return db.transaction(async (tx) => {
    const retired = await tx
      .update(signingKeys)
      .set({ retiredAt: new Date() })
      .where(and(eq(signingKeys.kid, kid), isNull(signingKeys.retiredAt)))
      .returning({ kid: signingKeys.kid });
    if (retired.length === 0) return;
    await record(tx, null, "key.retired", { objectKind: "key", objectId: kid, detail: { kid } });
  });
}
