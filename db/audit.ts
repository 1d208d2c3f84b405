// The audit trail: events are written in the transaction of what they tell of, chained twice (db/chain.ts).
import { and, asc, desc, eq, gte, inArray, isNull, lt, lte, or, type SQL, sql } from "drizzle-orm";
import { z } from "zod";
import {
  type ChainedEvent,
  canonicalDetail,
  type EventCore,
  entryEventHash,
  eventHash,
  GENESIS,
  type Head,
} from "./chain.ts";
import type { Db } from "./client.ts";
import { type Detail, Refused, type RefusedCode } from "./errors.ts";
import { type Actor, demand, may, readableNotebooks } from "./policy.ts";
import { auditHeads, entries, events } from "./schema/records.ts";
import { type EventAction, sentence, withheldSentence } from "./sentences.ts";

export type EventObject = { objectKind: string; objectId: string; entryId?: string; detail?: Detail };
export type Recorded = { seq: number; hash: string; entrySeq: number | null; entryHash: string | null };

const STORE = "store";
const BEFORE_THE_FIRST: Head = { seq: 0, hash: GENESIS };
/** A row has 14 values, and a statement at most 65,535. */
const ROWS_AT_ONCE = 1000;

/**
 * Writes the event into the caller's transaction and returns the new heads. The store's head is locked here and held until
 * the commit: it is the one row that everybody wants, so a verb records last.
 */
export async function record(
  tx: Db,
  actor: Pick<Actor, "id" | "printedName"> | null,
  action: EventAction,
  on: EventObject,
): Promise<Recorded> {
  const [recorded] = await recordAll(tx, actor, [{ action, ...on }]);
  if (recorded === undefined) throw new Error("An event was not written.");
  return recorded;
}

/** `record` for what happens in one stroke: as many links of the chain, in their order, by as many statements as for one. */
export async function recordAll(
  tx: Db,
  actor: Pick<Actor, "id" | "printedName"> | null,
  happened: readonly ({ action: EventAction } & EventObject)[],
): Promise<Recorded[]> {
  if (happened.length === 0) return [];
  let head = await lockHead(tx);
  const entryHeads = await entryHeadsOf(tx, new Set(happened.flatMap(({ entryId }) => entryId ?? [])));
  const at = new Date();
  const rows = happened.map(({ action, objectKind, objectId, entryId, detail = {} }) => {
    const entryHead = entryId === undefined ? null : (entryHeads.get(entryId) ?? BEFORE_THE_FIRST);
    const event: EventCore = {
      seq: head.seq + 1,
      at: at.toISOString(),
      personId: actor?.id ?? null,
      printedName: actor?.printedName ?? null,
      action,
      objectKind,
      objectId,
      entryId: entryId ?? null,
      entrySeq: entryHead === null ? null : entryHead.seq + 1,
      detail: canonicalDetail(detail),
    };
    const entryHash = entryHead === null ? null : entryEventHash(entryHead.hash, event);
    const hash = eventHash(head.hash, event, entryHash);
    const row = { ...event, at, previousHash: head.hash, hash, entryPreviousHash: entryHead?.hash ?? null, entryHash };
    head = { seq: event.seq, hash };
    if (entryId !== undefined && event.entrySeq !== null && entryHash !== null) {
      entryHeads.set(entryId, { seq: event.entrySeq, hash: entryHash });
    }
    return row;
  });
  for (let first = 0; first < rows.length; first += ROWS_AT_ONCE) {
    await tx.insert(events).values(rows.slice(first, first + ROWS_AT_ONCE));
  }
  await tx.update(auditHeads).set(head).where(eq(auditHeads.id, STORE));
  if (entryHeads.size > 0) {
    await tx
      .insert(auditHeads)
      .values([...entryHeads].map(([id, entryHead]) => ({ id, ...entryHead })))
      .onConflictDoUpdate({ target: auditHeads.id, set: { seq: sql`excluded.seq`, hash: sql`excluded.hash` } });
  }
  return rows.map(({ seq, hash, entrySeq, entryHash }) => ({ seq, hash, entrySeq, entryHash }));
}

/** Records that something was refused, in a transaction of its own: the one that was refused is gone. */
export function recordRefusal(
  db: Db,
  actor: Pick<Actor, "id" | "printedName"> | null,
  refused: { code: RefusedCode; request: string; object?: { kind: string; id: string } },
): Promise<Recorded> {
  const { code, request, object } = refused;
  return db.transaction((tx) =>
    record(tx, actor, "request.refused", {
      objectKind: object?.kind ?? "request",
      objectId: object?.id ?? request,
      detail: { code, request },
    }),
  );
}

/** The chain's heads now: what a signature's manifest pins. Locks the store's head, so it is called last in a transaction. */
export async function lockHeads(tx: Db, entryId: string): Promise<{ store: Head; entry: Head }> {
  const store = await lockHead(tx);
  return { store, entry: (await entryHeadsOf(tx, new Set([entryId]))).get(entryId) ?? BEFORE_THE_FIRST };
}

/** The store's head, without a lock: for health and backups. */
export async function readHead(db: Db): Promise<Head> {
  const [head] = await db
    .select({ seq: auditHeads.seq, hash: auditHeads.hash })
    .from(auditHeads)
    .where(eq(auditHeads.id, STORE));
  if (head === undefined) throw new Error("The audit trail has no head: the store was not migrated.");
  return head;
}

