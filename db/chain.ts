// Both hash chains of the audit trail, as plain functions that an auditor can read: every event carries the hash of the one
// before it in the whole store, and of the one before it among the events of its own entry.
import { createHash } from "node:crypto";
import canonicalize from "canonicalize";

/** What happened, as both chains seal it. `at` is UTC to the millisecond, `detail` is canonical JSON text (RFC 8785). */
export type EventCore = {
  seq: number;
  at: string;
  personId: string | null;
  printedName: string | null;
  action: string;
  objectKind: string;
  objectId: string;
  entryId: string | null;
  entrySeq: number | null;
  detail: string;
};

export type ChainedEvent = EventCore & {
  previousHash: string;
  hash: string;
  entryPreviousHash: string | null;
  entryHash: string | null;
};

/** What the first event of a chain follows. */
export const GENESIS = "0".repeat(64);

const FORMAT = "counterleaf-event-1";

/** RFC 8785 text of a plain value; keys whose value is undefined are left out. */
export function canonicalDetail(value: unknown): string {
  const text = canonicalize(value);
  if (text === undefined) throw new Error("An event's detail must be a plain value.");
  return text;
}

export function sha256Hex(text: string): string {
  return createHash("sha256").update(text, "utf8").digest("hex");
}

/** The event's hash in the chain of the whole store. It covers the entry chain's hash as well, so that neither can be exchanged alone. */
export function eventHash(previousHash: string, event: EventCore, entryHash: string | null): string {
  return sha256Hex(canonicalDetail({ format: FORMAT, chain: "store", previousHash, entryHash, event: core(event) }));
}

/** The event's hash in the chain of its own entry; it needs no event of another entry to be checked. */
export function entryEventHash(previousHash: string, event: EventCore): string {
  return sha256Hex(canonicalDetail({ format: FORMAT, chain: "entry", previousHash, event: core(event) }));
}

export type Misfit = {
  seq: number;
  kind: "number" | "previous-hash" | "hash" | "entry-number" | "entry-previous-hash" | "entry-hash" | "tail";
};
export type ChainAnswer = { ok: true; events: number; head: string } | { ok: false; firstMisfit: Misfit };

/** Where a chain stands after its last event. */
export type Head = { seq: number; hash: string };

/**
 * Walks the chain of the store, and every entry's chain along with it, in order of `seq` from the first event on.
 * @param pinned  heads that a signature, a backup or the heads' table remember: a tail cut off before one of them is found
 */
export function verifyChain(events: Iterable<ChainedEvent>, pinned: readonly Head[] = []): ChainAnswer {
  let seq = 0;
  let hash = GENESIS;
  const entries = new Map<string, Head>();
  const remembered = new Map(pinned.map((head) => [head.seq, head.hash]));
  for (const event of events) {
    if (event.seq !== seq + 1) return misfit(seq + 1, "number");
    if (event.previousHash !== hash) return misfit(event.seq, "previous-hash");
    const own = stepEntry(
      event,
      event.entryId === null ? null : (entries.get(event.entryId) ?? { seq: 0, hash: GENESIS }),
    );
    if (own !== null && "kind" in own) return { ok: false, firstMisfit: own };
    if (event.hash !== eventHash(hash, event, event.entryHash)) return misfit(event.seq, "hash");
    const expected = remembered.get(event.seq);
    if (expected !== undefined && expected !== event.hash) return misfit(event.seq, "hash");
    if (event.entryId !== null && own !== null) entries.set(event.entryId, own);
    seq = event.seq;
    hash = event.hash;
  }
  const last = Math.max(0, ...remembered.keys());
  return last > seq ? misfit(seq + 1, "tail") : { ok: true, events: seq, head: hash };
}

/** Walks one entry's events, which need no others. `pinned` as in `verifyChain`, with the numbers of the entry's chain. */
export function verifyEntryChain(events: Iterable<ChainedEvent>, pinned: readonly Head[] = []): ChainAnswer {
  let head: Head = { seq: 0, hash: GENESIS };
  const remembered = new Map(pinned.map((each) => [each.seq, each.hash]));
  for (const event of events) {
    const next = stepEntry(event, head);
    if (next === null) return misfit(event.seq, "entry-number");
    if ("kind" in next) return { ok: false, firstMisfit: next };
    const expected = remembered.get(next.seq);
    if (expected !== undefined && expected !== next.hash) return misfit(event.seq, "entry-hash");
    head = next;
  }
  const last = Math.max(0, ...remembered.keys());
  return last > head.seq ? misfit(head.seq + 1, "tail") : { ok: true, events: head.seq, head: head.hash };
}

/** The entry's head after the event; null for an event of no entry. */
function stepEntry(event: ChainedEvent, before: Head | null): Head | Misfit | null {
  if (before === null || event.entryId === null) {
    const isBare = event.entrySeq === null && event.entryPreviousHash === null && event.entryHash === null;
    return isBare ? null : { seq: event.seq, kind: "entry-number" };
  }
  if (event.entrySeq !== before.seq + 1) return { seq: event.seq, kind: "entry-number" };
  if (event.entryPreviousHash !== before.hash) return { seq: event.seq, kind: "entry-previous-hash" };
  const hash = entryEventHash(before.hash, event);
  if (event.entryHash !== hash) return { seq: event.seq, kind: "entry-hash" };
  return { seq: event.entrySeq, hash };
}

function misfit(seq: number, kind: Misfit["kind"]): ChainAnswer {
  return { ok: false, firstMisfit: { seq, kind } };
}

/** The fields that are sealed, by name: a row may carry more. */
function core(event: EventCore): EventCore {
  return {
    seq: event.seq,
    at: event.at,
    personId: event.personId,
    printedName: event.printedName,
    action: event.action,
    objectKind: event.objectKind,
    objectId: event.objectId,
    entryId: event.entryId,
    entrySeq: event.entrySeq,
    detail: event.detail,
  };
}
