// Notebooks and who is a member of them.
import { and, asc, count, desc, eq, inArray, lt } from "drizzle-orm";
import { record } from "./audit.ts";
import type { Db } from "./client.ts";
import { Refused } from "./errors.ts";
import { newId } from "./ids.ts";
import { ringPerson } from "./live.ts";
import { type Actor, demand, isRole, type Role, readableNotebooks } from "./policy.ts";
import { personRoles, user } from "./schema/people.ts";
import { entries, memberships, notebooks, revisions } from "./schema/records.ts";
import { type State, stateOf } from "./states.ts";

export type NotebookInput = { code: string; title: string; about: string };

const CODE = /^[A-Z][A-Z0-9]{1,7}$/;
const LONGEST_TITLE = 200;
const LONGEST_ABOUT = 4_000;
const LONGEST_REASON = 2_000;

/** Makes a notebook. Refuses `notebook.invalid` with the field, `notebook.code-taken`. */
export function createNotebook(db: Db, actor: Actor, input: NotebookInput): Promise<{ id: string; code: string }> {
  return db.transaction(async (tx) => {
    demand(actor, "notebook.create", null);
    const title = input.title.trim();
    if (!CODE.test(input.code)) throw new Refused("notebook.invalid", { field: "code" });
    if (title === "" || title.length > LONGEST_TITLE) throw new Refused("notebook.invalid", { field: "title" });
    if (input.about.length > LONGEST_ABOUT) throw new Refused("notebook.invalid", { field: "about" });
    const id = newId();
    const written = await tx
      .insert(notebooks)
      .values({ id, code: input.code, title, about: input.about.trim(), createdAt: new Date(), createdBy: actor.id })
      .onConflictDoNothing({ target: notebooks.code })
      .returning({ id: notebooks.id });
    if (written.length === 0) throw new Refused("notebook.code-taken", { field: "code" });
    await record(tx, actor, "notebook.created", {
      objectKind: "notebook",
      objectId: id,
      detail: { code: input.code, title },
    });
    return { id, code: input.code };
  });
}

export type MembershipInput = { notebookId: string; personId: string; reason: string };

/** Makes the person a member. Their open pages hear of it at the commit. */
export function addMember(db: Db, actor: Actor, input: MembershipInput): Promise<void> {
  return db.transaction(async (tx) => {
    const subject = await lockMembership(tx, actor, input);
    if (subject.closedAt !== null) throw new Refused("person.closed");
    const written = await tx
      .insert(memberships)
      .values({ notebookId: input.notebookId, personId: input.personId, grantedAt: new Date(), grantedBy: actor.id })
      .onConflictDoNothing()
      .returning({ personId: memberships.personId });
    if (written.length === 0) throw new Refused("notebook.already-member");
    await ringPerson(tx, input.personId);
    await record(tx, actor, "member.added", membershipEvent(input, subject));
  });
}

/** Ends the membership; what the person wrote stays theirs. Their open pages end at the commit. */
export function removeMember(db: Db, actor: Actor, input: MembershipInput): Promise<void> {
  return db.transaction(async (tx) => {
    const subject = await lockMembership(tx, actor, input);
    const removed = await tx
      .delete(memberships)
      .where(and(eq(memberships.notebookId, input.notebookId), eq(memberships.personId, input.personId)))
      .returning({ personId: memberships.personId });
    if (removed.length === 0) throw new Refused("notebook.not-member");
    await ringPerson(tx, input.personId);
    await record(tx, actor, "member.removed", membershipEvent(input, subject));
  });
}

export type NotebookLine = { id: string; code: string; title: string; about: string; entries: number };

/** The notebooks whose entries the actor may read. */
export async function listNotebooks(db: Db, actor: Actor): Promise<NotebookLine[]> {
  return notebookLines(db, readableNotebooks(actor));
}

export type Member = { personId: string; printedName: string; roles: Role[] };
export type AdministeredNotebook = NotebookLine & { members: Member[] };

/** Every notebook with its members, for Administration. No entry's title and no page. */
export async function listAllNotebooks(db: Db, actor: Actor): Promise<AdministeredNotebook[]> {
  demand(actor, "notebooks.list", null);
  const lines = await notebookLines(db, null);
  const members = await membersOf(db, null);
  return lines.map((line) => ({ ...line, members: members.get(line.id) ?? [] }));
}

export type EntryLine = {
  id: string;
  number: number;
  label: string;
  revision: number;
  state: State;
  title: string;
  doneOn: string | null;
  authorId: string;
  author: string;
  createdAt: Date;
  lastTypedAt: Date | null;
  signedAt: Date | null;
  witnessedAt: Date | null;
};
export type NotebookRead = {
  notebook: NotebookLine & { members: Member[] };
  entries: EntryLine[];
  /** hand it in as `after` for the next page; null at the end */
  next: number | null;
  mayBegin: boolean;
};

const LONGEST_PAGE = 200;

