// Work that nobody waits for: pages that changed are derived for search within two seconds, letters that wait are sent.
import "server-only";
import { sweepUploads } from "../../db/attachments.ts";
import { deriveRevision, listUnderived } from "../../db/derive.ts";
import { store } from "./database.ts";
import { settings } from "./env.ts";
import { log } from "./log.ts";
import { sendWaiting } from "./mail.ts";

const DERIVE_EVERY_MS = 1_000;
const MAIL_EVERY_MS = 15_000;
const SWEEP_EVERY_MS = 600_000;
const PAGES_A_ROUND = 20;
const ASIDE_MS = 60_000;

/** Starts the loops; what comes back stops them and waits for the round that is running. */
export function startJobs(): () => Promise<void> {
  const loops = [
    repeat("derive", DERIVE_EVERY_MS, deriveChanged),
    repeat("mail", MAIL_EVERY_MS, sendMail),
    repeat("sweep", SWEEP_EVERY_MS, sweep),
  ];
  return async () => {
    await Promise.all(loops.map((stop) => stop()));
  };
}

/** Pages that could not be derived, and when they are tried again: one of them must not keep the others waiting. */
const setAside = new Map<string, number>();

/** Derives what is behind. Two servers that take the same page do the same work twice, with the same outcome. */
export async function deriveChanged(): Promise<number> {
  const { db } = await store();
  const now = Date.now();
  for (const [id, until] of setAside) if (until <= now) setAside.delete(id);
  const behind = (await listUnderived(db, PAGES_A_ROUND + setAside.size)).filter((id) => !setAside.has(id));
  for (const revisionId of behind) {
    try {
      await deriveRevision(db, revisionId);
    } catch (error) {
      setAside.set(revisionId, now + ASIDE_MS);
      log.error({ error, revision: revisionId }, "a page could not be derived; it is tried again later");
    }
  }
  return behind.length;
}

async function sweep(): Promise<void> {
  const { db } = await store();
  const swept = await sweepUploads(db, new Date());
  if (swept > 0) log.info({ swept }, "took away what broken uploads had left");
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
