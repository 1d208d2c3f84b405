// Rates are counted in the database, so that several servers count together.
import { and, eq, lt, sql } from "drizzle-orm";
import type { Db } from "./client.ts";
import { rateCounters } from "./schema/people.ts";

export type Taken = { ok: true; left: number } | { ok: false; retryAfterS: number };

/**
 * Takes one from what the key may have in a window of time. Call it outside the transaction that it protects, or a refusal
 * there would give it back.
 * @param key       who and what, e.g. "updates:<person id>"
 * @param limit     how many in one window
 * @param windowMs  length of the window, counted from the epoch
 */
export async function takeFrom(db: Db, key: string, limit: number, windowMs: number): Promise<Taken> {
  const now = Date.now();
  const start = Math.floor(now / windowMs) * windowMs;
  const [counter] = await db
    .insert(rateCounters)
    .values({ key, windowStart: new Date(start), count: 1 })
    .onConflictDoUpdate({
      target: [rateCounters.key, rateCounters.windowStart],
      // Beyond the limit the number says nothing more, and a flood must not overflow it.
      set: { count: sql`least(${rateCounters.count} + 1, ${limit} + 1)` },
    })
    .returning({ count: rateCounters.count });
  const taken = counter?.count ?? limit + 1;
  if (taken === 1) {
    await db.delete(rateCounters).where(and(eq(rateCounters.key, key), lt(rateCounters.windowStart, new Date(start))));
  }
  if (taken <= limit) return { ok: true, left: limit - taken };
  return { ok: false, retryAfterS: Math.max(1, Math.ceil((start + windowMs - now) / 1000)) };
}
