// Which key signs: the newest that is not retired, made at the first start.
import "server-only";
import { currentKey, keepKey } from "../../db/keys.ts";
import { database } from "./database.ts";
import { settings } from "./env.ts";
import { makeSigningKey, openSeal, type Seal } from "./seal.ts";

declare global {
  var counterleafSeal: { kid: string; seal: Seal } | undefined;
}

/** What `db/signatures.ts` and `db/witnessing.ts` are handed to seal a manifest with. */
export async function signingSeal(): Promise<Seal> {
  const db = await database();
  if ((await currentKey(db)) === null) await keepKey(db, await makeSigningKey(settings().secret));
  const kept = await currentKey(db);
  if (kept === null) throw new Error("There is no signing key.");
  if (globalThis.counterleafSeal?.kid !== kept.kid) {
    globalThis.counterleafSeal = { kid: kept.kid, seal: await openSeal(kept, settings().secret) };
  }
  return globalThis.counterleafSeal.seal;
}
