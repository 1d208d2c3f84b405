// The start of a server process, and its end: open, migrate, seed, listen; and on a signal the same backwards.
import "server-only";
import { store } from "./database.ts";
import { seedDemoOnce } from "./demo.ts";
import { settings } from "./env.ts";
import { startJobs } from "./jobs.ts";
import { log } from "./log.ts";
import { onClose, processState } from "./process-state.ts";
import { closeAll } from "./shutdown.ts";
import { signingSeal } from "./signing-key.ts";

/** Called by instrumentation before the first request is answered. A start that fails says why in a sentence and ends the process. */
export async function start(): Promise<void> {
  if (process.env.NEXT_PHASE === "phase-production-build") return;
  try {
    const set = settings();
    if (set.url.startsWith("http:") && !/^http:\/\/(localhost|127[.]0[.]0[.]1|\[::1\])(:|$)/.test(set.url)) {
      log.warn({ url: set.url }, "the public address is not https: passwords and pages can be read on their way");
    }
    const { db, kind } = await store();
    endOnSignals();
    if (set.demo) await seedDemoOnce(db);
    await signingSeal();
    onClose(startJobs());
    log.info({ store: kind, demo: set.demo, url: set.url }, "open");
  } catch (error) {
    process.stderr.write(`${error instanceof Error ? error.message : "Counterleaf could not start."}\n`);
    // What people can set right is said in that sentence; only a fault of the program's own needs its traces.
    if (!isForPeople(error)) log.fatal({ error }, "could not start");
    await closeAll();
    process.exit(1);
  }
}

function endOnSignals(): void {
  // Next's own handlers wait for open connections to end by themselves, which an event stream never does, and exit before the
  // database is closed.
  for (const signal of ["SIGINT", "SIGTERM"] as const) {
    process.removeAllListeners(signal);
    process.on(signal, () => {
      if (processState().closing) return;
      void closeAll().then(() => {
        log.info({ signal }, "closed");
        process.exit(0);
      });
    });
  }
}

const FOR_PEOPLE = new Set(["FolderInUse", "FolderUnusable", "SettingsRefused"]);

function isForPeople(error: unknown): boolean {
  return error instanceof Error && FOR_PEOPLE.has(error.name);
}
