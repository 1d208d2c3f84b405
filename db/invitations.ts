// How a person comes to an account: by a one-time code, of which only the hash is kept. The sign-in library hashes the
// password and hands the hash in, so that account, roles and event are one transaction.
import { createHash, randomBytes } from "node:crypto";
import { eq } from "drizzle-orm";
import { record } from "./audit.ts";
import type { Db } from "./client.ts";
import { Refused } from "./errors.ts";
import { newId } from "./ids.ts";
import { hasAdministrator } from "./people.ts";
import { type Actor, demand, isRole, type Role } from "./policy.ts";
import { account, invitations, personRoles, user } from "./schema/people.ts";

const VALID_MS = 72 * 3_600_000;

export type Invitation = { id: string; code: string; expiresAt: Date };
export type InvitePersonInput = { email: string; printedName: string; roles: Role[] };

/** Invites a person. The code is in the answer and nowhere else; the caller puts it into a link and mails it. */
export function invitePerson(db: Db, actor: Actor, input: InvitePersonInput): Promise<Invitation> {
  return db.transaction(async (tx) => {
    demand(actor, "person.invite", null);
    const person = checkPerson(input);
    await demandFreeEmail(tx, person.email);
    const invitation = await insertInvitation(tx, { ...person, roles: input.roles, createdBy: actor.id });
    await record(tx, actor, "person.invited", {
      objectKind: "invitation",
      objectId: invitation.id,
      detail: { person: person.printedName, email: person.email, roles: input.roles },
    });
    return invitation;
  });
}

/** Makes the one-time link's code for a store without an administrator; refuses `administration.not-first` otherwise. */
export function firstAdministrator(db: Db): Promise<Invitation> {
  return db.transaction(async (tx) => {
    if (await hasAdministrator(tx)) throw new Refused("administration.not-first");
    const roles: Role[] = ["administrator"];
    const invitation = await insertInvitation(tx, { email: null, printedName: null, roles, createdBy: null });
    await record(tx, null, "administrator.link-made", { objectKind: "invitation", objectId: invitation.id });
    return invitation;
  });
}

/** Whom the code invites; null for what the person still has to say. Refuses `invitation.invalid`, `.used`, `.expired`. */
export async function readInvitation(
  db: Db,
  code: string,
): Promise<{ email: string | null; printedName: string | null; roles: Role[] }> {
  const { email, printedName, roles } = await usableInvitation(db, code);
  return { email, printedName, roles };
}

export type AcceptInvitationInput = {
  code: string;
  /** asked for only when the invitation does not name them */
  email?: string;
  printedName?: string;
  /** by the sign-in library */
  passwordHash: string;
};

/** Uses the code up and makes the account with the invited roles. */
export function acceptInvitation(db: Db, input: AcceptInvitationInput): Promise<{ personId: string; email: string }> {
  return db.transaction(async (tx) => {
    const invitation = await usableInvitation(tx, input.code);
    if (invitation.createdBy === null && (await hasAdministrator(tx))) throw new Refused("administration.not-first");
    await tx.update(invitations).set({ usedAt: new Date() }).where(eq(invitations.id, invitation.id));
    const { personId, email } = await enrolPerson(tx, null, {
      email: invitation.email ?? input.email ?? "",
      printedName: invitation.printedName ?? input.printedName ?? "",
      roles: invitation.roles,
      passwordHash: input.passwordHash,
    });
    return { personId, email };
  });
}

export type EnrolPersonInput = {
  email: string;
  printedName: string;
  roles: Role[];
  /** null: an account without a password, which nobody can sign in to until one is set by mail */
  passwordHash: string | null;
};

/** Makes an account, its roles and the event. For `acceptInvitation` and for commands that set up the demo: no route calls it. */
export function enrolPerson(
  db: Db,
  actor: Actor | null,
  input: EnrolPersonInput,
): Promise<{ personId: string; email: string }> {
  return db.transaction(async (tx) => {
    const { email, printedName } = checkPerson(input);
    const personId = newId();
    const now = new Date();
    const written = await tx
      .insert(user)
      .values({ id: personId, name: printedName, email, emailVerified: true, createdAt: now, updatedAt: now })
      .onConflictDoNothing({ target: user.email })
      .returning({ id: user.id });
    if (written.length === 0) throw new Refused("person.email-taken", { field: "email" });
    if (input.passwordHash !== null) {
      await tx.insert(account).values({
        id: newId(),
        accountId: personId,
        providerId: "credential",
        userId: personId,
        password: input.passwordHash,
        createdAt: now,
        updatedAt: now,
      });
    }
    const roles = [...new Set(input.roles)];
    if (roles.length > 0) {
      await tx
        .insert(personRoles)
        .values(roles.map((role) => ({ personId, role, grantedAt: now, grantedBy: actor?.id ?? null })));
    }
    await record(tx, actor ?? { id: personId, printedName }, "person.joined", {
      objectKind: "person",
      objectId: personId,
      detail: { printedName, email, roles },
    });
    return { personId, email };
  });
}

type Usable = { id: string; email: string | null; printedName: string | null; roles: Role[]; createdBy: string | null };

/** Locks the invitation: of two who use one code at once, the second finds it used. */
async function usableInvitation(db: Db, code: string): Promise<Usable> {
  const [found] = await db
    .select({
      id: invitations.id,
      email: invitations.email,
      printedName: invitations.printedName,
      roles: invitations.roles,
      createdBy: invitations.createdBy,
      expiresAt: invitations.expiresAt,
      usedAt: invitations.usedAt,
    })
    .from(invitations)
    .where(eq(invitations.codeHash, hashOf(code)))
    .for("update");
  if (found === undefined) throw new Refused("invitation.invalid");
  if (found.usedAt !== null) throw new Refused("invitation.used");
  if (found.expiresAt.getTime() <= Date.now()) throw new Refused("invitation.expired");
  const { id, email, printedName, createdBy } = found;
  return { id, email, printedName, createdBy, roles: found.roles.filter(isRole) };
}

type InvitationToInsert = {
  email: string | null;
  printedName: string | null;
  roles: Role[];
  createdBy: string | null;
};

async function insertInvitation(tx: Db, invitation: InvitationToInsert): Promise<Invitation> {
  const id = newId();
  const code = randomBytes(24).toString("base64url");
  const now = Date.now();
  const expiresAt = new Date(now + VALID_MS);
  await tx
    .insert(invitations)
    .values({ ...invitation, id, codeHash: hashOf(code), createdAt: new Date(now), expiresAt });
  return { id, code, expiresAt };
}

async function demandFreeEmail(tx: Db, email: string): Promise<void> {
  const [taken] = await tx.select({ id: user.id }).from(user).where(eq(user.email, email));
  if (taken !== undefined) throw new Refused("person.email-taken", { field: "email" });
}

const LONGEST_NAME = 120;
const LONGEST_EMAIL = 254;

function checkPerson(input: { email: string; printedName: string }): { email: string; printedName: string } {
  const email = input.email.trim().toLowerCase();
  const printedName = input.printedName.trim().replace(/\s+/g, " ");
  if (email.length > LONGEST_EMAIL || !/^[^\s@]+@[^\s@]+$/.test(email))
    throw new Refused("person.invalid", { field: "email" });
  if (printedName === "" || printedName.length > LONGEST_NAME)
    throw new Refused("person.invalid", { field: "printedName" });
  return { email, printedName };
}

function hashOf(code: string): string {
  return createHash("sha256").update(code, "utf8").digest("hex");
}