export type EventFilters = { entryId?: string; personId?: string; action?: string; from?: Date; to?: Date };
export type ListedEvent = {
  seq: number;
  at: Date;
  personId: string | null;
  printedName: string | null;
  action: string;
  objectKind: string;
  objectId: string;
  entryId: string | null;
  sentence: string;
  /** null when the reader may not read the entry */
  detail: Detail | null;
};
export type EventPage = {
  events: ListedEvent[] /** hand it in as `after` for the next page; null at the end */;
  next: number | null;
};

const LONGEST_PAGE = 200;

/**
 * Events, newest first. An administrator sees every event, but of an entry only that it happened; whoever reads the entry's
 * notebook sees what it says. Everybody else gets those of the notebooks they read, by naming the entry.
 */
export async function listEvents(
  db: Db,
  actor: Actor,
  { filters = {}, after, limit = 50 }: { filters?: EventFilters; after?: number; limit?: number },
): Promise<EventPage> {
  const readable = readableNotebooks(actor);
  const seesAll = may(actor, "audit.read", null);
  if (!seesAll) await demandEntry(db, actor, filters.entryId);
  const count = Math.min(Math.max(1, limit), LONGEST_PAGE);
  const rows = await db
    .select({
      seq: events.seq,
      at: events.at,
      personId: events.personId,
      printedName: events.printedName,
      action: events.action,
      objectKind: events.objectKind,
      objectId: events.objectId,
      entryId: events.entryId,
      notebookId: entries.notebookId,
      detail: events.detail,
    })
    .from(events)
    .leftJoin(entries, eq(entries.id, events.entryId))
    .where(
      and(
        ...conditions(filters),
        after === undefined ? undefined : lt(events.seq, after),
        seesAll ? undefined : or(isNull(events.entryId), inArray(entries.notebookId, readable)),
      ),
    )
    .orderBy(desc(events.seq))
    .limit(count + 1);
  const page = rows.slice(0, count);
  return {
    events: page.map(({ notebookId, detail: text, ...event }) => {
      const isOpen = event.entryId === null || (notebookId !== null && readable.includes(notebookId));
      const detail = isOpen ? parseDetail(text) : null;
      return {
        ...event,
        detail,
        sentence: detail === null ? withheldSentence(event) : sentence({ ...event, detail }),
      };
    }),
    next: rows.length > count ? (page.at(-1)?.seq ?? null) : null,
  };
}

/** The chained rows themselves from a number on, in order: for verifying and for exports. */
export async function chainFrom(db: Db, from: number, limit: number): Promise<ChainedEvent[]> {
  const rows = await db.select().from(events).where(gte(events.seq, from)).orderBy(asc(events.seq)).limit(limit);
  return rows.map((row) => ({ ...row, at: row.at.toISOString() }));
}

/** One entry's chained rows in order. Asks no policy: the caller has read the entry for its actor. */
export async function entryChain(db: Db, entryId: string): Promise<ChainedEvent[]> {
  const rows = await db.select().from(events).where(eq(events.entryId, entryId)).orderBy(asc(events.entrySeq));
  return rows.map((row) => ({ ...row, at: row.at.toISOString() }));
}

async function lockHead(tx: Db): Promise<Head> {
  const [head] = await tx
    .select({ seq: auditHeads.seq, hash: auditHeads.hash })
    .from(auditHeads)
    .where(eq(auditHeads.id, STORE))
    .for("update");
  if (head === undefined) throw new Error("The audit trail has no head: the store was not migrated.");
  return head;
}

/** Read under the lock of the store's head, which whoever records holds. Nothing for an entry that has no event yet. */
async function entryHeadsOf(tx: Db, entryIds: ReadonlySet<string>): Promise<Map<string, Head>> {
  if (entryIds.size === 0) return new Map();
  const heads = await tx
    .select({ id: auditHeads.id, seq: auditHeads.seq, hash: auditHeads.hash })
    .from(auditHeads)
    .where(inArray(auditHeads.id, [...entryIds]));
  return new Map(heads.map(({ id, seq, hash }) => [id, { seq, hash }]));
}

async function demandEntry(db: Db, actor: Actor, entryId: string | undefined): Promise<void> {
  if (entryId === undefined) throw new Refused("administration.forbidden");
  const [entry] = await db.select({ notebookId: entries.notebookId }).from(entries).where(eq(entries.id, entryId));
  if (entry === undefined) throw new Refused("entry.not-found");
  demand(actor, "audit.entry", entry);
}

function conditions({ entryId, personId, action, from, to }: EventFilters): (SQL | undefined)[] {
  return [
    entryId === undefined ? undefined : eq(events.entryId, entryId),
    personId === undefined ? undefined : eq(events.personId, personId),
    action === undefined ? undefined : eq(events.action, action),
    from === undefined ? undefined : gte(events.at, from),
    to === undefined ? undefined : lte(events.at, to),
  ];
}

const plain: z.ZodType<Detail> = z.lazy(() =>
  z.record(z.string(), z.union([scalar, plain, z.array(z.union([scalar, plain]))])),
);
const scalar = z.union([z.string(), z.number(), z.boolean(), z.null()]);

function parseDetail(text: string): Detail {
  return plain.parse(JSON.parse(text));
}
