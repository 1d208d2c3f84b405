// In and out. The session is the sign-in library's; the counting, the events and the one answer for every failure are ours.
import "server-only";
import { isAPIError } from "better-auth/api";
import { guardPassword } from "../../db/attempts.ts";
import type { Db } from "../../db/client.ts";
import { ringPerson } from "../../db/live.ts";
import { actorOf } from "../../db/people.ts";
import type { Actor } from "../../db/policy.ts";
import { recordSignInEvent } from "../../db/sessions.ts";
import { auth, sessionHeaders } from "./auth.ts";
import { settings } from "./env.ts";
import { demandRate } from "./rate.ts";
import { clientAddress } from "./request.ts";
import { matchesPassword } from "./secrets.ts";

export type SignInInput = { email: string; password: string };
/** `cookies` are Set-Cookie lines for a route; in an action the library has set them already. */
export type SignedIn = { person: { id: string; printedName: string }; cookies: string[] };

const SIGN_INS_A_MINUTE = 60;

/** Signs in, or refuses `account.wrong-password`, the same for an unknown account, or `account.locked`. */
export async function signIn(db: Db, asked: Headers, { email, password }: SignInInput): Promise<SignedIn> {
  const address = clientAddress(asked, settings().proxyHops);
  if (address !== null) await demandRate(db, `sign-in:${address}`, SIGN_INS_A_MINUTE, 60_000);
  const account = accountOf(email);
  const opened: { session?: SignedIn } = {};
  await guardPassword(db, { account, door: "sign-in" }, async () => {
    opened.session = await trySignIn(db, asked, account, password);
    return opened.session !== undefined;
  });
  if (opened.session === undefined) throw new Error("The guard let somebody in who had no session.");
  await recordSignInEvent(db, opened.session.person.id, "sign-in.succeeded");
  return opened.session;
}

/** Ends this session, here and in every stream of it. */
export async function signOut(db: Db, asked: Headers, actor: Actor): Promise<{ cookies: string[] }> {
  const { headers } = await (await auth()).api.signOut({ headers: sessionHeaders(asked), returnHeaders: true });
  await recordSignInEvent(db, actor.id, "session.closed");
  await ringPerson(db, actor.id);
  return { cookies: headers.getSetCookie() };
}

/** Asks a signed-in person for their password once more (SGN-02). Refuses `signing.wrong-password` or `signing.locked`. */
export async function demandPassword(db: Db, actor: Actor, password: string): Promise<void> {
  await guardPassword(db, { account: accountOf(actor.email), door: "signing", actor }, () =>
    isPasswordOf(actor.id, password),
  );
}

/** The spelling that accounts are counted and found by. */
export function accountOf(email: string): string {
  return email.trim().toLowerCase();
}

async function trySignIn(db: Db, asked: Headers, email: string, password: string): Promise<SignedIn | undefined> {
  const { api, $context } = await auth();
  try {
    const { headers, response } = await api.signInEmail({
      body: { email, password },
      headers: sessionHeaders(asked),
      returnHeaders: true,
    });
    const session = await (await $context).internalAdapter.findSession(response.token);
    const actor =
      session === null ? null : await actorOf(db, { personId: session.user.id, sessionId: session.session.id });
    if (actor !== null)
      return { person: { id: actor.id, printedName: actor.printedName }, cookies: headers.getSetCookie() };
    // The account is closed: the password was right, and nothing may tell.
    if (session !== null) await (await $context).internalAdapter.deleteSession(session.session.token);
    return undefined;
  } catch (error) {
    if (isAPIError(error) && [400, 401].includes(error.statusCode)) return undefined;
    throw error;
  }
}

/** Whether this is the person's password. Counts nothing: callers ask it behind the guard. */
export async function isPasswordOf(personId: string, password: string): Promise<boolean> {
  const accounts = await (await (await auth()).$context).internalAdapter.findAccounts(personId);
  const kept = accounts.find((account) => account.providerId === "credential")?.password;
  return typeof kept === "string" && (await matchesPassword(kept, password));
}
