// Yjs ↔ HTTP. What is typed here is merged for a moment and handed to the sender; what others type comes back as Server-Sent
// Events; who is on the page is posted and never stored. Nothing here knows the editor.
import { Awareness, applyAwarenessUpdate, encodeAwarenessUpdate, removeAwarenessStates } from "y-protocols/awareness";
import * as Y from "yjs";
import { problemOf } from "../components/query/http.ts";
import { fromBase64, toBase64 } from "./base64.ts";
import { colourOf } from "./colours.ts";
import type { Outbox } from "./outbox.ts";
import type { SaveStatus } from "./save-status.ts";
import { makeSender, NOT_DRAFT } from "./sender.ts";
import { holdTab, newName, whenTabIsGone } from "./tabs.ts";

/** How it stands with the page: the save status without the fields, whether it has arrived, and the revision's state. */
export type PageLine = Omit<SaveStatus, "unsavedFields"> & {
  isLoaded: boolean;
  /** as last heard; typing is possible in a draft only */
  state: string;
  /** the problem's code when a change was refused */
  refusedCode: string | null;
};

/** What an EventSource is needed for. */
export type EventStream = EventTarget & { readonly readyState: number; close(): void };

export type ProviderOptions = {
  revisionId: string;
  person: { id: string; name: string };
  /** keeps what waits; null where the device keeps nothing */
  outbox: Outbox | null;
  onChange: (line: PageLine) => void;
  /** tests hand in their own */
  ask?: typeof globalThis.fetch;
  openEvents?: (path: string) => EventStream;
};

export type Provider = {
  doc: Y.Doc;
  awareness: Awareness;
  /** tries at once what waits for its turn */
  retryNow(): void;
  /** forgets what the server refused, once its text was offered */
  discardRefused(): Promise<void>;
  /** keeps what is not on the device yet, says goodbye, and stops */
  destroy(): void;
};

/** Updates of this origin came from the server, or from another tab by way of the device: they are not queued again. */
const RECEIVED = Symbol("received");
const MERGE_MS = 150;
const MERGED_BYTES = 256 * 1024;
const PRESENCE_MS = 300;
const FIRST_RETRY_MS = 500;
const LAST_RETRY_MS = 15_000;
const TAKEOVER_MS = 10_000;
const HIDDEN_MS = 60_000;
/** EventSource.CLOSED: the browser has given up, which it does for any answer but 200. */
const CLOSED = 2;

type TimerName = "merge" | "stream" | "presence" | "takeover" | "hidden";

