// What the policy is asked about: a revision with its entry and those who wrote in it, and the actor's rights as they stand
// now, not as they stood when the request began. Locks are taken downwards: entry, then revision.
//
// A lock is one statement and what is read under it another: a statement that had to wait for a row still sees every other
// table as it was before the wait. The lock is `no key update`, which does not stand in the way of rows that only refer here.
import { type AnyColumn, eq, type SQL, sql } from "drizzle-orm";
import type { Db } from "./client.ts";
import { Refused } from "./errors.ts";
import type { PageMark } from "./pages.ts";
import { type Actor, type EntrySubject, isRole } from "./policy.ts";
import { user } from "./schema/people.ts";
import { entries, notebooks, revisions } from "./schema/records.ts";
import { type State, stateOf } from "./states.ts";

type RevisionRow = Awaited<ReturnType<typeof selectRevision>>[number];
export type Revision = RevisionRow & { state: State; subject: EntrySubject };

/** The revision and its actor, under the revision's lock. Refuses `entry.not-found` for an id that does not exist. */
export async function lockRevision(
  tx: Db,
  actor: Actor,
  revisionId: string,
): Promise<{ revision: Revision; actor: Actor }> {
  await tx
    .select({ id: revisions.id })
    .from(revisions)
    .where(eq(revisions.id, revisionId))
    .for("no key update", { of: revisions });
  return findRevision(tx, actor, revisionId);
}

/** What never changes about a revision: whose it is. */
export type RevisionFacts = Pick<Revision, "id" | "number" | "entryId" | "notebookId" | "authorId">;

/**
 * The lock of a revision whose facts are known, with the rights of the actor, in one statement: the road of every keystroke.
 * What is read of other tables is as it was when the statement began, that is, when the update arrived.
 */
export async function lockKnown(
  tx: Db,
  asked: Actor,
  facts: RevisionFacts,
): Promise<{ actor: Actor; subject: EntrySubject; mark: PageMark }> {
  const [row] = await tx
    .select({
      id: revisions.id,
      state: revisions.state,
      lastSeq: revisions.lastSeq,
      pageToken: revisions.pageToken,
      pageBytes: revisions.pageBytes,
      ...rightsOf(asked, sql`${facts.notebookId}`),
    })
    .from(revisions)
    .where(eq(revisions.id, facts.id))
    .for("no key update");
  if (row === undefined) throw new Refused("entry.not-found");
  const { id, lastSeq, pageToken, pageBytes } = row;
  const { notebookId, authorId } = facts;
  return {
    actor: withRightsNow(asked, { ...row, notebookId }),
    // Neither witness nor contributors have a part in who may read or write.
    subject: { notebookId, authorId, state: stateOf(row.state), witnessId: null, contributorIds: [] },
    mark: { id, lastSeq, pageToken, pageBytes },
  };
}

/** The same under the locks of the entry and the revision: for what changes the state. */
export async function lockEntryAndRevision(
  tx: Db,
  actor: Actor,
  revisionId: string,
): Promise<{ revision: Revision; actor: Actor }> {
  const [found] = await tx
    .select({ entryId: revisions.entryId })
    .from(revisions)
    .where(eq(revisions.id, revisionId))
    .limit(1);
  if (found === undefined) throw new Refused("entry.not-found");
  await tx.select({ id: entries.id }).from(entries).where(eq(entries.id, found.entryId)).for("no key update");
  return lockRevision(tx, actor, revisionId);
}

/** The revision and its actor without a lock: for reads. */
export async function findRevision(
  db: Db,
  actor: Actor,
  revisionId: string,
): Promise<{ revision: Revision; actor: Actor }> {
  const [row] = await selectRevision(db, actor, revisionId);
  if (row === undefined) throw new Refused("entry.not-found");
  const state = stateOf(row.state);
  const subject: EntrySubject = {
    notebookId: row.notebookId,
    authorId: row.authorId,
    state,
    witnessId: row.witnessId,
    contributorIds: row.contributorIds,
  };
  return { revision: { ...row, state, subject }, actor: withRightsNow(actor, row) };
}

function selectRevision(db: Db, actor: Actor, revisionId: string) {
  return db
    .select({
      id: revisions.id,
      number: revisions.number,
      state: revisions.state,
      createdAt: revisions.createdAt,
      begunBecause: revisions.begunBecause,
      title: revisions.title,
      doneOn: revisions.doneOn,
      lateReason: revisions.lateReason,
      lastSeq: revisions.lastSeq,
      pageToken: revisions.pageToken,
      pageBytes: revisions.pageBytes,
      derivedSeq: revisions.derivedSeq,
      lastTypedAt: revisions.lastTypedAt,
      signedAt: revisions.signedAt,
      entryId: entries.id,
      entryNumber: entries.number,
      entryCreatedAt: entries.createdAt,
      newestNumber: entries.revisionNumber,
      authorId: entries.authorId,
      witnessId: entries.witnessId,
      notebookId: notebooks.id,
      notebookCode: notebooks.code,
      notebookTitle: notebooks.title,
      contributorIds: sql<
        string[]
      >`array(select c.person_id from contributors c where c.entry_id = ${entries.id} order by c.since, c.person_id)`,
      ...rightsOf(actor, notebooks.id),
      authorName: user.name,
      authorTimeZone: user.timeZone,
    })
    .from(revisions)
    .innerJoin(entries, eq(entries.id, revisions.entryId))
    .innerJoin(notebooks, eq(notebooks.id, entries.notebookId))
    .innerJoin(user, eq(user.id, entries.authorId))
    .where(eq(revisions.id, revisionId));
}

function withRightsNow(
  actor: Actor,
  now: {
    notebookId: string;
    actorIsMember: boolean;
    actorRoles: string[];
    actorMaySign: boolean;
    actorIsOpen: boolean;
  },
): Actor {
  const others = actor.memberOf.filter((id) => id !== now.notebookId);
  return {
    ...actor,
    memberOf: now.actorIsMember && now.actorIsOpen ? [...others, now.notebookId] : others,
    roles: now.actorRoles.filter(isRole),
    signingHeld: !now.actorMaySign,
  };
}

/** The actor with roles and membership of one notebook as they stand now; for verbs on a notebook. */
export async function actorNow(tx: Db, actor: Actor, notebookId: string): Promise<Actor> {
  const [now] = await tx
    .select({ notebookId: sql<string>`${notebookId}::text`, ...rightsOf(actor, sql`${notebookId}`) })
    .from(user)
    .where(eq(user.id, actor.id));
  if (now === undefined) throw new Refused("session.ended");
  return withRightsNow(actor, now);
}

function rightsOf(actor: Actor, notebookId: SQL | AnyColumn) {
  return {
    actorIsMember: sql<boolean>`exists (select 1 from memberships m where m.notebook_id = ${notebookId} and m.person_id = ${actor.id})`,
    actorRoles: sql<string[]>`array(select p.role from person_roles p where p.person_id = ${actor.id})`,
    actorMaySign: sql<boolean>`exists (select 1 from "user" u where u.id = ${actor.id} and u.signing_held_at is null)`,
    actorIsOpen: sql<boolean>`exists (select 1 from "user" u where u.id = ${actor.id} and u.closed_at is null)`,
  };
}
