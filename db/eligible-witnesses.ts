// Whom a supervisor may assign to an entry: members with the role who wrote nothing in it.
import { and, asc, eq, isNull, sql } from "drizzle-orm";
import type { Db } from "./client.ts";
import { Refused } from "./errors.ts";
import { type Actor, demand } from "./policy.ts";
import { personRoles, user } from "./schema/people.ts";
import { entries, memberships } from "./schema/records.ts";

export async function eligibleWitnesses(
  db: Db,
  actor: Actor,
  { entryId }: { entryId: string },
): Promise<{ id: string; printedName: string }[]> {
  const [entry] = await db
    .select({ notebookId: entries.notebookId, authorId: entries.authorId })
    .from(entries)
    .where(eq(entries.id, entryId));
  if (entry === undefined) throw new Refused("entry.not-found");
  demand(actor, "entry.read", { notebookId: entry.notebookId });
  return db
    .select({ id: user.id, printedName: user.name })
    .from(user)
    .innerJoin(memberships, and(eq(memberships.personId, user.id), eq(memberships.notebookId, entry.notebookId)))
    .innerJoin(personRoles, and(eq(personRoles.personId, user.id), eq(personRoles.role, "witness")))
    .where(
      and(
        isNull(user.closedAt),
        sql`${user.id} <> ${entry.authorId}`,
        sql`not exists (select 1 from contributors c where c.entry_id = ${entryId} and c.person_id = ${user.id})`,
      ),
    )
    .orderBy(asc(user.name), asc(user.id));
}
