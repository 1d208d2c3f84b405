// How many updates a person may post. Counted in the database for all servers together, but taken from there in lots: a
// statement for every keystroke would cost as much as the keystroke.
import type { Db } from "./client.ts";
import { Refused } from "./errors.ts";
import { takeFrom } from "./rate.ts";

/** A browser posts at most every 150 ms; the rest is room for several tabs and for what was typed without network. */
export const LOTS_A_MINUTE = 60;
const UPDATES_A_LOT = 20;
const MINUTE_MS = 60_000;

/** Takes one update from what the person may post. Refuses `update.too-many` with the seconds to wait. */
export async function takeUpdate(db: Db, personId: string): Promise<void> {
  const window = Math.floor(Date.now() / MINUTE_MS);
  const lot = lots.get(personId);
  if (lot !== undefined && lot.window === window && lot.left > 0) {
    lot.left -= 1;
    return;
  }
  const taken = await takeFrom(db, `updates:${personId}`, LOTS_A_MINUTE, MINUTE_MS);
  if (!taken.ok) throw new Refused("update.too-many", { retryAfterS: taken.retryAfterS });
  if (lots.size >= LOTS_KEPT) lots.clear();
  lots.set(personId, { window, left: UPDATES_A_LOT - 1 });
}

const LOTS_KEPT = 10_000;
const lots = new Map<string, { window: number; left: number }>();
