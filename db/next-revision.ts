// The revision after one that was returned: a draft that begins with the same page, the same files, and no signature.
import { eq } from "drizzle-orm";
import * as Y from "yjs";
import type { Db } from "./client.ts";
import { writeFirstState } from "./first-state.ts";
import { newId } from "./ids.ts";
import { ringState } from "./live.ts";
import { loadPage } from "./pages.ts";
import type { Actor } from "./policy.ts";
import { entries, revisionAttachments, revisions, typedValues, yjsClients } from "./schema/records.ts";
import type { Revision } from "./subjects.ts";

/**
 * Begins the next revision under the entry's lock. The page is carried over with its whole history and with whose client ids
 * are in it, so that who wrote what can still be told; the copy itself is the server's and makes nobody a contributor.
 */
export async function beginNextRevision(
  tx: Db,
  actor: Actor,
  before: Revision,
  { because, at }: { because: string; at: Date },
): Promise<{ revisionId: string; number: number }> {
  const revisionId = newId();
  const number = before.number + 1;
  const { title, doneOn, lateReason } = before;
  await tx.insert(revisions).values({
    id: revisionId,
    entryId: before.entryId,
    number,
    state: "draft",
    createdAt: at,
    createdBy: actor.id,
    begunBecause: because,
    title,
    doneOn,
    lateReason,
  });
  const { doc } = await loadPage(tx, before.id, before.lastSeq, before.pageBytes);
  const owners = await tx
    .select({ clientId: yjsClients.clientId, personId: yjsClients.personId })
    .from(yjsClients)
    .where(eq(yjsClients.revisionId, before.id));
  const state = Y.encodeStateAsUpdate(doc);
  doc.destroy();
  await writeFirstState(tx, {
    revisionId,
    state,
    owners: new Map(owners.map(({ clientId, personId }) => [clientId, personId])),
    at,
  });
  await copyRows(tx, before.id, revisionId);
  await tx.update(entries).set({ revisionNumber: number, state: "draft" }).where(eq(entries.id, before.entryId));
  await ringState(tx, revisionId, "draft");
  return { revisionId, number };
}

/** Typed values keep who set them and when; files keep their strikes. */
async function copyRows(tx: Db, fromId: string, revisionId: string): Promise<void> {
  const values = await tx
    .select({
      path: typedValues.path,
      label: typedValues.label,
      value: typedValues.value,
      personId: typedValues.personId,
      at: typedValues.at,
    })
    .from(typedValues)
    .where(eq(typedValues.revisionId, fromId));
  if (values.length > 0) await tx.insert(typedValues).values(values.map((value) => ({ ...value, revisionId })));
  const files = await tx
    .select({
      attachmentId: revisionAttachments.attachmentId,
      struckAt: revisionAttachments.struckAt,
      struckReason: revisionAttachments.struckReason,
      struckBy: revisionAttachments.struckBy,
    })
    .from(revisionAttachments)
    .where(eq(revisionAttachments.revisionId, fromId));
  if (files.length > 0) await tx.insert(revisionAttachments).values(files.map((file) => ({ ...file, revisionId })));
}
