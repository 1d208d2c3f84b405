// The first state of a revision's page. The server writes it, once, so that no browser seeds a page and nobody becomes a
// contributor by it.
import { eq } from "drizzle-orm";
import * as Y from "yjs";
import type { Db } from "./client.ts";
import { newId } from "./ids.ts";
import { revisions, updates, yjsClients } from "./schema/records.ts";

/**
 * Writes the state as update 1 of a revision that has none. `owners` tells whose client ids of an earlier revision it
 * carries: those stay theirs, the rest are the server's.
 */
export async function writeFirstState(
  tx: Db,
  first: { revisionId: string; state: Uint8Array; owners: ReadonlyMap<number, string | null>; at: Date },
): Promise<void> {
  const { revisionId, state, owners, at } = first;
  await tx
    .insert(updates)
    .values({ revisionId, seq: 1, updateId: "first-state", bytes: state, personId: null, sessionId: null, at });
  const clientIds = new Set(Y.decodeUpdate(state).structs.map((struct) => struct.id.client));
  const rows = [...clientIds].map((clientId) => ({ revisionId, clientId, personId: owners.get(clientId) ?? null }));
  if (rows.length > 0) await tx.insert(yjsClients).values(rows);
  await tx
    .update(revisions)
    .set({ lastSeq: 1, pageToken: newId(), pageBytes: state.length })
    .where(eq(revisions.id, revisionId));
}
