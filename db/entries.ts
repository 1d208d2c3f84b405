// Entries: begun with the next number of their notebook, read as a page shows them, given to a witness.
import { and, desc, eq, isNull } from "drizzle-orm";
import { seedPage } from "../editor/schema/index.ts";
import { record } from "./audit.ts";
import type { Db } from "./client.ts";
import {
  attachmentsOf,
  type ContentAttachment,
  type ContentPerson,
  contributorsOf,
  namesOfPeople,
  type SignedContent,
} from "./content.ts";
import { Refused, type RefusedCode } from "./errors.ts";
import { writeFirstState } from "./first-state.ts";
import { newId } from "./ids.ts";
import { ringState } from "./live.ts";
import { entryLabel, parseLabel } from "./notebooks.ts";
import { type Actor, demand, isRole, refusal, witnessRefusal } from "./policy.ts";
import { daysBetween, type Recorded, whenRecorded } from "./recorded.ts";
import { personRoles, user } from "./schema/people.ts";
import { entries, memberships, notebooks, revisions } from "./schema/records.ts";
import { type StoredSignature, signaturesOf } from "./signatures.ts";
import { signedContentOf } from "./signed-content.ts";
import { type State, stateOf } from "./states.ts";
import { actorNow, findRevision, lockEntryAndRevision, type Revision } from "./subjects.ts";

/** Begins an entry as its author. Its number is the notebook's next, taken under the notebook's lock: no gap, no double (REC-06). */
export function beginEntry(
  db: Db,
  asked: Actor,
  { notebookId }: { notebookId: string },
): Promise<{ id: string; revisionId: string; label: string }> {
  return db.transaction(async (tx) => {
    const [notebook] = await tx
      .select({ code: notebooks.code, number: notebooks.nextNumber })
      .from(notebooks)
      .where(eq(notebooks.id, notebookId))
      .for("no key update");
    if (notebook === undefined) throw new Refused("notebook.not-found");
    const actor = await actorNow(tx, asked, notebookId);
    demand(actor, "entry.begin", { notebookId });
    const { code, number } = notebook;
    const at = new Date();
    const id = newId();
    const revisionId = newId();
    await tx
      .update(notebooks)
      .set({ nextNumber: number + 1 })
      .where(eq(notebooks.id, notebookId));
    await tx
      .insert(entries)
      .values({ id, notebookId, number, authorId: actor.id, createdAt: at, revisionNumber: 1, state: "draft" });
    await tx
      .insert(revisions)
      .values({ id: revisionId, entryId: id, number: 1, state: "draft", createdAt: at, createdBy: actor.id });
    await writeFirstState(tx, { revisionId, state: seedPage(), owners: new Map(), at });
    const label = entryLabel(code, number);
    await record(tx, actor, "entry.begun", { objectKind: "entry", objectId: id, entryId: id, detail: { label } });
    return { id, revisionId, label };
  });
}

export type RevisionLine = {
  id: string;
  number: number;
  state: State;
  createdAt: Date;
  begunBecause: string | null;
  signedAt: Date | null;
  witnessedAt: Date | null;
  returned: { at: Date; by: string; reason: string } | null;
};

/** Everything that an entry's page shows of one revision; the page's own state comes by `pageState`. */
export type EntryRead = {
  id: string;
  label: string;
  number: number;
  createdAt: Date;
  notebook: { id: string; code: string; title: string };
  author: ContentPerson;
  /** assigned by a supervisor, or null */
  witness: ContentPerson | null;
  contributors: ContentPerson[];
  /** newest first */
  revisions: RevisionLine[];
  revision: RevisionLine & { isNewest: boolean; lastSeq: number; lastTypedAt: Date | null };
  head: { title: string; doneOn: string; lateReason: string };
  recorded: Recorded;
  attachments: ContentAttachment[];
  signatures: StoredSignature[];
  /** from the signature on: what was signed, which is what the page shows */
  signed: { content: SignedContent; sha256: string } | null;
  /** since when a signed revision waits for its witness */
  waiting: { since: Date; days: number } | null;
  may: Record<EntryAction, boolean>;
  /** for what the actor may not: why */
  because: Partial<Record<EntryAction, RefusedCode>>;
};

const ACTIONS = {
  write: "entry.write",
  sign: "entry.sign",
  countersign: "entry.countersign",
  return: "entry.return",
  attach: "attachment.store",
  assignWitness: "witness.assign",
} as const;
export type EntryAction = keyof typeof ACTIONS;

/** The entry with one revision, the newest unless another is named. Hidden and missing are one answer: `entry.not-found`. */
export async function readEntry(db: Db, asked: Actor, label: string, revisionNumber?: number): Promise<EntryRead> {
  const { revision, actor } = await findByLabel(db, asked, label, revisionNumber);
  demand(actor, "entry.read", revision.subject);
  const lines = await revisionLines(db, revision.entryId);
  const line = lines.find((each) => each.id === revision.id);
  if (line === undefined) throw new Refused("entry.not-found");
  const witnessName = revision.witnessId === null ? null : await namesOfPeople(db, [revision.witnessId]);
  const now = new Date();
  const head = { title: revision.title, doneOn: revision.doneOn ?? "", lateReason: revision.lateReason ?? "" };
  return {
    id: revision.entryId,
    label,
    number: revision.entryNumber,
    createdAt: revision.entryCreatedAt,
    notebook: { id: revision.notebookId, code: revision.notebookCode, title: revision.notebookTitle },
    author: { id: revision.authorId, printedName: revision.authorName },
    witness:
      revision.witnessId === null
        ? null
        : { id: revision.witnessId, printedName: witnessName?.get(revision.witnessId) ?? "" },
    contributors: await contributorsOf(db, revision.entryId),
    revisions: lines,
    revision: {
      ...line,
      isNewest: revision.number === revision.newestNumber,
      lastSeq: revision.lastSeq,
      lastTypedAt: revision.lastTypedAt,
    },
    head,
    recorded: await whenRecorded(db, {
      entryId: revision.entryId,
      doneOn: head.doneOn,
      timeZone: revision.authorTimeZone,
      now,
    }),
    attachments: await attachmentsOf(db, revision.id),
    signatures: await signaturesOf(db, revision.id),
    signed: revision.signedAt === null ? null : await signedContentOf(db, revision.id),
    waiting:
      revision.state === "signed" && revision.signedAt !== null
        ? { since: revision.signedAt, days: daysBetween(revision.signedAt, now) }
        : null,
    ...rightsOn(actor, revision),
  };
}

