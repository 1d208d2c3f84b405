// Mail waits in the outbox, in the transaction of what it tells of, until the post has taken it.
import { and, asc, desc, eq, isNull, lt } from "drizzle-orm";
import type { Db } from "./client.ts";
import { newId } from "./ids.ts";
import { type Actor, demand } from "./policy.ts";
import { outbox } from "./schema/people.ts";

export type Mail = { to: string; subject: string; text: string };
export type PostedMail = Mail & { id: string; createdAt: Date; sentAt: Date | null };

/** Puts a mail into the outbox; it leaves only if the transaction commits. */
export async function postMail(tx: Db, mail: Mail): Promise<string> {
  const id = newId();
  const { to, text } = mail;
  // A header is one line, whatever a title or a name holds.
  const subject = mail.subject.replace(/\s+/g, " ").trim();
  await tx.insert(outbox).values({ id, to, subject, text, createdAt: new Date() });
  return id;
}

const columns = {
  id: outbox.id,
  to: outbox.to,
  subject: outbox.subject,
  text: outbox.text,
  createdAt: outbox.createdAt,
  sentAt: outbox.sentAt,
};

/** What the post has not taken yet, oldest first. For the job that sends it. */
export function unsentMail(db: Db, limit: number): Promise<PostedMail[]> {
  return db.select(columns).from(outbox).where(isNull(outbox.sentAt)).orderBy(asc(outbox.id)).limit(limit);
}

/** Notes that the post took the mail; once is enough. */
export async function markSent(db: Db, id: string): Promise<void> {
  await db
    .update(outbox)
    .set({ sentAt: new Date() })
    .where(and(eq(outbox.id, id), isNull(outbox.sentAt)));
}

const LONGEST_PAGE = 100;

/** The outbox, newest first, for an administrator of the demo. `after` is the id of the last one seen. */
export async function listOutbox(
  db: Db,
  actor: Actor,
  { after, limit = 50 }: { after?: string; limit?: number } = {},
): Promise<{ mails: PostedMail[]; next: string | null }> {
  demand(actor, "outbox.read", null);
  const size = Math.min(Math.max(1, limit), LONGEST_PAGE);
  const rows = await db
    .select(columns)
    .from(outbox)
    .where(after === undefined ? undefined : lt(outbox.id, after))
    .orderBy(desc(outbox.id))
    .limit(size + 1);
  const mails = rows.slice(0, size);
  return { mails, next: rows.length > size ? (mails.at(-1)?.id ?? null) : null };
}
