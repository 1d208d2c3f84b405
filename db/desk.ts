// What lies on somebody's desk: their drafts, what came back to them, what waits for their countersignature.
import { and, asc, eq, inArray, isNull, or, type SQL, sql } from "drizzle-orm";
import { alias } from "drizzle-orm/pg-core";
import type { Db } from "./client.ts";
import { entryLabel } from "./notebooks.ts";
import { type Actor, readableNotebooks } from "./policy.ts";
import { daysBetween } from "./recorded.ts";
import { user } from "./schema/people.ts";
import { entries, notebooks, revisions } from "./schema/records.ts";
import { type State, stateOf } from "./states.ts";

export type DeskLine = {
  entryId: string;
  label: string;
  revision: number;
  title: string;
  state: State;
  author: string;
  /** since when it lies there, and whole days since */
  since: Date;
  days: number;
  /** the witness's reason, for what was returned */
  reason: string | null;
};

export type Desk = {
  drafts: DeskLine[];
  returned: DeskLine[];
  /** signed by others, for me to countersign; the longest waiting first */
  toCountersign: DeskLine[];
  /** signed by me, waiting for a witness */
  signed: DeskLine[];
};

const MOST_ON_A_DESK = 200;

/** What is the actor's to do, and what of theirs waits for others. */
export async function desk(db: Db, actor: Actor): Promise<Desk> {
  const readable = readableNotebooks(actor);
  if (readable.length === 0) return { drafts: [], returned: [], toCountersign: [], signed: [] };
  const now = new Date();
  const mine = eq(entries.authorId, actor.id);
  const own = await deskRows(
    db,
    and(inArray(entries.notebookId, readable), mine, inArray(entries.state, ["draft", "signed"])),
  );
  const waiting = actor.roles.includes("witness")
    ? await deskRows(
        db,
        and(
          inArray(entries.notebookId, readable),
          eq(entries.state, "signed"),
          sql`${entries.authorId} <> ${actor.id}`,
          or(isNull(entries.witnessId), eq(entries.witnessId, actor.id)),
          sql`not exists (select 1 from contributors c where c.entry_id = ${entries.id} and c.person_id = ${actor.id})`,
        ),
      )
    : [];
  const lines = own.map((row) => deskLine(row, now));
  return {
    drafts: lines.filter((line) => line.state === "draft" && line.reason === null),
    returned: lines.filter((line) => line.state === "draft" && line.reason !== null),
    toCountersign: waiting.map((row) => deskLine(row, now)),
    signed: lines.filter((line) => line.state === "signed"),
  };
}

type DeskRow = Awaited<ReturnType<typeof deskRows>>[number];

function deskRows(db: Db, where: SQL | undefined) {
  const before = alias(revisions, "before");
  return db
    .select({
      entryId: entries.id,
      code: notebooks.code,
      number: entries.number,
      revision: revisions.number,
      title: revisions.title,
      state: revisions.state,
      author: user.name,
      createdAt: revisions.createdAt,
      lastTypedAt: revisions.lastTypedAt,
      signedAt: revisions.signedAt,
      returnReason: before.returnReason,
    })
    .from(entries)
    .innerJoin(notebooks, eq(notebooks.id, entries.notebookId))
    .innerJoin(revisions, and(eq(revisions.entryId, entries.id), eq(revisions.number, entries.revisionNumber)))
    .innerJoin(user, eq(user.id, entries.authorId))
    .leftJoin(
      before,
      and(
        eq(before.entryId, entries.id),
        eq(before.number, sql`${entries.revisionNumber} - 1`),
        eq(before.state, "returned"),
      ),
    )
    .where(where)
    .orderBy(
      asc(sql`coalesce(${revisions.signedAt}, ${revisions.lastTypedAt}, ${revisions.createdAt})`),
      asc(entries.id),
    )
    .limit(MOST_ON_A_DESK);
}

function deskLine(row: DeskRow, now: Date): DeskLine {
  const { entryId, code, number, revision, title, author, returnReason } = row;
  const state = stateOf(row.state);
  // A draft lies since its last keystroke, what was returned since its return, what is signed since its signature.
  const typed = returnReason === null ? (row.lastTypedAt ?? row.createdAt) : row.createdAt;
  const since = state === "signed" ? (row.signedAt ?? row.createdAt) : typed;
  const days = daysBetween(since, now);
  return {
    entryId,
    label: entryLabel(code, number),
    revision,
    title,
    state,
    author,
    since,
    days,
    reason: returnReason,
  };
}
