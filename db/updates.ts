// What is typed on a page: accepted, numbered, kept for good. See RECORDS.md, "The page while it is a draft".
import { and, asc, eq, gt, sql } from "drizzle-orm";
import * as Y from "yjs";
import { z } from "zod";
import { record } from "./audit.ts";
import { type Db, readRows } from "./client.ts";
import { becomeContributor } from "./contributors.ts";
import { Refused } from "./errors.ts";
import { newId } from "./ids.ts";
import { applyToPage, readClaim, wordsOfUpdate } from "./page-change.ts";
import { knownClients, putPageBack, readPage, takePage } from "./pages.ts";
import { type Actor, demand, may } from "./policy.ts";
import { snapshots, strayUpdates as strays, updates, yjsClients } from "./schema/records.ts";
import { findRevision, lockKnown, type RevisionFacts } from "./subjects.ts";
import { checkWhole, recordValues, standingAfter, writeValues } from "./typed-values.ts";
import { takeUpdate } from "./update-rate.ts";

export const LARGEST_UPDATE_BYTES = 1024 * 1024;
/** Of a page's whole history; a page of 20,000 edits has about 0.6 MB. */
export const LARGEST_PAGE_BYTES = 16 * 1024 * 1024;
const UPDATES_BETWEEN_SNAPSHOTS = 200;
/** What may come in as mere typing before the whole page is validated again. */
const UNCHECKED_BYTES = 32 * 1024;
const LARGEST_STRAY_BYTES = 8 * 1024 * 1024;

export type UpdateInput = { revisionId: string; updateId: string; bytes: Uint8Array };

/**
 * Accepts an update of a draft's page and answers its number; a repeat is answered with the first one's. An update that changes
 * nothing leaves no row and makes nobody a contributor. Refuses `revision.not-draft`, with the update kept for its writer;
 * `update.forged` when it writes in another's name; `update.invalid` when it cannot be read or builds on what has not arrived
 * (detail `incomplete`); `page.invalid` when the page would not be one any more; `update.too-large`, `page.too-large`,
 * `update.too-many`.
 */
export async function appendUpdate(db: Db, actor: Actor, input: UpdateInput): Promise<{ seq: number }> {
  if (!/^[\w-]{1,64}$/.test(input.updateId))
    throw new Refused("update.invalid", { reason: "The change has no proper id." });
  if (input.bytes.length > LARGEST_UPDATE_BYTES) throw new Refused("update.too-large", { limit: LARGEST_UPDATE_BYTES });
  await takeUpdate(db, actor.id);
  const facts = await factsOf(db, actor, input.revisionId);
  try {
    return await db.transaction((tx) => acceptUpdate(tx, actor, facts, input));
  } catch (refusal) {
    // The transaction is gone with the refusal; what was typed is not.
    if (refusal instanceof Refused && refusal.code === "revision.not-draft") {
      const kept = await keepStray(db, actor, input);
      throw new Refused("revision.not-draft", { ...refusal.detail, kept });
    }
    throw refusal;
  }
}

/** Whose a revision is never changes, so it is asked once in a process. */
async function factsOf(db: Db, actor: Actor, revisionId: string): Promise<RevisionFacts> {
  const known = knownFacts.get(revisionId);
  if (known !== undefined) return known;
  const { revision } = await findRevision(db, actor, revisionId);
  const { id, number, entryId, notebookId, authorId } = revision;
  const facts = { id, number, entryId, notebookId, authorId };
  if (knownFacts.size >= FACTS_KEPT) knownFacts.clear();
  knownFacts.set(revisionId, facts);
  return facts;
}

const FACTS_KEPT = 10_000;
const knownFacts = new Map<string, RevisionFacts>();

