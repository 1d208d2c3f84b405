// Who is on a page, and where their cursor stands: told to every server by notification, stored nowhere.
import { sql } from "drizzle-orm";
import type { Db } from "./client.ts";
import { Refused } from "./errors.ts";
import { LIVE_CHANNEL } from "./live.ts";
import { type Actor, demand } from "./policy.ts";
import { findRevision } from "./subjects.ts";

/** A notification holds 7,999 bytes, and base64 makes four of three. */
export const LARGEST_PRESENCE_BYTES = 4096;

/** Tells the page's readers. `key` names the tab, so that a later word from it replaces an earlier one. Refuses like a read. */
export async function tellPresence(
  db: Db,
  asked: Actor,
  { revisionId, key, bytes }: { revisionId: string; key: string; bytes: Uint8Array },
): Promise<void> {
  if (bytes.length > LARGEST_PRESENCE_BYTES) throw new Refused("request.too-large", { limit: LARGEST_PRESENCE_BYTES });
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "entry.read", revision.subject);
  const bell = { revision: revisionId, presence: Buffer.from(bytes).toString("base64"), key };
  await db.execute(sql`select pg_notify(${LIVE_CHANNEL}, ${JSON.stringify(bell)})`);
}
