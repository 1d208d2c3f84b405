// The end of a process, in the reverse order of its start.
import "server-only";
import { log } from "./log.ts";
import { processState } from "./process-state.ts";

const DRAIN_MS = 5_000;

/** Takes no more, ends the streams, waits for what is being answered, closes the store. */
export async function closeAll(): Promise<void> {
  const state = processState();
  state.closing = true;
  const closers = state.closers.splice(0).reverse();
  const until = Date.now() + DRAIN_MS;
  // The store was opened first, so its closer comes last: by then the streams have ended and nothing is in flight.
  for (const [index, close] of closers.entries()) {
    if (index === closers.length - 1)
      while (state.inFlight > 0 && Date.now() < until) await new Promise((done) => setTimeout(done, 20));
    try {
      await close();
    } catch (error) {
      log.error({ error }, "something did not close cleanly");
    }
  }
}