async function acceptUpdate(tx: Db, asked: Actor, facts: RevisionFacts, input: UpdateInput): Promise<{ seq: number }> {
  const { revisionId, bytes } = input;
  const { actor, subject, mark } = await lockKnown(tx, asked, facts);
  demand(actor, "entry.read", subject);
  if (subject.state !== "draft" && may(actor, "entry.write", { ...subject, state: "draft" })) {
    const seq = await seqOfRepeat(tx, actor, input);
    if (seq !== null) return { seq };
    throw new Refused("revision.not-draft", { state: subject.state });
  }
  demand(actor, "entry.write", subject);
  if (mark.pageBytes + bytes.length > LARGEST_PAGE_BYTES) {
    throw new Refused("page.too-large", { limit: LARGEST_PAGE_BYTES });
  }

  const page = await takePage(tx, mark);
  const owners = await knownClients(tx, revisionId, page);
  const claim = readClaim(page.doc, bytes);
  const isForged = claim.ok && claim.clients.some((client) => owners.has(client) && owners.get(client) !== actor.id);
  if (!claim.ok || isForged) {
    putPageBack(revisionId, mark.pageToken, page);
    if (claim.ok) throw new Refused("update.forged");
    throw new Refused("update.invalid", { reason: claim.reason, incomplete: claim.incomplete });
  }
  // From here the page in memory is ahead of the store: whatever goes wrong below, it is not put back.
  const change = applyToPage(page.doc, bytes);
  if (change === null) throw new Refused("update.invalid", { reason: BUILDS_ON_OTHERS, incomplete: true });
  if (change.kind === "nothing") {
    putPageBack(revisionId, mark.pageToken, page);
    // What was accepted before changes nothing when it comes again.
    return { seq: (await seqOfRepeat(tx, actor, input)) ?? mark.lastSeq };
  }
  const isTyping = change.kind === "typing" && page.unchecked + bytes.length <= Math.min(UNCHECKED_BYTES, page.room);
  const values = isTyping ? null : await checkWhole(tx, revisionId, page);
  page.unchecked = isTyping ? page.unchecked + bytes.length : 0;

  const seq = mark.lastSeq + 1;
  const token = newId();
  const at = new Date();
  await insertUpdate(tx, { ...input, seq, token, at, actor });
  for (const clientId of claim.clients.filter((client) => !owners.has(client))) {
    await tx.insert(yjsClients).values({ revisionId, clientId, personId: actor.id, sessionId: actor.sessionId });
    owners.set(clientId, actor.id);
  }
  if (seq % UPDATES_BETWEEN_SNAPSHOTS === 0) {
    await tx.insert(snapshots).values({ revisionId, seq, state: Y.encodeStateAsUpdate(page.doc) });
  }
  if (values !== null) await writeValues(tx, actor, facts, values, at);
  // Events come last: whoever records holds the head of the trail until the commit.
  if (!page.contributors.has(actor.id)) await becomeContributor(tx, actor, facts, at);
  page.contributors.add(actor.id);
  if (values !== null) await recordValues(tx, actor, facts, values);
  if (values !== null) page.values = standingAfter(page.values, values);
  page.seq = seq;
  page.bytes = mark.pageBytes + bytes.length;
  putPageBack(revisionId, token, page);
  return { seq };
}

const ID_STOOD_FOR_ANOTHER = "Another change has this id.";
const BUILDS_ON_OTHERS = "The change builds on others that have not arrived.";

/** The number under which this very update was accepted before, or null. Refuses an id that stood for something else. */
async function seqOfRepeat(tx: Db, actor: Actor, input: UpdateInput): Promise<number | null> {
  const [first] = await tx
    .select({ seq: updates.seq, personId: updates.personId, bytes: updates.bytes })
    .from(updates)
    .where(and(eq(updates.revisionId, input.revisionId), eq(updates.updateId, input.updateId)))
    .limit(1);
  if (first === undefined) return null;
  if (first.personId !== actor.id || !Buffer.from(first.bytes).equals(input.bytes)) {
    throw new Refused("update.invalid", { reason: ID_STOOD_FOR_ANOTHER, incomplete: false });
  }
  return first.seq;
}

type Accepted = UpdateInput & { seq: number; token: string; at: Date; actor: Actor };

/**
 * The row, the revision's mark and the bell in one statement: this is the road of every keystroke. Refuses an update whose id
 * stood for another one.
 */
