// Notifications of the database → Server-Sent Events. A notification is a bell, not a letter: who hears it reads the rows after
// the last number that was sent. So a lost one costs time, never words. Presence alone travels in the bell, and is never stored.
import "server-only";
import { z } from "zod";
import type { Db } from "../../db/client.ts";
import { Refused } from "../../db/errors.ts";
import { LIVE_CHANNEL } from "../../db/live.ts";
import type { Actor } from "../../db/policy.ts";
import { pageState, updatesAfter } from "../../db/updates.ts";
import { findActor } from "./actor.ts";
import { store } from "./database.ts";
import { log } from "./log.ts";
import { onClose } from "./process-state.ts";

const BEAT_MS = 15_000;
const REREAD_EVERY_BEATS = 2;
const STREAMS_A_PERSON = 12;
/** A read gives a bounded number of rows: after a long one there may be more. */
const LONG_READ = 100;
const PRESENCE_KEPT_MS = 40_000;
const PRESENCE_KEPT_A_PAGE = 64;
/** What may wait for a browser that does not read; then its stream ends and it begins anew from the rows. */
const WAITING_BYTES = 8 * 1024 * 1024;

const bell = z.union([
  z.object({ revision: z.string(), seq: z.number() }),
  z.object({ revision: z.string(), state: z.string() }),
  z.object({ revision: z.string(), presence: z.string(), key: z.string() }),
  z.object({ person: z.string() }),
]);

export type StreamEnd = "session" | "rights" | "slow" | "closing" | "fault";

type Stream = {
  /** held as long as the stream: when it is collected, its signal never tells that the reader has gone */
  request: Request;
  revisionId: string;
  actor: Actor;
  lastSeq: number;
  /** false until the snapshot was sent: what is heard meanwhile waits in `heldBack` */
  live: boolean;
  heldBack: { event: string; data: object }[];
  isReading: boolean;
  hasRung: boolean;
  /** asks whether session and rights still stand, and ends the stream when they do not */
  recheck(): Promise<void>;
  write(text: string): void;
  end(reason: StreamEnd): void;
};

type Hub = {
  streams: Map<string, Set<Stream>>;
  presence: Map<string, Map<string, { bytes: string; at: number }>>;
  /** one read for all streams of a page that stand at the same number */
  reads: Map<string, ReturnType<typeof updatesAfter>>;
  stop(): Promise<void>;
};

declare global {
  var counterleafHub: Promise<Hub> | undefined;
}

/**
 * Opens the event stream of a revision: subscribe and buffer, load the state, send it, send what was buffered, go on. Refuses
 * like a read of the page. Ends by itself when the reader goes, when session or rights end, and when the server closes.
 */
export async function openStream(actor: Actor, revisionId: string, request: Request): Promise<Response> {
  const { db } = await store();
  const hub = await openHub();
  if (countStreams(hub, actor.id) >= STREAMS_A_PERSON)
    throw new Refused("request.too-many", { limit: STREAMS_A_PERSON, seconds: 10 });
  const { stream, body } = makeStream(actor, revisionId, request, hub, db);
  try {
    const state = await pageState(db, actor, revisionId);
    stream.lastSeq = state.seq;
    send(stream, "snapshot", { seq: state.seq, state: base64(state.state), vector: base64(state.vector) });
    for (const kept of freshPresence(hub, revisionId)) send(stream, "presence", { bytes: kept });
    stream.live = true;
    await readOn(hub, db, stream);
    for (const held of stream.heldBack.splice(0)) send(stream, held.event, held.data);
  } catch (error) {
    stream.end("rights");
    throw error;
  }
  return new Response(body, {
    headers: {
      "content-type": "text/event-stream; charset=utf-8",
      "cache-control": "no-store, no-transform",
      "x-accel-buffering": "no",
      connection: "keep-alive",
    },
  });
}

/** How many streams this process holds open: for health and tests. */
export async function openStreams(): Promise<number> {
  if (globalThis.counterleafHub === undefined) return 0;
  return [...(await globalThis.counterleafHub).streams.values()].reduce((sum, set) => sum + set.size, 0);
}

function openHub(): Promise<Hub> {
  globalThis.counterleafHub ??= startHub();
  return globalThis.counterleafHub;
}

async function startHub(): Promise<Hub> {
  const opened = await store();
  const hub: Hub = { streams: new Map(), presence: new Map(), reads: new Map(), stop: async () => undefined };
  const unlisten = await opened.listen(LIVE_CHANNEL, (payload) => hear(hub, opened.db, payload));
  hub.stop = async () => {
    globalThis.counterleafHub = undefined;
    for (const set of [...hub.streams.values()]) for (const stream of [...set]) stream.end("closing");
    await unlisten();
  };
  onClose(() => hub.stop());
  return hub;
}

function hear(hub: Hub, db: Db, payload: string): void {
  const parsed = bell.safeParse(payload === "" ? null : safeJson(payload));
  if (!parsed.success) {
    // An empty one: the connection was away and bells may be lost. Whatever else: somebody else's word on our channel.
    if (payload === "") for (const set of hub.streams.values()) for (const stream of set) void readOn(hub, db, stream);
    return;
  }
  const heard = parsed.data;
  if ("person" in heard) {
    for (const set of hub.streams.values())
      for (const stream of set) if (stream.actor.id === heard.person) void recheck(hub, db, stream);
    return;
  }
  if ("presence" in heard) keepPresence(hub, heard.revision, heard.key, heard.presence);
  for (const stream of hub.streams.get(heard.revision) ?? []) {
    if ("presence" in heard) sendOrHold(stream, "presence", { bytes: heard.presence });
    else if ("state" in heard)
      void readOn(hub, db, stream).then(() => sendOrHold(stream, "state", { state: heard.state }));
    else void readOn(hub, db, stream);
  }
}

