// The way out: changes are kept on the device, posted one after the other and in order, and forgotten only when the server has
// said that they are committed, or that it keeps them for their writer.
import { type ProblemError, problemOf } from "../components/query/http.ts";
import type { Outbox, Waiting } from "./outbox.ts";
import { newName } from "./tabs.ts";

export type SenderOptions = {
  /** where changes are posted */
  path: string;
  personId: string;
  tab: string;
  /** null where the device keeps nothing */
  outbox: Outbox | null;
  ask: typeof globalThis.fetch;
  onChange: () => void;
  /** the server lacks something that a change builds on: all that it lacks has to be sent in one, from its own account of it */
  onIncomplete: () => void;
};

export type Sender = {
  readonly queue: readonly Waiting[];
  readonly isUnreachable: boolean;
  readonly isSignedOut: boolean;
  /** a change that the server refused for good; what comes after it waits with it */
  readonly refusal: ProblemError | null;
  /** false when the device refused to keep something */
  readonly isKept: boolean;
  enqueue(bytes: Uint8Array): void;
  /** takes a change over that another tab has left on the device */
  adopt(update: Waiting): Promise<void>;
  forget(updates: readonly Waiting[]): Promise<void>;
  /** posts what waits until nothing waits or something is in the way */
  post(): Promise<void>;
  retryNow(): void;
  /** one last post of a page that is going, which the browser finishes without it */
  postAndGo(): void;
  /** what the event stream has learnt about the line */
  hear(news: { isUnreachable?: boolean; isSignedOut?: boolean; refusal?: ProblemError | null }): void;
  stop(): void;
};

const FIRST_RETRY_MS = 500;
const LAST_RETRY_MS = 15_000;
const SIGNED_OUT_RETRY_MS = 5_000;
/** A browser lets a page that is going send this much at most. */
const KEEPALIVE_BYTES = 60_000;
export const NOT_DRAFT = "revision.not-draft";

export function makeSender({ path, personId, tab, outbox, ask, onChange, onIncomplete }: SenderOptions): Sender {
  const queue: Waiting[] = [];
  let lastAt = 0;
  let isPosting = false;
  let isUnreachable = false;
  let isSignedOut = false;
  let isKept = outbox !== null;
  let hasResent = false;
  let refusal: ProblemError | null = null;
  let retryMs = FIRST_RETRY_MS;
  let timer: ReturnType<typeof setTimeout> | null = null;
  let isStopped = false;

  async function keep(update: Waiting): Promise<void> {
    try {
      await outbox?.put(update);
    } catch {
      // The device is full or forbids it. The change is still in memory and is still sent; the status says so.
      isKept = false;
      onChange();
    }
  }

  async function forget(updates: readonly Waiting[]): Promise<void> {
    const ids = new Set(updates.map((update) => update.id));
    for (let index = queue.length - 1; index >= 0; index--) if (ids.has(queue[index]?.id ?? "")) queue.splice(index, 1);
    // A record that cannot be removed is sent once more by a later tab, and taken once.
    await outbox?.remove([...ids]).catch(() => undefined);
  }

  async function post(): Promise<void> {
    // After a signature every change still goes out, so that the server keeps it for its writer; any other refusal stops the queue.
    const isBarred = refusal !== null && refusal.problem.code !== NOT_DRAFT;
    if (isPosting || timer !== null || isBarred) return;
    isPosting = true;
    try {
      for (let first = queue[0]; first !== undefined; first = queue[0]) if (!(await postOne(first, false))) break;
    } finally {
      isPosting = false;
      onChange();
    }
  }

  /** Answers whether the next one may be posted. */
  async function postOne(update: Waiting, keepalive: boolean): Promise<boolean> {
    if (isSignedOut && !keepalive && !(await isStillOurs())) {
      tryLater(SIGNED_OUT_RETRY_MS);
      return false;
    }
    let response: Response;
    try {
      response = await ask(path, {
        method: "POST",
        // The server is told for whom this is: somebody else may have signed in on this device meanwhile.
        headers: { "content-type": "application/octet-stream", "x-update-id": update.id, "x-person": personId },
        body: new Blob([new Uint8Array(update.bytes)]),
        keepalive,
      });
    } catch {
      isUnreachable = true;
      tryLater(retryMs);
      return false;
    }
    if (!response.ok) return refusedWith(update, await problemOf(response));
    await response.body?.cancel();
    isUnreachable = false;
    isSignedOut = false;
    hasResent = false;
    retryMs = FIRST_RETRY_MS;
    await forget([update]);
    onChange();
    return true;
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
      // Only throttled is still "saving"; a server in trouble is as good as none.
      isUnreachable = status !== 429;
      tryLater(error.retryAfterS === null ? retryMs : error.retryAfterS * 1000);
      return false;
    }
    isUnreachable = false;
    if (code === "update.invalid" && values?.incomplete === true && !hasResent) {
      hasResent = true;
      onIncomplete();
      return false;
    }
    refusal = error;
    if (code !== NOT_DRAFT) return false;
    // The server keeps it for its writer: the copy here has done its work. Kept or not, the next one is told in the same way.
    if (values?.kept !== false) await forget([update]);
    return values?.kept !== false;
  }

  /** True when the session is this person's again; another who signed in here must not send it. */
  async function isStillOurs(): Promise<boolean> {
    try {
      const response = await ask("/api/auth/session", { headers: { accept: "application/json" } });
      const session: unknown = response.ok ? await response.json() : null;
      return idOfSession(session) === personId;
    } catch {
      return false;
    }
  }

  function tryLater(ms: number): void {
    retryMs = Math.min(retryMs * 2, LAST_RETRY_MS);
    if (timer !== null) clearTimeout(timer);
    if (isStopped) return;
    timer = setTimeout(() => {
      timer = null;
      void post();
    }, ms);
    onChange();
  }

  function clear(): void {
    if (timer !== null) clearTimeout(timer);
    timer = null;
  }

  return {
    queue,
    get isUnreachable() {
      return isUnreachable;
    },
    get isSignedOut() {
      return isSignedOut;
    },
    get refusal() {
      return refusal;
    },
    get isKept() {
      return isKept;
    },
    enqueue(bytes) {
      lastAt = Math.max(Date.now(), lastAt + 1);
      const update: Waiting = { id: newName(), bytes, tab, at: lastAt };
      queue.push(update);
      void keep(update).then(post);
    },
    async adopt(update) {
      if (queue.some((each) => each.id === update.id)) return;
      lastAt = Math.max(update.at, lastAt + 1);
      const mine: Waiting = { ...update, tab, at: lastAt };
      queue.push(mine);
      await keep(mine);
    },
    forget,
    post,
    retryNow() {
      clear();
      retryMs = FIRST_RETRY_MS;
      void post();
    },
    postAndGo() {
      const first = queue[0];
      if (first !== undefined && !isPosting && refusal === null && first.bytes.length < KEEPALIVE_BYTES) {
        void postOne(first, true);
      }
    },
    hear(news) {
      if (news.isUnreachable !== undefined) isUnreachable = news.isUnreachable;
      if (news.isSignedOut !== undefined) isSignedOut = news.isSignedOut;
      if (news.refusal !== undefined) refusal = news.refusal;
      onChange();
    },
    stop() {
      isStopped = true;
      clear();
      // What is left in the queue goes out as far as the line carries; the rest waits on the device for the next tab.
      void post();
    },
  };
}

function idOfSession(session: unknown): string | null {
  if (typeof session !== "object" || session === null || !("person" in session)) return null;
  const { person } = session;
  return typeof person === "object" && person !== null && "id" in person && typeof person.id === "string"
    ? person.id
    : null;
}