export function openProvider(options: ProviderOptions): Provider {
  const { revisionId, person, outbox, onChange } = options;
  const ask = options.ask ?? globalThis.fetch.bind(globalThis);
  const openEvents = options.openEvents ?? ((path: string): EventStream => new EventSource(path));
  const base = `/api/revisions/${encodeURIComponent(revisionId)}`;
  const tab = newName();
  const letGo = holdTab(tab);
  // A fresh client id each load: two that write under one id would destroy each other's words.
  const doc = new Y.Doc({ gc: false });
  const awareness = new Awareness(doc);
  awareness.setLocalStateField("user", { id: person.id, name: person.name, color: colourOf(person.id) });
  const timers = new Map<TimerName, ReturnType<typeof setTimeout>>();
  let buffer: Uint8Array[] = [];
  let bufferedBytes = 0;
  let isLoaded = false;
  let state = "draft";
  let isStreamOpen = false;
  let isPaused = false;
  let isGone = false;
  let resendsAll = false;
  let streamRetryMs = FIRST_RETRY_MS;
  let events: EventStream | null = null;
  let told = "";

  const sender = makeSender({
    path: `${base}/updates`,
    personId: person.id,
    tab,
    outbox,
    ask,
    onChange: tell,
    onIncomplete: () => {
      resendsAll = true;
      openStream();
    },
  });

  function tell(): void {
    if (isGone) return;
    const waiting = sender.queue.length + (buffer.length > 0 ? 1 : 0);
    const { refusal } = sender;
    const kind = kindOf(waiting);
    const line: PageLine = { kind, waiting, isLoaded, state, refusedCode: refusal?.problem.code ?? null };
    if (refusal !== null) line.detail = refusal.message;
    else if (waiting > 0 && !sender.isKept && kind !== "saving") line.detail = NOT_KEPT;
    const text = JSON.stringify(line);
    if (text === told) return;
    told = text;
    onChange(line);
  }

  function kindOf(waiting: number): SaveStatus["kind"] {
    if (sender.refusal !== null) return "refused";
    if (sender.isSignedOut) return "signed-out";
    if (sender.isUnreachable || (isLoaded && !isStreamOpen && !isPaused)) return "offline";
    return waiting > 0 ? "saving" : "saved";
  }

  // ---- Out ---------------------------------------------------------------------------------------------------------

  doc.on("update", (update: Uint8Array, origin: unknown) => {
    if (origin === RECEIVED) return;
    buffer.push(update);
    bufferedBytes += update.length;
    if (bufferedBytes > MERGED_BYTES) flush();
    else if (!timers.has("merge")) later("merge", MERGE_MS, flush);
    tell();
  });

  function flush(): void {
    cancel("merge");
    if (buffer.length === 0) return;
    const merged = Y.mergeUpdates(buffer);
    buffer = [];
    bufferedBytes = 0;
    sender.enqueue(merged);
    tell();
  }

  // ---- In: the event stream ----------------------------------------------------------------------------------------

  function openStream(): void {
    cancel("stream");
    events?.close();
    isStreamOpen = false;
    if (isGone || isPaused) return;
    const opened = openEvents(`${base}/events`);
    events = opened;
    const on = (name: string, heard: (message: Record<string, unknown>) => void) =>
      opened.addEventListener(name, (event) => {
        if (events === opened && event instanceof MessageEvent) heard(readMessage(event.data));
      });
    on("snapshot", ({ state: whole, vector }) => {
      if (typeof whole !== "string" || typeof vector !== "string") return;
      Y.applyUpdate(doc, fromBase64(whole), RECEIVED);
      isLoaded = true;
      isStreamOpen = true;
      streamRetryMs = FIRST_RETRY_MS;
      sender.hear({ isUnreachable: false, isSignedOut: false });
      void upload(fromBase64(vector)).then(takeOver);
      sendPresence();
    });
    on("update", ({ bytes }) => {
      if (typeof bytes === "string") Y.applyUpdate(doc, fromBase64(bytes), RECEIVED);
    });
    on("presence", ({ bytes }) => {
      if (typeof bytes === "string") applyAwarenessUpdate(awareness, fromBase64(bytes), RECEIVED);
    });
    on("state", (message) => {
      if (typeof message.state === "string") state = message.state;
      tell();
    });
    on("end", ({ reason }) => {
      opened.close();
      isStreamOpen = false;
      void lookAtLine(reason === "session");
    });
    opened.addEventListener("error", () => {
      if (events !== opened) return;
      isStreamOpen = false;
      if (opened.readyState === CLOSED) void lookAtLine(false);
      tell();
    });
  }

  /** An event stream does not say why it was refused: a plain question does. */
  async function lookAtLine(hasSessionEnded: boolean): Promise<void> {
    if (!timers.has("stream")) later("stream", streamRetryMs, openStream);
    streamRetryMs = Math.min(streamRetryMs * 2, LAST_RETRY_MS);
    if (hasSessionEnded) sender.hear({ isSignedOut: true, isUnreachable: false });
    try {
      const response = await ask(`${base}/stray`, { headers: { accept: "application/json" } });
      if (response.ok) await response.body?.cancel();
      else if (response.status === 401) sender.hear({ isSignedOut: true, isUnreachable: false });
      else if (response.status === 404 || response.status === 403) sender.hear({ refusal: await problemOf(response) });
    } catch {
      sender.hear({ isUnreachable: true });
    }
  }

  /** Sends what the server lacks. What the queue holds is on its way by itself; only what it does not hold goes in one piece. */
  async function upload(vector: Uint8Array): Promise<void> {
    flush();
    const known = Y.decodeStateVector(vector);
    const ours = Y.decodeStateVector(Y.encodeStateVector(doc));
    const lacks = [...ours].some(([client, clock]) => clock > (known.get(client) ?? 0));
    if (resendsAll || (sender.queue.length === 0 && lacks)) {
      resendsAll = false;
      const old = [...sender.queue];
      sender.enqueue(Y.encodeStateAsUpdate(doc, vector));
      await sender.forget(old);
    }
    sender.retryNow();
  }

  /** Takes over what tabs of this person that are gone have left on the device. */
  async function takeOver(): Promise<void> {
    later("takeover", TAKEOVER_MS, () => void takeOver());
    if (outbox === null || isGone || !isLoaded) return;
    const left = (await outbox.list().catch(() => [])).filter((update) => update.tab !== tab);
    for (const other of new Set(left.map((update) => update.tab))) {
      await whenTabIsGone(other, async () => {
        // Read again under the lock: another tab may have taken them meanwhile.
        for (const update of (await outbox.list()).filter((each) => each.tab === other)) {
          await sender.adopt(update);
          Y.applyUpdate(doc, update.bytes, RECEIVED);
        }
      }).catch(() => false);
    }
    tell();
    void sender.post();
  }

  // ---- Presence ----------------------------------------------------------------------------------------------------

  awareness.on("update", (_: unknown, origin: unknown) => {
    if (origin !== RECEIVED && !timers.has("presence")) later("presence", PRESENCE_MS, () => sendPresence());
  });

  function sendPresence(keepalive = false): void {
    cancel("presence");
    if (!isStreamOpen) return;
    const bytes = toBase64(encodeAwarenessUpdate(awareness, [doc.clientID]));
    // Presence is stored nowhere and renewed by itself: one that is lost is not missed.
    ask(`${base}/presence`, {
      method: "POST",
      headers: { "content-type": "application/json" },
      body: JSON.stringify({ bytes }),
      keepalive,
    }).catch(() => undefined);
  }

  function sayGoodbye(): void {
    flush();
    removeAwarenessStates(awareness, [doc.clientID], "leaving");
    sendPresence(true);
  }

  // ---- The browser page's own life ---------------------------------------------------------------------------------

  const onOnline = () => {
    openStream();
    sender.retryNow();
  };
  const onOffline = () => sender.hear({ isUnreachable: true });
  const onPageHide = () => {
    sayGoodbye();
    sender.postAndGo();
  };
  const onVisibility = () => {
    if (document.visibilityState === "hidden") {
      flush();
      // A browser has six connections a server: a page that nobody looks at gives its own back.
      later("hidden", HIDDEN_MS, () => {
        isPaused = true;
        events?.close();
        isStreamOpen = false;
        tell();
      });
      return;
    }
    cancel("hidden");
    if (isPaused || events?.readyState === CLOSED) {
      isPaused = false;
      openStream();
    }
    sender.retryNow();
  };
  window.addEventListener("online", onOnline);
  window.addEventListener("offline", onOffline);
  window.addEventListener("pagehide", onPageHide);
  document.addEventListener("visibilitychange", onVisibility);

  function later(name: TimerName, ms: number, act: () => void): void {
    cancel(name);
    if (isGone) return;
    const timer = setTimeout(() => {
      timers.delete(name);
      act();
    }, ms);
    timers.set(name, timer);
  }
  function cancel(name: TimerName): void {
    clearTimeout(timers.get(name));
    timers.delete(name);
  }

  openStream();
  tell();
  return {
    doc,
    awareness,
    retryNow: onOnline,
    async discardRefused() {
      await sender.forget([...sender.queue]);
      sender.hear({ refusal: null });
    },
    destroy() {
      sayGoodbye();
      isGone = true;
      for (const timer of timers.values()) clearTimeout(timer);
      events?.close();
      window.removeEventListener("online", onOnline);
      window.removeEventListener("offline", onOffline);
      window.removeEventListener("pagehide", onPageHide);
      document.removeEventListener("visibilitychange", onVisibility);
      sender.stop();
      awareness.destroy();
      letGo();
    },
  };
}

/** True for a refusal that says that the revision is closed to typing; every other one is about the change itself. */
export function isClosedToTyping(line: PageLine): boolean {
  return line.state !== "draft" || line.refusedCode === NOT_DRAFT;
}

const NOT_KEPT = "This device does not keep changes: leave the page open until they are saved.";

function readMessage(data: unknown): Record<string, unknown> {
  const value: unknown = typeof data === "string" ? JSON.parse(data) : null;
  return typeof value === "object" && value !== null ? { ...value } : {};
}
