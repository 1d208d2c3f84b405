// Who has a content open in which session, and whether the whole of it has passed before their eyes (SGN-12).
import { and, desc, eq } from "drizzle-orm";
import type { Db } from "./client.ts";
import { Refused } from "./errors.ts";
import type { Actor } from "./policy.ts";
import { openings } from "./schema/records.ts";

export type Opening = { contentSha256: string; seq: number; openedAt: Date; wholeAt: Date | null };

/** The actor's opening of exactly this content in this session, or null. */
export async function findOpening(
  db: Db,
  actor: Actor,
  { revisionId, contentSha256 }: { revisionId: string; contentSha256: string },
): Promise<Opening | null> {
  const [opening] = await db
    .select({
      contentSha256: openings.contentSha256,
      seq: openings.seq,
      openedAt: openings.openedAt,
      wholeAt: openings.wholeAt,
    })
    .from(openings)
    .where(
      and(
        eq(openings.revisionId, revisionId),
        eq(openings.sessionId, actor.sessionId),
        eq(openings.personId, actor.id),
        eq(openings.contentSha256, contentSha256),
      ),
    )
    .orderBy(desc(openings.openedAt))
    .limit(1);
  return opening ?? null;
}

/** The opening, or the refusal `revision.not-whole` when this content was not opened here, or not the whole of it. */
export async function demandWhole(
  db: Db,
  actor: Actor,
  content: { revisionId: string; contentSha256: string },
): Promise<Opening> {
  const opening = await findOpening(db, actor, content);
  if (opening === null || opening.wholeAt === null)
    throw new Refused("revision.not-whole", { opened: opening !== null });
  return opening;
}
