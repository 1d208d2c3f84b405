// Wrong passwords, counted in one sum for both doors, sign-in and signing. At the limit both close for that account; each
// next lock lasts longer, and every lock ends, so a stranger cannot shut a named person out for good.
import { and, count, eq, gte, lt } from "drizzle-orm";
import { record } from "./audit.ts";
import type { Db } from "./client.ts";
import { Refused, type RefusedCode } from "./errors.ts";
import { newId } from "./ids.ts";
import type { Actor } from "./policy.ts";
import { failures, locks, user } from "./schema/people.ts";

export type Door = "sign-in" | "signing";

/** Our numbers, not a rule of law (SGN-05). */
export const FAILURE_LIMIT = 5;
export const FAILURE_WINDOW_MS = 15 * 60_000;
const FIRST_LOCK_MS = 15 * 60_000;
const LONGEST_LOCK_MS = 4 * 3_600_000;
const FORGOTTEN_AFTER_MS = 24 * 3_600_000;

const CODES = {
  "sign-in": { locked: "account.locked", wrong: "account.wrong-password" },
  signing: { locked: "signing.locked", wrong: "signing.wrong-password" },
} as const satisfies Record<Door, { locked: RefusedCode; wrong: RefusedCode }>;

export type Attempt = { account: string; door: Door; actor?: Pick<Actor, "id" | "printedName"> };

/**
 * Has a password verified behind the counter: refuses `account.locked` or `signing.locked` without asking `verify`, and
 * `account.wrong-password` or `signing.wrong-password` when it says no. The failure is written before `verify` is asked and
 * taken back afterwards, so that many guesses at once are no more than the limit. `verify` is asked in no transaction.
 */
export async function guardPassword(db: Db, attempt: Attempt, verify: () => Promise<boolean>): Promise<void> {
  const id = await db.transaction((tx) => admit(tx, attempt));
  const isRight = await verify().catch(async (fault) => {
    await db.delete(failures).where(eq(failures.id, id));
    throw fault;
  });
  if (isRight) {
    await clearFailures(db, attempt.account);
    return;
  }
  await db.transaction((tx) => settle(tx, attempt));
  throw new Refused(CODES[attempt.door].wrong);
}

/** Counts one failure that already happened; locks the account when it was the last one allowed. */
export function countFailure(db: Db, attempt: Attempt): Promise<{ lockedUntil: Date | null }> {
  return db.transaction(async (tx) => {
    const account = normal(attempt.account);
    await lockAccount(tx, account);
    await tx.insert(failures).values({ id: newId(), account, door: attempt.door, at: new Date() });
    await settle(tx, attempt);
    return { lockedUntil: await lockedUntil(tx, account) };
  });
}

/** Until when both doors are closed for the account, or null when they are open. Unknown accounts are counted alike. */
export async function lockedUntil(db: Db, account: string): Promise<Date | null> {
  const [lock] = await db
    .select({ until: locks.until })
    .from(locks)
    .where(eq(locks.account, normal(account)));
  return lock !== undefined && lock.until.getTime() > Date.now() ? lock.until : null;
}

/** Forgets the failures and how many locks there were, after a right password. */
export function clearFailures(db: Db, account: string): Promise<void> {
  return db.transaction(async (tx) => {
    const name = normal(account);
    await lockAccount(tx, name);
    await tx.delete(failures).where(eq(failures.account, name));
    await tx
      .update(locks)
      .set({ times: 0, until: new Date(0) })
      .where(eq(locks.account, name));
  });
}

async function admit(tx: Db, { account: typed, door }: Attempt): Promise<string> {
  const account = normal(typed);
  const lock = await lockAccount(tx, account);
  if (lock.until.getTime() > Date.now()) throw new Refused(CODES[door].locked, { until: lock.until.toISOString() });
  // As many attempts as are left may be on their way; those beyond wait for an answer of an earlier one.
  const pending = await recentFailures(tx, account);
  if (pending >= FAILURE_LIMIT) {
    throw new Refused(CODES[door].locked, { until: new Date(Date.now() + FAILURE_WINDOW_MS).toISOString() });
  }
  const id = newId();
  await tx.insert(failures).values({ id, account, door, at: new Date() });
  return id;
}

/** Records the failure and, at the limit, the lock. The same statements for a known account and for an unknown one. */
async function settle(tx: Db, { account: typed, door, actor }: Attempt): Promise<void> {
  const account = normal(typed);
  const lock = await lockAccount(tx, account);
  const now = Date.now();
  const sum = await recentFailures(tx, account);
  const [person] = await tx.select({ id: user.id, printedName: user.name }).from(user).where(eq(user.email, account));
  // What was typed for an unknown account may be a password in the wrong field: the trail, which is for good, leaves it out.
  const object = { objectKind: "account", objectId: person?.id ?? "unknown" };
  const name = person?.printedName ?? "an unknown account";
  await record(tx, actor ?? null, door === "signing" ? "signing.failed" : "sign-in.failed", {
    ...object,
    detail: { account: name },
  });
  if (sum < FAILURE_LIMIT || lock.until.getTime() > now) return;
  const times = now - lock.until.getTime() > FORGOTTEN_AFTER_MS ? 1 : lock.times + 1;
  const until = new Date(now + Math.min(FIRST_LOCK_MS * 2 ** (times - 1), LONGEST_LOCK_MS));
  await tx.update(locks).set({ until, times }).where(eq(locks.account, account));
  await tx.delete(failures).where(eq(failures.account, account));
  await record(tx, actor ?? null, "account.locked", {
    ...object,
    detail: { account: name, failures: sum, until: until.toISOString() },
  });
}

/** Locks the account's row, making it if need be, and drops failures that count no more. */
async function lockAccount(tx: Db, account: string): Promise<{ until: Date; times: number }> {
  await tx
    .insert(locks)
    .values({ account, until: new Date(0), times: 0 })
    .onConflictDoNothing();
  const [lock] = await tx
    .select({ until: locks.until, times: locks.times })
    .from(locks)
    .where(eq(locks.account, account))
    .for("update");
  if (lock === undefined) throw new Error("The account's row went away under its lock.");
  await tx.delete(failures).where(and(eq(failures.account, account), lt(failures.at, windowStart())));
  return lock;
}

async function recentFailures(tx: Db, account: string): Promise<number> {
  const [found] = await tx
    .select({ sum: count() })
    .from(failures)
    .where(and(eq(failures.account, account), gte(failures.at, windowStart())));
  return found?.sum ?? 0;
}

function windowStart(): Date {
  return new Date(Date.now() - FAILURE_WINDOW_MS);
}

const LONGEST_ACCOUNT = 254;

function normal(account: string): string {
  return account.trim().toLowerCase().slice(0, LONGEST_ACCOUNT);
}
