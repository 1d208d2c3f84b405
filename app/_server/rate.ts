// A limit that is passed is a refusal that says when to come again.
import "server-only";
import type { Db } from "../../db/client.ts";
import { Refused } from "../../db/errors.ts";
import { takeFrom } from "../../db/rate.ts";

export async function demandRate(db: Db, key: string, limit: number, windowMs: number): Promise<void> {
  const taken = await takeFrom(db, key, limit, windowMs);
  if (!taken.ok) throw new Refused("request.too-many", { retryAfterS: taken.retryAfterS });
}
