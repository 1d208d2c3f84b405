// People, their roles, and their accounts' ends. Passwords are the sign-in library's business; here they are never seen.
import { and, asc, count, eq, gte, inArray, isNull, ne, sql } from "drizzle-orm";
import { record } from "./audit.ts";
import type { Db } from "./client.ts";
import { Refused } from "./errors.ts";
import { ringPerson } from "./live.ts";
import { postMail } from "./mail.ts";
import { type Actor, demand, isRole, type Role } from "./policy.ts";
import { personRoles, session, user } from "./schema/people.ts";
import { events, memberships, notebooks } from "./schema/records.ts";

/**
 * The person behind a session as the database knows them now, or null when the session has ended, is another's, or the
 * account is closed. Asked at every request, so a change of rights holds from the next one on.
 */
export async function actorOf(
  db: Db,
  { personId, sessionId }: { personId: string; sessionId: string },
): Promise<Actor | null> {
  const [living] = await db
    .select({ id: session.id })
    .from(session)
    .where(and(eq(session.id, sessionId), eq(session.userId, personId), sql`${session.expiresAt} > now()`));
  return living === undefined ? null : actorOfPerson(db, personId, sessionId);
}

/** The same without a session, for the commands of the command line, which act for a person of the demo. */
export async function actorOfPerson(db: Db, personId: string, sessionId: string): Promise<Actor | null> {
  const [person] = await db
    .select({
      id: user.id,
      printedName: user.name,
      email: user.email,
      decimalSign: user.decimalSign,
      timeZone: user.timeZone,
      signingHeldAt: user.signingHeldAt,
    })
    .from(user)
    .where(and(eq(user.id, personId), isNull(user.closedAt)));
  if (person === undefined) return null;
  const { signingHeldAt, decimalSign, ...rest } = person;
  const member = await db
    .select({ notebookId: memberships.notebookId })
    .from(memberships)
    .where(eq(memberships.personId, personId))
    .orderBy(asc(memberships.notebookId));
  return {
    ...rest,
    roles: await rolesOf(db, personId),
    memberOf: member.map(({ notebookId }) => notebookId),
    sessionId,
    decimalSign: decimalSign === "," ? "," : ".",
    signingHeld: signingHeldAt !== null,
  };
}

export type PersonLine = {
  id: string;
  printedName: string;
  email: string;
  roles: Role[];
  /** codes of the notebooks */
  notebooks: string[];
  closedAt: Date | null;
  signingHeldAt: Date | null;
};

/** Everybody who ever had an account: those who left stay in the list, their ids are for good. */
export async function listPeople(db: Db, actor: Actor): Promise<PersonLine[]> {
  demand(actor, "people.list", null);
  return personLines(db);
}

/** People whose signing waits for a second person, for whoever may confirm: supervisors and administrators. */
export async function listHeldPeople(db: Db, actor: Actor): Promise<PersonLine[]> {
  demand(actor, "identity.confirm", { personId: "", begunBy: [] });
  return (await personLines(db)).filter((person) => person.signingHeldAt !== null && person.closedAt === null);
}

export type RoleInput = { personId: string; role: Role; reason: string };

/** Gives a role. Refuses one's own (`person.self`), a closed account, a role that is held already. */
export function grantRole(db: Db, actor: Actor, input: RoleInput): Promise<void> {
  return db.transaction(async (tx) => {
    demand(actor, "role.change", input);
    const reason = reasonOf(input.reason);
    const person = await lockPerson(tx, input.personId);
    if (person.closedAt !== null) throw new Refused("person.closed");
    const old = await rolesOf(tx, person.id);
    if (old.includes(input.role)) throw new Refused("person.role-held");
    await tx
      .insert(personRoles)
      .values({ personId: person.id, role: input.role, grantedAt: new Date(), grantedBy: actor.id });
    await ringPerson(tx, person.id);
    await record(tx, actor, "role.granted", {
      objectKind: "person",
      objectId: person.id,
      detail: { person: person.printedName, role: input.role, old, new: await rolesOf(tx, person.id), reason },
    });
  });
}

/** Takes a role away. Refuses one's own, a role that is not held, and the last administrator's. */
export function revokeRole(db: Db, actor: Actor, input: RoleInput): Promise<void> {
  return db.transaction(async (tx) => {
    demand(actor, "role.change", input);
    const reason = reasonOf(input.reason);
    if (input.role === "administrator") await demandAnotherAdministrator(tx, input.personId);
    const person = await lockPerson(tx, input.personId);
    const old = await rolesOf(tx, person.id);
    if (!old.includes(input.role)) throw new Refused("person.role-not-held");
    await tx.delete(personRoles).where(and(eq(personRoles.personId, person.id), eq(personRoles.role, input.role)));
    await ringPerson(tx, person.id);
    await record(tx, actor, "role.revoked", {
      objectKind: "person",
      objectId: person.id,
      detail: { person: person.printedName, role: input.role, old, new: await rolesOf(tx, person.id), reason },
    });
  });
}

