// One's own sessions, and the events of signing in and out. The rows themselves are written by the sign-in library.
import { and, desc, eq, ne, sql } from "drizzle-orm";
import { record } from "./audit.ts";
import type { Db } from "./client.ts";
import { Refused } from "./errors.ts";
import { ringPerson } from "./live.ts";
import { type Actor, demand } from "./policy.ts";
import { session, user } from "./schema/people.ts";

export type SessionLine = {
  id: string;
  createdAt: Date;
  lastUsedAt: Date;
  expiresAt: Date;
  userAgent: string | null;
  ipAddress: string | null;
  isThis: boolean;
};

/** One's own living sessions, newest first. */
export async function listSessions(db: Db, actor: Actor): Promise<SessionLine[]> {
  demand(actor, "sessions.manage", null);
  const rows = await db
    .select({
      id: session.id,
      createdAt: session.createdAt,
      lastUsedAt: session.updatedAt,
      expiresAt: session.expiresAt,
      userAgent: session.userAgent,
      ipAddress: session.ipAddress,
    })
    .from(session)
    .where(and(eq(session.userId, actor.id), sql`${session.expiresAt} > now()`))
    .orderBy(desc(session.createdAt), desc(session.id));
  return rows.map((row) => ({ ...row, isThis: row.id === actor.sessionId }));
}

/** Ends one of one's own sessions. Another's is not found. */
export function endSession(db: Db, actor: Actor, sessionId: string): Promise<void> {
  return db.transaction(async (tx) => {
    demand(actor, "sessions.manage", null);
    const ended = await tx
      .delete(session)
      .where(and(eq(session.id, sessionId), eq(session.userId, actor.id)))
      .returning({ id: session.id });
    if (ended.length === 0) throw new Refused("session.not-found");
    await ringPerson(tx, actor.id);
    await record(tx, actor, "session.ended", { objectKind: "person", objectId: actor.id, detail: { count: 1 } });
  });
}

/** Ends all one's sessions but this one; returns how many. */
export function endOtherSessions(db: Db, actor: Actor): Promise<number> {
  return db.transaction(async (tx) => {
    demand(actor, "sessions.manage", null);
    const ended = await tx
      .delete(session)
      .where(and(eq(session.userId, actor.id), ne(session.id, actor.sessionId)))
      .returning({ id: session.id });
    if (ended.length === 0) return 0;
    await ringPerson(tx, actor.id);
    await record(tx, actor, "session.ended", {
      objectKind: "person",
      objectId: actor.id,
      detail: { count: ended.length },
    });
    return ended.length;
  });
}

/** What the sign-in library did for a person, as the trail names it. */
export type SignInEvent =
  | "sign-in.succeeded"
  | "session.closed"
  | "password.changed"
  | "password.reset"
  | "reset.requested";

/** Records what the sign-in library did. Does nothing for an id that is no person's. */
export function recordSignInEvent(db: Db, personId: string, event: SignInEvent): Promise<void> {
  return db.transaction(async (tx) => {
    const [person] = await tx.select({ id: user.id, printedName: user.name }).from(user).where(eq(user.id, personId));
    if (person === undefined) return;
    await record(tx, person, event, { objectKind: "person", objectId: person.id });
  });
}
