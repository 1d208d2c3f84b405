// What one process has of its own. A bundler loads a module more than once, so it hangs on globalThis.
import "server-only";

type Closer = () => Promise<void>;
type State = { closing: boolean; inFlight: number; closers: Closer[] };

declare global {
  var counterleafProcess: State | undefined;
}

export function processState(): State {
  globalThis.counterleafProcess ??= { closing: false, inFlight: 0, closers: [] };
  return globalThis.counterleafProcess;
}

/** Run in the reverse order when the process ends. */
export function onClose(closer: Closer): void {
  processState().closers.push(closer);
}

/** Counts what is being answered, so that the database is not closed under it. */
export async function counted<T>(work: () => Promise<T>): Promise<T> {
  const state = processState();
  state.inFlight += 1;
  try {
    return await work();
  } finally {
    state.inFlight -= 1;
  }
}