/** Closes the account for good: sessions end at once, names stay on what was signed, the id is never used again. */
export function closePerson(db: Db, actor: Actor, input: { personId: string; reason: string }): Promise<void> {
  return db.transaction(async (tx) => {
    demand(actor, "person.close", input);
    const reason = reasonOf(input.reason);
    await demandAnotherAdministrator(tx, input.personId);
    const person = await lockPerson(tx, input.personId);
    if (person.closedAt !== null) throw new Refused("person.closed");
    await tx.update(user).set({ closedAt: new Date(), updatedAt: new Date() }).where(eq(user.id, person.id));
    await tx.delete(session).where(eq(session.userId, person.id));
    await ringPerson(tx, person.id);
    await record(tx, actor, "person.closed", {
      objectKind: "person",
      objectId: person.id,
      detail: { person: person.printedName, reason },
    });
  });
}

/**
 * Begins a password reset for somebody: their signing is held until a second person has confirmed who they are, they are told by
 * mail, and the link goes to their mail alone. The caller sends the link after the commit; the administrator never sees it.
 * @returns where the link is to be sent
 */
export function beginReset(
  db: Db,
  actor: Actor,
  input: { personId: string; reason: string },
): Promise<{ email: string }> {
  return db.transaction(async (tx) => {
    demand(actor, "reset.begin", input);
    const reason = reasonOf(input.reason);
    const person = await lockPerson(tx, input.personId);
    if (person.closedAt !== null) throw new Refused("person.closed");
    await tx
      .update(user)
      // The first reset since the hold decides its time: whoever began one since then may not confirm.
      .set({ signingHeldAt: person.signingHeldAt ?? new Date(), signingHeldBy: actor.id, updatedAt: new Date() })
      .where(eq(user.id, person.id));
    await postMail(tx, {
      to: person.email,
      subject: "A password reset was begun for you",
      text:
        `${actor.printedName} began a password reset for your account. Only you receive the link to set a new password. ` +
        "Signing is held until a second person has confirmed that it is you. If you did not ask for this, tell them.",
    });
    await ringPerson(tx, person.id);
    await record(tx, actor, "reset.begun", {
      objectKind: "person",
      objectId: person.id,
      detail: { person: person.printedName, reason },
    });
    return { email: person.email };
  });
}

/** Confirms who somebody is after a reset, and how that was made sure; frees their signing. Nobody who began the reset, not oneself. */
export function confirmIdentity(db: Db, actor: Actor, input: { personId: string; how: string }): Promise<void> {
  return db.transaction(async (tx) => {
    // Asked before the person is looked up, so that whoever may not confirm learns of nobody.
    demand(actor, "identity.confirm", { personId: input.personId, begunBy: [] });
    const how = reasonOf(input.how, "how");
    const person = await lockPerson(tx, input.personId);
    if (person.signingHeldAt === null) throw new Refused("person.not-held");
    demand(actor, "identity.confirm", {
      personId: person.id,
      begunBy: await begunBy(tx, person.id, person.signingHeldAt, person.signingHeldBy),
    });
    await tx
      .update(user)
      .set({ signingHeldAt: null, signingHeldBy: null, updatedAt: new Date() })
      .where(eq(user.id, person.id));
    await ringPerson(tx, person.id);
    await record(tx, actor, "identity.confirmed", {
      objectKind: "person",
      objectId: person.id,
      detail: { person: person.printedName, how },
    });
  });
}

export type Preferences = { decimalSign: "." | ","; timeZone: string };

/** Sets one's own preferences. Refuses a time zone that is no IANA name (`preferences.invalid`). */
export function setPreferences(db: Db, actor: Actor, input: Preferences): Promise<void> {
  return db.transaction(async (tx) => {
    demand(actor, "preferences.set", null);
    if (!isTimeZone(input.timeZone)) throw new Refused("preferences.invalid", { field: "timeZone" });
    const [before] = await tx
      .select({ decimalSign: user.decimalSign, timeZone: user.timeZone })
      .from(user)
      .where(eq(user.id, actor.id))
      .for("update");
    if (before === undefined) throw new Refused("person.not-found");
    const wanted = { decimalSign: input.decimalSign, timeZone: input.timeZone };
    await tx
      .update(user)
      .set({ ...wanted, updatedAt: new Date() })
      .where(eq(user.id, actor.id));
    for (const name of ["decimalSign", "timeZone"] as const) {
      if (before[name] === wanted[name]) continue;
      await record(tx, actor, "preferences.changed", {
        objectKind: "person",
        objectId: actor.id,
        detail: { name, old: before[name], new: wanted[name] },
      });
    }
  });
}

