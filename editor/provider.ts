// Yjs ↔ HTTP. Every change of this browser gets an id, is kept on the device, posted in order, and forgotten only when the server
// has said that it is committed. What others type comes back as Server-Sent Events. Nothing here knows the editor.
import { Awareness, applyAwarenessUpdate, encodeAwarenessUpdate, removeAwarenessStates } from "y-protocols/awareness";
import * as Y from "yjs";
import { type ProblemError, problemOf } from "../components/query/http.ts";
import { fromBase64, toBase64 } from "./base64.ts";
import type { Outbox, Waiting } from "./outbox.ts";
import type { SaveStatus } from "./save-status.ts";
import { holdTab, newName, whenTabIsGone } from "./tabs.ts";

export type Leaf = Omit<SaveStatus, "unsavedFields"> & {
  /** the page has arrived from the server at least once */
  isLoaded: boolean;
  /** the revision's state as last heard: typing is possible in a draft only */
  state: string;
};

export type ProviderOptions = {
  revisionId: string;
  person: { id: string; name: string };
  /** keeps what waits; null where the device keeps nothing */
  outbox: Outbox | null;
  onChange: (leaf: Leaf) => void;
  /** what others are asked through; tests hand in their own */
  fetch?: typeof globalThis.fetch;
  openEvents?: (path: string) => EventSource;
};

export type Provider = {
  doc: Y.Doc;
  awareness: Awareness;
  /** tries at once what waits for its turn */
  retryNow(): void;
  /** forgets what the server refused; the caller has offered its text */
  discardRefused(): Promise<void>;
  /** hands over what is not yet on the device, and stops */
  destroy(): void;
};

/** Updates of this origin came from the server or from another tab of this device: they are not sent again. */
const RECEIVED = Symbol("received");
const MERGE_MS = 150;
const PRESENCE_MS = 300;
const FIRST_RETRY_MS = 500;
const LAST_RETRY_MS = 15_000;
const SIGNED_OUT_RETRY_MS = 5_000;
const TAKEOVER_MS = 10_000;
const HIDDEN_MS = 60_000;
/** A browser lets a page that is going send this much at most. */
const KEEPALIVE_BYTES = 60_000;
const NOT_MERGED_BYTES = 256 * 1024;

