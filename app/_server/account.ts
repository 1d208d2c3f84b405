// One's own password, and how others come to one: by a link in the mail, never by somebody who knows or chooses it (SGN-07).
import "server-only";
import { isAPIError } from "better-auth/api";
import { guardPassword } from "../../db/attempts.ts";
import type { Db } from "../../db/client.ts";
import { Refused } from "../../db/errors.ts";
import { acceptInvitation, type InvitePersonInput, invitePerson, readInvitation } from "../../db/invitations.ts";
import { ringPerson } from "../../db/live.ts";
import { postMail } from "../../db/mail.ts";
import { beginReset, maySignIn } from "../../db/people.ts";
import type { Actor } from "../../db/policy.ts";
import { endOtherSessions, recordSignInEvent } from "../../db/sessions.ts";
import { auth } from "./auth.ts";
import { settings } from "./env.ts";
import { passwordFault, passwordSentence } from "./passwords.ts";
import { demandRate } from "./rate.ts";
import { BadInput } from "./request.ts";
import { hashPassword } from "./secrets.ts";
import { accountOf, isPasswordOf, type SignedIn, signIn } from "./sign-in.ts";

/** Changes one's own password: the present one is asked for, every other session ends. */
export async function changePassword(
  db: Db,
  actor: Actor,
  input: { currentPassword: string; newPassword: string },
): Promise<void> {
  demandGoodPassword(input.newPassword, [actor.printedName, actor.email]);
  await demandPresentPassword(db, actor, input.currentPassword);
  const { internalAdapter } = await (await auth()).$context;
  await internalAdapter.updatePassword(actor.id, await hashPassword(input.newPassword));
  await recordSignInEvent(db, actor.id, "password.changed");
  await endOtherSessions(db, actor);
}

/** Counted like every other wrong password, but said at the field. */
async function demandPresentPassword(db: Db, actor: Actor, password: string): Promise<void> {
  try {
    await guardPassword(db, { account: accountOf(actor.email), door: "sign-in", actor }, () =>
      isPasswordOf(actor.id, password),
    );
  } catch (error) {
    if (!(error instanceof Refused) || error.code !== "account.wrong-password") throw error;
    throw new BadInput({ currentPassword: "This is not the password that you have now." });
  }
}

const RESET_ANSWER_MS = 400;

/** Sends a link to set a new password, when there is such an account. The answer and its time are the same when there is none. */
export async function requestReset(db: Db, input: { email: string }): Promise<void> {
  const answered = new Promise((done) => setTimeout(done, RESET_ANSWER_MS));
  const account = accountOf(input.email);
  await demandRate(db, `reset:${account}`, 5, 3_600_000);
  if (await maySignIn(db, account)) {
    await sendLink(account);
    const found = await (await (await auth()).$context).internalAdapter.findUserByEmail(account);
    if (found !== null) await recordSignInEvent(db, found.user.id, "reset.requested");
  }
  await answered;
}

/** Sets a new password with the code of a link, once; every session of the person ends. Refuses `invitation.invalid`. */
export async function resetPassword(db: Db, input: { token: string; newPassword: string }): Promise<void> {
  const { api, $context } = await auth();
  const { internalAdapter } = await $context;
  const link = await internalAdapter.findVerificationValue(`reset-password:${input.token}`);
  const person = link === null || link.expiresAt < new Date() ? null : await internalAdapter.findUserById(link.value);
  if (person === null || !(await maySignIn(db, person.email))) throw new Refused("invitation.invalid");
  demandGoodPassword(input.newPassword, [person.name, person.email]);
  try {
    await api.resetPassword({ body: { token: input.token, newPassword: input.newPassword } });
  } catch (error) {
    if (isAPIError(error) && error.statusCode < 500) throw new Refused("invitation.invalid");
    throw error;
  }
  await recordSignInEvent(db, person.id, "password.reset");
  await ringPerson(db, person.id);
}

/** Invites a person: the link goes to their mail, and to nobody else. */
export async function invite(db: Db, actor: Actor, input: InvitePersonInput): Promise<void> {
  await db.transaction(async (tx) => {
    const { code } = await invitePerson(tx, actor, input);
    await postMail(tx, {
      to: accountOf(input.email),
      subject: "You are invited to Counterleaf",
      text: [
        `${input.printedName.trim()},`,
        "",
        `${actor.printedName} invites you to the laboratory's notebook. Choose your password here; the link works once, for three days:`,
        "",
        joinLink(code),
      ].join("\n"),
    });
  });
}

/** The address at which a one-time code is used. */
export function joinLink(code: string): string {
  return `${settings().url}/join?code=${encodeURIComponent(code)}`;
}

export type JoinInput = { code: string; email?: string; printedName?: string; password: string };

/** Uses a one-time code up, makes the account with the password that its owner chose, and signs in. */
export async function join(db: Db, asked: Headers, input: JoinInput): Promise<SignedIn> {
  const invited = await readInvitation(db, input.code);
  demandGoodPassword(
    input.password,
    [invited.printedName ?? input.printedName ?? "", invited.email ?? input.email ?? ""],
    "password",
  );
  const { email } = await acceptInvitation(db, {
    code: input.code,
    email: input.email,
    printedName: input.printedName,
    passwordHash: await hashPassword(input.password),
  });
  return signIn(db, asked, { email, password: input.password });
}

/** Begins a reset for somebody: signing is held, and the link goes to their mail, which no administrator is shown. */
export async function beginResetFor(db: Db, actor: Actor, input: { personId: string; reason: string }): Promise<void> {
  const { email } = await beginReset(db, actor, input);
  await sendLink(email);
}

async function sendLink(email: string): Promise<void> {
  await (await auth()).api.requestPasswordReset({ body: { email } });
}

function demandGoodPassword(password: string, own: string[], field = "newPassword"): void {
  const fault = passwordFault(password, own);
  if (fault !== null) throw new BadInput({ [field]: passwordSentence(fault) });
}
