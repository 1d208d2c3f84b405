// Work that nobody waits for: pages that changed are derived for search within two seconds, letters that wait are sent.
import "server-only";
import { deriveRevision, staleRevisions } from "../../db/derivation.ts";
import { store } from "./database.ts";
import { settings } from "./env.ts";
import { log } from "./log.ts";
import { sendWaiting } from "./mail.ts";

const DERIVE_EVERY_MS = 1_000;
const MAIL_EVERY_MS = 15_000;

/** Starts the two loops; what comes back stops them and waits for the round that is running. */
export function startJobs(): () => Promise<void> {
  const loops = [repeat("derive", DERIVE_EVERY_MS, deriveChanged), repeat("mail", MAIL_EVERY_MS, sendMail)];
  return async () => {
    await Promise.all(loops.map((stop) => stop()));
  };
}

/** Derives what is behind. Two servers that take the same page do the same work twice, with the same outcome. */
export async function deriveChanged(): Promise<number> {
  const { db } = await store();
  const behind = await staleRevisions(db, 20);
  for (const revisionId of behind) await deriveRevision(db, revisionId);
  return behind.length;
}

async function sendMail(): Promise<void> {
  const { db } = await store();
  await sendWaiting(db, settings());
}

function repeat(name: string, everyMs: number, work: () => Promise<unknown>): () => Promise<void> {
  let running: Promise<void> = Promise.resolve();
  const timer = setInterval(() => {
    if (isRunning) return;
    isRunning = true;
    running = work()
      .catch((error: unknown) => log.error({ error, job: name }, "a job failed; it is tried again"))
      .then(() => {
        isRunning = false;
      });
  }, everyMs);
  let isRunning = false;
  return async () => {
    clearInterval(timer);
    await running;
  };
}
