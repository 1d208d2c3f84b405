// Pages kept in memory between updates, so that a keystroke does not load a whole history.
//
// A page here is believed only when its token is the one that the revision's row carries, read under the lock (or, for a
// reader, in the statement that asked for the row). The token is a new random word with every accepted update and becomes
// visible with that update's commit alone: a transaction that rolled back, another server's update or another database
// never matches. Whoever writes takes the page out first and puts it back last, so nobody reads one that is half changed.
import { and, asc, desc, eq, gt, lte } from "drizzle-orm";
import * as Y from "yjs";
import type { Db } from "./client.ts";
import { snapshots, typedValues, updates, yjsClients } from "./schema/records.ts";

export type StandingValue = { label: string; value: string };

export type Page = {
  doc: Y.Doc;
  seq: number;
  /** history in bytes, for the bound on what is kept in memory */
  bytes: number;
  /** bytes accepted by the short check since the whole page was last validated */
  unchecked: number;
  /** characters that the page may still take */
  room: number;
  /** read when somebody first writes: typed values as they stand, and whose client ids there are (null: the server's) */
  values: Map<string, StandingValue> | null;
  clients: Map<number, string | null> | null;
  /** who is known to be a contributor; others may be as well */
  contributors: Set<string>;
  /** of the compounds that were met, for the labels of typed values */
  names: Map<string, string>;
};

/** Where a revision's history stands: what its row says. */
export type PageMark = { id: string; lastSeq: number; pageToken: string | null; pageBytes: number };

const PAGES_KEPT = 64;
const BYTES_KEPT = 48 * 1024 * 1024;
const UPDATES_A_READ = 500;

/** The page at the mark, taken out of the memory: put it back with the token that its next state is committed under. */
export async function takePage(db: Db, mark: PageMark): Promise<Page> {
  const kept = keptPages.get(mark.id);
  if (kept !== undefined) keptPages.delete(mark.id);
  if (kept !== undefined && kept.token === mark.pageToken) return kept.page;
  return loadPage(db, mark.id, mark.lastSeq, mark.pageBytes);
}

/** Keeps the page for the next one who asks with the same token; drops the longest unused when there are too many. */
export function putPageBack(revisionId: string, token: string | null, page: Page): void {
  keptPages.delete(revisionId);
  keptPages.set(revisionId, { token, page });
  let bytes = 0;
  for (const { page: each } of keptPages.values()) bytes += each.bytes;
  for (const [id, { page: each }] of keptPages) {
    if (keptPages.size <= PAGES_KEPT && bytes <= BYTES_KEPT) break;
    if (id === revisionId) break;
    keptPages.delete(id);
    bytes -= each.bytes;
  }
}

/** Hands the page to `read`, which must not change it and must be done when it returns. */
export async function readPage<T>(db: Db, mark: PageMark, read: (doc: Y.Doc) => T): Promise<T> {
  const kept = keptPages.get(mark.id);
  if (kept !== undefined && kept.token === mark.pageToken) return read(kept.page.doc);
  const page = await loadPage(db, mark.id, mark.lastSeq, mark.pageBytes);
  if (!keptPages.has(mark.id)) putPageBack(mark.id, mark.pageToken, page);
  return read(page.doc);
}

/** Builds a page from the newest snapshot and the updates after it, up to one sequence number. */
export async function loadPage(db: Db, revisionId: string, seq: number, bytes: number): Promise<Page> {
  const doc = new Y.Doc({ gc: false });
  const [snapshot] = await db
    .select({ seq: snapshots.seq, state: snapshots.state })
    .from(snapshots)
    .where(and(eq(snapshots.revisionId, revisionId), lte(snapshots.seq, seq)))
    .orderBy(desc(snapshots.seq))
    .limit(1);
  if (snapshot !== undefined) Y.applyUpdate(doc, snapshot.state);
  for (let after = snapshot?.seq ?? 0; after < seq; ) {
    const rows = await db
      .select({ seq: updates.seq, bytes: updates.bytes })
      .from(updates)
      .where(and(eq(updates.revisionId, revisionId), gt(updates.seq, after), lte(updates.seq, seq)))
      .orderBy(asc(updates.seq))
      .limit(UPDATES_A_READ);
    const last = rows.at(-1);
    if (last === undefined) throw new Error(`revision ${revisionId} lacks updates after ${after}`);
    doc.transact(() => {
      for (const row of rows) Y.applyUpdate(doc, row.bytes);
    });
    after = last.seq;
  }
  return {
    doc,
    seq,
    bytes,
    unchecked: 0,
    room: 0,
    names: new Map(),
    contributors: new Set(),
    values: null,
    clients: null,
  };
}

/** The typed values as they stand; asked under the revision's lock. */
export async function standingValues(db: Db, revisionId: string, page: Page): Promise<Map<string, StandingValue>> {
  if (page.values === null) {
    const rows = await db
      .select({ path: typedValues.path, label: typedValues.label, value: typedValues.value })
      .from(typedValues)
      .where(eq(typedValues.revisionId, revisionId));
    page.values = new Map(rows.map(({ path, label, value }) => [path, { label, value }]));
  }
  return page.values;
}

/** Whose Yjs client ids the page knows; asked under the revision's lock. */
export async function knownClients(db: Db, revisionId: string, page: Page): Promise<Map<number, string | null>> {
  if (page.clients === null) {
    const rows = await db
      .select({ clientId: yjsClients.clientId, personId: yjsClients.personId })
      .from(yjsClients)
      .where(eq(yjsClients.revisionId, revisionId));
    page.clients = new Map(rows.map(({ clientId, personId }) => [clientId, personId]));
  }
  return page.clients;
}

declare global {
  var counterleafPages: Map<string, { token: string | null; page: Page }> | undefined;
}

/** On the process, not the module: bundles may load a module more than once. Its order is that of use. */
const keptPages = globalThis.counterleafPages ?? new Map<string, { token: string | null; page: Page }>();
globalThis.counterleafPages = keptPages;
