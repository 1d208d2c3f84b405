// "Done on" is typed, "recorded" is the server's (REC-08): how long after the day of the work somebody first wrote on the page.
import { and, eq, gte, isNotNull, min, sql } from "drizzle-orm";
import type { Db } from "./client.ts";
import { revisions, updates } from "./schema/records.ts";

export type Recorded = {
  /** the first time that anybody wrote in the entry on or after the day of the work */
  at: Date | null;
  /** calendar days from the day of the work to that time, in the author's time zone; null while either is unknown */
  daysAfter: number | null;
  /** more than one calendar day: the page says so and asks why */
  isLate: boolean;
  /** the day of the work lies ahead */
  isAhead: boolean;
};

const DAY_MS = 86_400_000;

/** When an entry's work of that day was recorded. `doneOn` is "YYYY-MM-DD" or "". */
export async function whenRecorded(
  db: Db,
  { entryId, doneOn, timeZone, now }: { entryId: string; doneOn: string; timeZone: string; now: Date },
): Promise<Recorded> {
  if (doneOn === "") return { at: null, daysAfter: null, isLate: false, isAhead: false };
  const dayBegins = sql`(${doneOn}::timestamp at time zone ${timeZone})`;
  const [first] = await db
    .select({ at: min(updates.at) })
    .from(updates)
    .innerJoin(revisions, eq(revisions.id, updates.revisionId))
    .where(and(eq(revisions.entryId, entryId), isNotNull(updates.personId), gte(updates.at, dayBegins)));
  const at = first?.at ?? null;
  const daysAfter = at === null ? null : Math.round((dayNumber(dayIn(at, timeZone)) - dayNumber(doneOn)) / DAY_MS);
  return { at, daysAfter, isLate: daysAfter !== null && daysAfter > 1, isAhead: doneOn > dayIn(now, timeZone) };
}

/** The calendar day at a time in a zone, as "YYYY-MM-DD". */
export function dayIn(time: Date, timeZone: string): string {
  const parts = new Intl.DateTimeFormat("en", { timeZone, year: "numeric", month: "2-digit", day: "2-digit" });
  const found = Object.fromEntries(parts.formatToParts(time).map(({ type, value }) => [type, value]));
  return `${found.year}-${found.month}-${found.day}`;
}

function dayNumber(day: string): number {
  return Date.parse(`${day}T00:00:00Z`);
}

/** Whole days from one time to another, none when it lies ahead. */
export function daysBetween(from: Date, to: Date): number {
  return Math.max(0, Math.floor((to.getTime() - from.getTime()) / DAY_MS));
}