async function recheck(hub: Hub, db: Db, stream: Stream): Promise<void> {
  await stream.recheck();
  await readOn(hub, db, stream);
}

/** Sends the rows after the last number, in order; a bell that rings meanwhile makes it read once more. */
async function readOn(hub: Hub, db: Db, stream: Stream): Promise<void> {
  stream.hasRung = true;
  if (!stream.live || stream.isReading) return;
  stream.isReading = true;
  try {
    while (stream.hasRung) {
      stream.hasRung = false;
      const updates = await readTogether(hub, db, stream);
      if (updates.length >= LONG_READ) stream.hasRung = true;
      for (const update of updates) {
        if (update.seq <= stream.lastSeq) continue;
        stream.lastSeq = update.seq;
        send(stream, "update", { seq: update.seq, bytes: base64(update.bytes) });
      }
    }
  } catch (error) {
    if (!(error instanceof Refused))
      log.error({ error, revision: stream.revisionId }, "an event stream could not read on");
    stream.end(error instanceof Refused ? "rights" : "fault");
  } finally {
    stream.isReading = false;
  }
}

async function readTogether(hub: Hub, db: Db, stream: Stream): ReturnType<typeof updatesAfter> {
  const key = `${stream.revisionId}:${stream.lastSeq}`;
  const own = () => updatesAfter(db, stream.actor, stream.revisionId, stream.lastSeq);
  const running = hub.reads.get(key);
  // The other may have lost the right to read; that says nothing about this one.
  if (running !== undefined) return running.catch(own);
  const read = own().finally(() => hub.reads.delete(key));
  hub.reads.set(key, read);
  return read;
}

function makeStream(actor: Actor, revisionId: string, request: Request, hub: Hub, db: Db) {
  const encoder = new TextEncoder();
  let controller: ReadableStreamDefaultController<Uint8Array> | null = null;
  const { signal } = request;
  const stream: Stream = {
    request,
    revisionId,
    actor,
    lastSeq: -1,
    live: false,
    heldBack: [],
    isReading: false,
    hasRung: false,
    async recheck() {
      try {
        const now = await findActor(request.headers, "none");
        if (now === null) stream.end("session");
        else stream.actor = now;
      } catch (error) {
        log.error({ error }, "an event stream's session could not be asked");
        stream.end("fault");
      }
    },
    write(text) {
      if (controller === null) return;
      controller.enqueue(encoder.encode(text));
      if ((controller.desiredSize ?? 0) < -WAITING_BYTES) stream.end("slow");
    },
    end(reason) {
      const open = controller;
      if (open === null) return;
      controller = null;
      clearInterval(beat);
      signal.removeEventListener("abort", gone);
      hub.streams.get(revisionId)?.delete(stream);
      if (hub.streams.get(revisionId)?.size === 0) {
        hub.streams.delete(revisionId);
        hub.presence.delete(revisionId);
      }
      open.enqueue(encoder.encode(`event: end\ndata: ${JSON.stringify({ reason })}\n\n`));
      open.close();
    },
  };
  const gone = () => {
    // The reader is not there any more: nothing can be sent, only tidied up.
    try {
      stream.end("closing");
    } catch (error) {
      log.debug({ error }, "an event stream was gone already");
    }
  };
  let beats = 0;
  const beat = setInterval(() => {
    stream.write(": beat\n\n");
    beats += 1;
    if (beats % REREAD_EVERY_BEATS === 0) void recheck(hub, db, stream);
  }, BEAT_MS);
  const body = new ReadableStream<Uint8Array>(
    {
      start: (made) => {
        controller = made;
      },
      cancel: gone,
    },
    new ByteLengthQueuingStrategy({ highWaterMark: 65_536 }),
  );
  const all = hub.streams.get(revisionId) ?? new Set();
  all.add(stream);
  hub.streams.set(revisionId, all);
  signal.addEventListener("abort", gone);
  if (signal.aborted) gone();
  return { stream, body };
}

function send(stream: Stream, event: string, data: object): void {
  stream.write(`event: ${event}\ndata: ${JSON.stringify(data)}\n\n`);
}

function sendOrHold(stream: Stream, event: string, data: object): void {
  if (stream.live) send(stream, event, data);
  else stream.heldBack.push({ event, data });
}

function keepPresence(hub: Hub, revisionId: string, key: string, bytes: string): void {
  // Only while somebody here reads the page: nobody else could be told.
  if (!hub.streams.has(revisionId)) return;
  const kept = hub.presence.get(revisionId) ?? new Map<string, { bytes: string; at: number }>();
  kept.delete(key);
  kept.set(key, { bytes, at: Date.now() });
  for (const old of kept.keys()) if (kept.size > PRESENCE_KEPT_A_PAGE) kept.delete(old);
  hub.presence.set(revisionId, kept);
}

function freshPresence(hub: Hub, revisionId: string): string[] {
  const since = Date.now() - PRESENCE_KEPT_MS;
  return [...(hub.presence.get(revisionId)?.values() ?? [])]
    .filter((kept) => kept.at >= since)
    .map((kept) => kept.bytes);
}

function countStreams(hub: Hub, personId: string): number {
  let count = 0;
  for (const set of hub.streams.values()) for (const stream of set) if (stream.actor.id === personId) count += 1;
  return count;
}

function base64(bytes: Uint8Array): string {
  return Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength).toString("base64");
}

function safeJson(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch {
    return null;
  }
}
