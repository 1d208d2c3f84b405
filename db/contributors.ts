// Who wrote in an entry. Being one bars from witnessing it, so nobody becomes one but by something that was accepted.
import { record } from "./audit.ts";
import type { Db } from "./client.ts";
import type { Actor } from "./policy.ts";
import { contributors } from "./schema/records.ts";
import type { RevisionFacts } from "./subjects.ts";

/** Enters the actor among those who wrote in the entry, once, with an event. For every verb that accepts something. */
export async function becomeContributor(
  tx: Db,
  actor: Actor,
  revision: Pick<RevisionFacts, "entryId" | "number">,
  at: Date,
): Promise<void> {
  const added = await tx
    .insert(contributors)
    .values({ entryId: revision.entryId, personId: actor.id, since: at })
    .onConflictDoNothing()
    .returning({ personId: contributors.personId });
  if (added.length === 0) return;
  await record(tx, actor, "contributor.added", {
    objectKind: "entry",
    objectId: revision.entryId,
    entryId: revision.entryId,
    detail: { revision: revision.number },
  });
}