async function insertUpdate(tx: Db, { revisionId, updateId, bytes, seq, token, at, actor }: Accepted): Promise<void> {
  const time = sql.param(at, updates.at);
  const accepted = await readRows(
    tx,
    z.object({ seq: z.number() }),
    sql`with accepted as (
        insert into updates (revision_id, seq, update_id, bytes, person_id, session_id, at)
        values (${revisionId}, ${seq}, ${updateId}, ${sql.param(bytes, updates.bytes)}, ${actor.id}, ${actor.sessionId}, ${time})
        on conflict (revision_id, update_id) do nothing
        returning seq
      ), marked as (
        update revisions set last_seq = ${seq}, page_token = ${token}, page_bytes = page_bytes + ${bytes.length},
          last_typed_at = ${time} where id = ${revisionId}
      )
      select seq, pg_notify('leaf', ${JSON.stringify({ revision: revisionId, seq })})::text from accepted`,
  );
  if (accepted.length === 0) throw new Refused("update.invalid", { reason: ID_STOOD_FOR_ANOTHER, incomplete: false });
}

/** Keeps what came for a revision that is no longer a draft; answers whether it could be kept. */
function keepStray(db: Db, actor: Actor, { revisionId, updateId, bytes }: UpdateInput): Promise<boolean> {
  return db.transaction(async (tx) => {
    const { revision } = await findRevision(tx, actor, revisionId);
    const [kept] = await tx
      .select({ bytes: sql<number>`coalesce(sum(length(${strays.bytes})), 0)::int` })
      .from(strays)
      .where(and(eq(strays.revisionId, revisionId), eq(strays.personId, actor.id)));
    if ((kept?.bytes ?? 0) + bytes.length > LARGEST_STRAY_BYTES) return false;
    const text = wordsOfUpdate(bytes);
    const added = await tx
      .insert(strays)
      .values({ id: newId(), revisionId, updateId, bytes, text, personId: actor.id, at: new Date() })
      .onConflictDoNothing()
      .returning({ id: strays.id });
    if (added.length > 0) {
      await record(tx, actor, "update.kept-apart", {
        objectKind: "revision",
        objectId: revisionId,
        entryId: revision.entryId,
        detail: { revision: revision.number, bytes: bytes.length },
      });
    }
    return true;
  });
}

/** The page as a Yjs state with its vector and the number that it stands at; for members, in any state. */
export async function pageState(
  db: Db,
  asked: Actor,
  revisionId: string,
): Promise<{ seq: number; state: Uint8Array; vector: Uint8Array }> {
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "entry.read", revision.subject);
  return readPage(db, revision, (doc) => ({
    seq: revision.lastSeq,
    state: Y.encodeStateAsUpdate(doc),
    vector: Y.encodeStateVector(doc),
  }));
}

const UPDATES_A_READ = 500;

/** The updates after a number, in order, at most 500: ask again after the last one. */
export async function updatesAfter(
  db: Db,
  asked: Actor,
  revisionId: string,
  seq: number,
): Promise<{ seq: number; bytes: Uint8Array; personId: string | null; at: Date }[]> {
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "entry.read", revision.subject);
  return db
    .select({ seq: updates.seq, bytes: updates.bytes, personId: updates.personId, at: updates.at })
    .from(updates)
    .where(and(eq(updates.revisionId, revisionId), gt(updates.seq, seq)))
    .orderBy(asc(updates.seq))
    .limit(UPDATES_A_READ);
}

/** What the actor sent for a revision that was no longer a draft, oldest first: theirs to copy, nobody else's to see. */
export async function strayUpdates(
  db: Db,
  asked: Actor,
  revisionId: string,
): Promise<{ id: string; at: Date; text: string }[]> {
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "entry.read", revision.subject);
  return db
    .select({ id: strays.id, at: strays.at, text: strays.text })
    .from(strays)
    .where(and(eq(strays.revisionId, revisionId), eq(strays.personId, actor.id)))
    .orderBy(asc(strays.at), asc(strays.id));
}