export function openProvider(options: ProviderOptions): Provider {
  const { revisionId, person, outbox, onChange } = options;
  const ask = options.fetch ?? globalThis.fetch.bind(globalThis);
  const openEvents = options.openEvents ?? ((path) => new EventSource(path));
  const base = `/api/revisions/${encodeURIComponent(revisionId)}`;
  const tab = newName();
  const letGo = holdTab(tab);
  // A fresh client id each load: two that write under one id would destroy each other's words.
  const doc = new Y.Doc({ gc: false });
  const awareness = new Awareness(doc);
  awareness.setLocalStateField("user", { id: person.id, name: person.name, color: colourOf(person.id) });

  let buffer: Uint8Array[] = [];
  let bufferedBytes = 0;
  const queue: Waiting[] = [];
  let lastAt = 0;
  let isLoaded = false;
  let state = "draft";
  let isStreamOpen = false;
  let isPaused = false;
  let isPosting = false;
  let isUnreachable = false;
  let isSignedOut = false;
  let isGone = false;
  /** a change that the server refused for good; what comes after it waits with it */
  let refusal: ProblemError | null = null;
  let deviceFails = outbox === null;
  let resendAll = false;
  let retryMs = FIRST_RETRY_MS;
  let events: EventSource | null = null;
  const timers = new Map<
    "merge" | "post" | "stream" | "presence" | "takeover" | "hidden",
    ReturnType<typeof setTimeout>
  >();

  // ---- What is told ----------------------------------------------------------------------------------------------

  let told = "";
  function tell(): void {
    if (isGone) return;
    const waiting = queue.length + (buffer.length > 0 ? 1 : 0);
    const kind = kindOf(waiting);
    const leaf: Leaf = { kind, waiting, isLoaded, state, ...detailOf(kind, waiting) };
    const text = JSON.stringify(leaf);
    if (text === told) return;
    told = text;
    onChange(leaf);
  }

  function kindOf(waiting: number): SaveStatus["kind"] {
    if (refusal !== null) return "refused";
    if (isSignedOut) return "signed-out";
    if (isUnreachable || (isLoaded && !isStreamOpen && !isPaused)) return "offline";
    return waiting > 0 ? "saving" : "saved";
  }

  function detailOf(kind: SaveStatus["kind"], waiting: number): { detail?: string } {
    if (refusal !== null) return { detail: refusal.message };
    if (waiting > 0 && deviceFails && kind !== "saving") {
      return { detail: "This device does not keep changes: leave the page open until they are saved." };
    }
    return {};
  }

  // ---- Out: buffer, keep, post -------------------------------------------------------------------------------------

  doc.on("update", (update: Uint8Array, origin: unknown) => {
    if (origin === RECEIVED) return;
    buffer.push(update);
    bufferedBytes += update.length;
    if (bufferedBytes > NOT_MERGED_BYTES) flush();
    else if (!timers.has("merge")) later("merge", MERGE_MS, flush);
    tell();
  });

  function flush(): void {
    cancel("merge");
    if (buffer.length === 0) return;
    enqueue(buffer.length === 1 && buffer[0] !== undefined ? buffer[0] : Y.mergeUpdates(buffer));
    buffer = [];
    bufferedBytes = 0;
    tell();
  }

  function enqueue(bytes: Uint8Array): void {
    lastAt = Math.max(Date.now(), lastAt + 1);
    const update: Waiting = { id: newName(), bytes, tab, at: lastAt };
    queue.push(update);
    keep(update).then(() => void post());
  }

  async function keep(update: Waiting): Promise<void> {
    if (outbox === null) return;
    try {
      await outbox.put(update);
    } catch {
      // The device is full or forbids it. The change is still in memory and is still sent; the status says so.
      deviceFails = true;
      tell();
    }
  }

  async function forget(updates: readonly Waiting[]): Promise<void> {
    const ids = new Set(updates.map((update) => update.id));
    for (let index = queue.length - 1; index >= 0; index--) if (ids.has(queue[index]?.id ?? "")) queue.splice(index, 1);
    // A record that cannot be removed is sent once more by a later tab, and taken once.
    await outbox?.remove([...ids]).catch(() => undefined);
  }

  /** Posts what waits, one after the other and in order, until nothing waits or something is in the way. */
  async function post(): Promise<void> {
    if (isPosting || isGone || timers.has("post") || (refusal !== null && refusal.problem.code !== NOT_DRAFT)) return;
    isPosting = true;
    try {
      for (let first = queue[0]; first !== undefined && !isGone; first = queue[0]) {
        if (!(await postOne(first))) break;
      }
    } finally {
      isPosting = false;
      tell();
    }
  }

  async function postOne(update: Waiting, keepalive = false): Promise<boolean> {
    let response: Response;
    try {
      response = await ask(`${base}/updates`, {
        method: "POST",
        headers: { "content-type": "application/octet-stream", "x-update-id": update.id },
        body: new Blob([new Uint8Array(update.bytes)]),
        keepalive,
      });
    } catch {
      isUnreachable = true;
      tryLater(retryMs);
      return false;
    }
    if (response.ok) {
      await response.body?.cancel();
      isUnreachable = false;
      isSignedOut = false;
      retryMs = FIRST_RETRY_MS;
      await forget([update]);
      tell();
      return true;
    }
    return refusedWith(update, await problemOf(response));
  }

  async function refusedWith(update: Waiting, error: ProblemError): Promise<boolean> {
    const { status, code, values } = error.problem;
    if (status === 401) {
      isSignedOut = true;
      isUnreachable = false;
      tryLater(SIGNED_OUT_RETRY_MS);
      return false;
    }
    if (status === 429 || status === 408 || status >= 500) {
      // Reached, but not now: what waits is "saving" while it is only throttled, "offline" while the server is in trouble.
      isUnreachable = status !== 429;
      tryLater(error.retryAfterS === null ? retryMs : error.retryAfterS * 1000);
      return false;
    }
    isUnreachable = false;
    if (code === "update.invalid" && values?.incomplete === true && !resendAll) {
      // The server lacks something that this change builds on: all that it lacks is sent in one, from its own account of it.
      resendAll = true;
      openStream();
      return false;
    }
    refusal = error;
    if (code === NOT_DRAFT && values?.kept === true) {
      // The server keeps it for its writer: the copy here has done its work.
      await forget([update]);
      return true;
    }
    return false;
  }

  function tryLater(ms: number): void {
    retryMs = Math.min(retryMs * 2, LAST_RETRY_MS);
    later("post", ms, () => void post());
    tell();
  }

  function retryNow(): void {
    cancel("post");
    retryMs = FIRST_RETRY_MS;
    if (events === null || events.readyState === 2) openStream();
    void post();
  }

  // ---- In: the event stream --------------------------------------------------------------------------------------

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
      isUnreachable = false;
      isSignedOut = false;
      cancel("post");
      void upload(fromBase64(vector)).then(takeOver);
      tell();
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
      if (reason === "session") isSignedOut = true;
      streamLater(reason === "session" || reason === "rights" ? SIGNED_OUT_RETRY_MS : FIRST_RETRY_MS);
    });
    opened.addEventListener("error", () => {
      if (events !== opened) return;
      isStreamOpen = false;
      // 2 is CLOSED: the browser has given up, which it does for any answer but 200.
      if (opened.readyState === 2) streamLater(retryMs);
      tell();
    });
  }

  function streamLater(ms: number): void {
    if (!timers.has("stream")) later("stream", Math.max(ms, FIRST_RETRY_MS), openStream);
    tell();
  }

  /** Sends what the server lacks. What waits in the queue is on its way by itself; only what no queue holds is sent in one piece. */
  async function upload(vector: Uint8Array): Promise<void> {
    flush();
    const known = Y.decodeStateVector(vector);
    const lacks = [...Y.decodeStateVector(Y.encodeStateVector(doc))].some(
      ([client, clock]) => clock > (known.get(client) ?? 0),
    );
    if (resendAll || (queue.length === 0 && lacks)) {
      const old = [...queue];
      if (lacks || old.length > 0) enqueue(Y.encodeStateAsUpdate(doc, vector));
      await forget(old);
    }
    await post();
    resendAll = false;
  }

  /** Takes over what tabs of this person that are gone have left on the device. */
  async function takeOver(): Promise<void> {
    later("takeover", TAKEOVER_MS, () => void takeOver());
    if (outbox === null || isGone || !isLoaded) return;
    const left = (await outbox.list().catch(() => [])).filter((update) => update.tab !== tab);
    for (const other of new Set(left.map((update) => update.tab))) {
      await whenTabIsGone(other, async () => {
        // Read again under the lock: another tab may have taken them meanwhile.
        const theirs = (await outbox.list()).filter((update) => update.tab === other);
        for (const update of theirs) {
          if (queue.some((each) => each.id === update.id)) continue;
          lastAt = Math.max(update.at, lastAt + 1);
          const mine: Waiting = { ...update, tab, at: lastAt };
          queue.push(mine);
          await outbox.put(mine);
          Y.applyUpdate(doc, mine.bytes, RECEIVED);
        }
      }).catch(() => false);
    }
    tell();
    void post();
  }

  // ---- Presence ----------------------------------------------------------------------------------------------------

  awareness.on("update", (_: unknown, origin: unknown) => {
    if (origin !== RECEIVED && !timers.has("presence")) later("presence", PRESENCE_MS, sendPresence);
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

  // ---- The page's own life -----------------------------------------------------------------------------------------

  function onHide(): void {
    flush();
    const first = queue[0];
    if (first !== undefined && !isPosting && refusal === null && first.bytes.length < KEEPALIVE_BYTES) {
      void postOne(first, true);
    }
  }
  function onPageHide(): void {
    onHide();
    removeAwarenessStates(awareness, [doc.clientID], "leaving");
    sendPresence(true);
  }
  function onVisibility(): void {
    if (document.visibilityState === "hidden") {
      onHide();
      // A browser has six connections a server: one that nobody looks at gives its own back.
      later("hidden", HIDDEN_MS, () => {
        isPaused = true;
        events?.close();
        isStreamOpen = false;
        tell();
      });
      return;
    }
    cancel("hidden");
    const wasPaused = isPaused;
    isPaused = false;
    if (wasPaused) openStream();
    retryNow();
  }
  const onOnline = () => retryNow();
  const onOffline = () => {
    isUnreachable = true;
    tell();
  };
  window.addEventListener("online", onOnline);
  window.addEventListener("offline", onOffline);
  window.addEventListener("pagehide", onPageHide);
  document.addEventListener("visibilitychange", onVisibility);

  function later(name: Parameters<typeof timers.get>[0], ms: number, act: () => void): void {
    cancel(name);
    if (isGone) return;
    timers.set(
      name,
      setTimeout(() => {
        timers.delete(name);
        act();
      }, ms),
    );
  }
  function cancel(name: Parameters<typeof timers.get>[0]): void {
    clearTimeout(timers.get(name));
    timers.delete(name);
  }

  openStream();
  tell();
  return {
    doc,
    awareness,
    retryNow,
    async discardRefused() {
      const left = [...queue];
      await forget(left);
      refusal = null;
      tell();
    },
    destroy() {
      onPageHide();
      isGone = true;
      for (const timer of timers.values()) clearTimeout(timer);
      events?.close();
      window.removeEventListener("online", onOnline);
      window.removeEventListener("offline", onOffline);
      window.removeEventListener("pagehide", onPageHide);
      document.removeEventListener("visibilitychange", onVisibility);
      awareness.destroy();
      letGo();
    },
  };
}

const NOT_DRAFT = "revision.not-draft";

function readMessage(data: unknown): Record<string, unknown> {
  const value: unknown = typeof data === "string" ? JSON.parse(data) : null;
  return typeof value === "object" && value !== null ? { ...value } : {};
}

/** One of the inks that another person's caret has, always the same for a person. */
function colourOf(personId: string): string {
  let sum = 0;
  for (const letter of personId) sum = (sum * 31 + letter.charCodeAt(0)) % 9973;
  return CARET_COLOURS[sum % CARET_COLOURS.length] ?? "#3a5a8c";
}

const CARET_COLOURS = ["#3a5a8c", "#0f6e63", "#8a560d", "#a5322c", "#5c4a7d", "#4f6b2c"] as const;