async function findByLabel(
  db: Db,
  asked: Actor,
  label: string,
  revisionNumber: number | undefined,
): Promise<{ revision: Revision; actor: Actor }> {
  const parsed = parseLabel(label);
  if (parsed === null) throw new Refused("entry.not-found");
  const [found] = await db
    .select({ id: revisions.id })
    .from(entries)
    .innerJoin(notebooks, eq(notebooks.id, entries.notebookId))
    .innerJoin(revisions, eq(revisions.entryId, entries.id))
    .where(
      and(
        eq(notebooks.code, parsed.code),
        eq(entries.number, parsed.number),
        eq(revisions.number, revisionNumber ?? entries.revisionNumber),
      ),
    );
  if (found === undefined) throw new Refused("entry.not-found");
  return findRevision(db, asked, found.id);
}

async function revisionLines(db: Db, entryId: string): Promise<RevisionLine[]> {
  const rows = await db
    .select({
      id: revisions.id,
      number: revisions.number,
      state: revisions.state,
      createdAt: revisions.createdAt,
      begunBecause: revisions.begunBecause,
      signedAt: revisions.signedAt,
      witnessedAt: revisions.witnessedAt,
      returnedAt: revisions.returnedAt,
      returnedBy: user.name,
      returnReason: revisions.returnReason,
    })
    .from(revisions)
    .leftJoin(user, eq(user.id, revisions.returnedBy))
    .where(eq(revisions.entryId, entryId))
    .orderBy(desc(revisions.number));
  return rows.map(({ returnedAt, returnedBy, returnReason, ...row }) => ({
    ...row,
    state: stateOf(row.state),
    returned: returnedAt === null ? null : { at: returnedAt, by: returnedBy ?? "", reason: returnReason ?? "" },
  }));
}

function rightsOn(actor: Actor, { subject }: Revision): Pick<EntryRead, "may" | "because"> {
  const refused = (action: EntryAction) => refusal(actor, ACTIONS[action], subject);
  const because: EntryRead["because"] = {};
  const check = (action: EntryAction): boolean => {
    const code = refused(action);
    if (code !== null) because[action] = code;
    return code === null;
  };
  const rights = {
    write: check("write"),
    sign: check("sign"),
    countersign: check("countersign"),
    return: check("return"),
    attach: check("attach"),
    assignWitness: check("assignWitness"),
  };
  return { may: rights, because };
}

/** Assigns the witness of an entry, or leaves it to any witness of the notebook. For a supervisor who wrote nothing in it. */
export function assignWitness(
  db: Db,
  asked: Actor,
  { entryId, witnessId }: { entryId: string; witnessId: string | null },
): Promise<void> {
  return db.transaction(async (tx) => {
    const [newest] = await tx
      .select({ id: revisions.id })
      .from(revisions)
      .innerJoin(entries, and(eq(entries.id, revisions.entryId), eq(entries.revisionNumber, revisions.number)))
      .where(eq(entries.id, entryId));
    if (newest === undefined) throw new Refused("entry.not-found");
    const { revision, actor } = await lockEntryAndRevision(tx, asked, newest.id);
    demand(actor, "witness.assign", revision.subject);
    if (witnessId === revision.witnessId) return;
    if (witnessId !== null) await demandEligible(tx, revision, witnessId);
    await tx.update(entries).set({ witnessId }).where(eq(entries.id, entryId));
    const ids = [witnessId, revision.witnessId].filter((id) => id !== null);
    const names = await namesOfPeople(tx, ids);
    const nameOf = (id: string | null) => (id === null ? null : (names.get(id) ?? id));
    await ringState(tx, revision.id, revision.state);
    await record(tx, actor, witnessId === null ? "witness.unassigned" : "witness.assigned", {
      objectKind: "entry",
      objectId: entryId,
      entryId,
      detail: { person: nameOf(witnessId), personId: witnessId, before: nameOf(revision.witnessId) },
    });
  });
}

async function demandEligible(tx: Db, revision: Revision, witnessId: string): Promise<void> {
  const roles = await tx
    .select({ role: personRoles.role })
    .from(personRoles)
    .where(eq(personRoles.personId, witnessId));
  const member = await tx
    .select({ notebookId: memberships.notebookId })
    .from(memberships)
    .innerJoin(user, and(eq(user.id, memberships.personId), isNull(user.closedAt)))
    .where(and(eq(memberships.personId, witnessId), eq(memberships.notebookId, revision.notebookId)));
  const candidate = {
    id: witnessId,
    roles: roles.map((row) => row.role).filter(isRole),
    memberOf: member.map((row) => row.notebookId),
  };
  const code = witnessRefusal(candidate, revision.subject);
  if (code !== null) throw new Refused(code);
}