/** Whether there is an administrator who can act: a fresh installation has none. */
export async function hasAdministrator(db: Db): Promise<boolean> {
  const [found] = await db
    .select({ people: count() })
    .from(personRoles)
    .innerJoin(user, eq(user.id, personRoles.personId))
    .where(and(eq(personRoles.role, "administrator"), isNull(user.closedAt)));
  return found !== undefined && found.people > 0;
}

/** Whether the account may sign in: unknown and closed ones may not, and callers tell no difference. */
export async function maySignIn(db: Db, email: string): Promise<boolean> {
  const [found] = await db
    .select({ id: user.id })
    .from(user)
    .where(and(eq(user.email, email.trim().toLowerCase()), isNull(user.closedAt)));
  return found !== undefined;
}

export function isTimeZone(name: string): boolean {
  try {
    // Offsets such as "+02:00" are understood as well, but know no summer: a name is asked for.
    return name.length <= 64 && /^[A-Za-z]/.test(name) && new Intl.DateTimeFormat("en", { timeZone: name }) !== null;
  } catch {
    return false;
  }
}

export async function rolesOf(db: Db, personId: string): Promise<Role[]> {
  const rows = await db
    .select({ role: personRoles.role })
    .from(personRoles)
    .where(eq(personRoles.personId, personId))
    .orderBy(asc(personRoles.role));
  return rows.map(({ role }) => role).filter(isRole);
}

const LONGEST_REASON = 2_000;

function reasonOf(text: string, field = "reason"): string {
  const reason = text.trim();
  if (reason === "" || reason.length > LONGEST_REASON) throw new Refused("person.reason-missing", { field });
  return reason;
}

async function lockPerson(tx: Db, personId: string) {
  const [person] = await tx
    .select({
      id: user.id,
      printedName: user.name,
      email: user.email,
      closedAt: user.closedAt,
      signingHeldAt: user.signingHeldAt,
      signingHeldBy: user.signingHeldBy,
    })
    .from(user)
    .where(eq(user.id, personId))
    .for("update");
  if (person === undefined) throw new Refused("person.not-found");
  return person;
}

/** Locks every administrator in one order, so that two who remove each other queue and the second is refused. */
async function demandAnotherAdministrator(tx: Db, personId: string): Promise<void> {
  const others = await tx
    .select({ id: user.id, closedAt: user.closedAt })
    .from(user)
    .innerJoin(personRoles, and(eq(personRoles.personId, user.id), eq(personRoles.role, "administrator")))
    .orderBy(asc(user.id))
    .for("update");
  if (others.some(({ id, closedAt }) => id !== personId && closedAt === null)) return;
  throw new Refused("person.last-administrator");
}

/** Everybody who began a reset of the person since the hold. */
async function begunBy(tx: Db, personId: string, since: Date, last: string | null): Promise<string[]> {
  const rows = await tx
    .selectDistinct({ personId: events.personId })
    .from(events)
    .where(
      and(
        eq(events.action, "reset.begun"),
        eq(events.objectId, personId),
        // The event is written in the same transaction as the hold, a moment later.
        gte(events.at, since),
        ne(events.personId, personId),
      ),
    );
  return [...rows.map((row) => row.personId), last].filter((id) => id !== null);
}

async function personLines(db: Db): Promise<PersonLine[]> {
  const people = await db
    .select({
      id: user.id,
      printedName: user.name,
      email: user.email,
      closedAt: user.closedAt,
      signingHeldAt: user.signingHeldAt,
    })
    .from(user)
    .orderBy(asc(user.name), asc(user.id));
  const ids = people.map(({ id }) => id);
  const roles = await db
    .select({ personId: personRoles.personId, role: personRoles.role })
    .from(personRoles)
    .where(inArray(personRoles.personId, ids))
    .orderBy(asc(personRoles.role));
  const member = await db
    .select({ personId: memberships.personId, code: notebooks.code })
    .from(memberships)
    .innerJoin(notebooks, eq(notebooks.id, memberships.notebookId))
    .orderBy(asc(notebooks.code));
  return people.map((person) => ({
    ...person,
    roles: roles
      .filter((row) => row.personId === person.id)
      .map((row) => row.role)
      .filter(isRole),
    notebooks: member.filter((row) => row.personId === person.id).map((row) => row.code),
  }));
}
