// The bells that leave with a commit. A notification tells that there is something to read, never what it says.
import { sql } from "drizzle-orm";
import type { Db } from "./client.ts";
import type { State } from "./states.ts";

/** The one channel, for `Database.listen`. */
export const LIVE_CHANNEL = "leaf";

/** A new update of the revision was accepted under this number. */
export function ringUpdate(tx: Db, revisionId: string, seq: number): Promise<unknown> {
  return ring(tx, { revision: revisionId, seq });
}

/** The revision's state changed. */
export function ringState(tx: Db, revisionId: string, state: State): Promise<unknown> {
  return ring(tx, { revision: revisionId, state });
}

/** The person's rights, sessions or account changed: open streams ask again who they are. */
export function ringPerson(tx: Db, personId: string): Promise<unknown> {
  return ring(tx, { person: personId });
}

function ring(tx: Db, bell: Record<string, string | number>): Promise<unknown> {
  return tx.execute(sql`select pg_notify(${LIVE_CHANNEL}, ${JSON.stringify(bell)})`);
}