/** The notebook with its entries, newest number first. Not found for whoever may not read it, whether it is there or not. */
export async function readNotebook(
  db: Db,
  actor: Actor,
  { code, after, limit = 50 }: { code: string; after?: number; limit?: number },
): Promise<NotebookRead> {
  const [found] = await db.select({ id: notebooks.id }).from(notebooks).where(eq(notebooks.code, code));
  if (found === undefined) throw new Refused("notebook.not-found");
  demand(actor, "notebook.read", { notebookId: found.id });
  const [line] = await notebookLines(db, [found.id]);
  if (line === undefined) throw new Refused("notebook.not-found");
  const size = Math.min(Math.max(1, limit), LONGEST_PAGE);
  const rows = await db
    .select({
      id: entries.id,
      number: entries.number,
      revision: entries.revisionNumber,
      state: entries.state,
      title: revisions.title,
      doneOn: revisions.doneOn,
      authorId: entries.authorId,
      author: user.name,
      createdAt: entries.createdAt,
      lastTypedAt: revisions.lastTypedAt,
      signedAt: revisions.signedAt,
      witnessedAt: revisions.witnessedAt,
    })
    .from(entries)
    .innerJoin(revisions, and(eq(revisions.entryId, entries.id), eq(revisions.number, entries.revisionNumber)))
    .innerJoin(user, eq(user.id, entries.authorId))
    .where(and(eq(entries.notebookId, found.id), after === undefined ? undefined : lt(entries.number, after)))
    .orderBy(desc(entries.number))
    .limit(size + 1);
  const page = rows.slice(0, size);
  const members = await membersOf(db, [found.id]);
  return {
    notebook: { ...line, members: members.get(found.id) ?? [] },
    entries: page.map((row) => ({ ...row, state: stateOf(row.state), label: entryLabel(code, row.number) })),
    next: rows.length > size ? (page.at(-1)?.number ?? null) : null,
    mayBegin: actor.roles.includes("researcher"),
  };
}

/** How an entry is called: DSB-0042. */
export function entryLabel(code: string, number: number): string {
  return `${code}-${String(number).padStart(4, "0")}`;
}

/** Code and number of a label, or null when it is none. "DSB-42" is none: an entry has one address. */
export function parseLabel(label: string): { code: string; number: number } | null {
  const match = /^([A-Z][A-Z0-9]{1,7})-(\d{4,9})$/.exec(label);
  const [, code, digits] = match ?? [];
  if (code === undefined || digits === undefined) return null;
  const number = Number(digits);
  return number > 0 && entryLabel(code, number) === label ? { code, number } : null;
}

type MembershipSubject = { code: string; printedName: string; closedAt: Date | null };

async function lockMembership(tx: Db, actor: Actor, input: MembershipInput): Promise<MembershipSubject> {
  demand(actor, "membership.change", null);
  const reason = input.reason.trim();
  if (reason === "" || reason.length > LONGEST_REASON) throw new Refused("person.reason-missing", { field: "reason" });
  const [notebook] = await tx
    .select({ code: notebooks.code })
    .from(notebooks)
    .where(eq(notebooks.id, input.notebookId))
    .for("update");
  if (notebook === undefined) throw new Refused("notebook.not-found");
  const [person] = await tx
    .select({ printedName: user.name, closedAt: user.closedAt })
    .from(user)
    .where(eq(user.id, input.personId))
    .for("update");
  if (person === undefined) throw new Refused("person.not-found");
  return { code: notebook.code, ...person };
}

function membershipEvent(input: MembershipInput, subject: MembershipSubject) {
  return {
    objectKind: "person",
    objectId: input.personId,
    detail: {
      person: subject.printedName,
      notebook: subject.code,
      notebookId: input.notebookId,
      reason: input.reason.trim(),
    },
  };
}

async function notebookLines(db: Db, ids: string[] | null): Promise<NotebookLine[]> {
  return db
    .select({
      id: notebooks.id,
      code: notebooks.code,
      title: notebooks.title,
      about: notebooks.about,
      entries: count(entries.id),
    })
    .from(notebooks)
    .leftJoin(entries, eq(entries.notebookId, notebooks.id))
    .where(ids === null ? undefined : inArray(notebooks.id, ids))
    .groupBy(notebooks.id)
    .orderBy(asc(notebooks.code));
}

async function membersOf(db: Db, ids: string[] | null): Promise<Map<string, Member[]>> {
  const rows = await db
    .select({
      notebookId: memberships.notebookId,
      personId: memberships.personId,
      printedName: user.name,
      role: personRoles.role,
    })
    .from(memberships)
    .innerJoin(user, eq(user.id, memberships.personId))
    .leftJoin(personRoles, eq(personRoles.personId, memberships.personId))
    .where(ids === null ? undefined : inArray(memberships.notebookId, ids))
    .orderBy(asc(user.name), asc(user.id), asc(personRoles.role));
  const all = new Map<string, Member[]>();
  for (const { notebookId, personId, printedName, role } of rows) {
    const members = all.get(notebookId) ?? [];
    all.set(notebookId, members);
    let member = members.find((each) => each.personId === personId);
    if (member === undefined) {
      member = { personId, printedName, roles: [] };
      members.push(member);
    }
    if (role !== null && isRole(role)) member.roles.push(role);
  }
  return all;
}
