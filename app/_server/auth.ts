// The sign-in library, told what to leave alone: no sign-up, no plain link to verify a password, no refresh of its own (the end
// of an idle session is ours, actor.ts), no rate limit of its own (the failure counter of sign-in and signing is one, sign-in.ts).
import "server-only";
import { betterAuth } from "better-auth";
import { drizzleAdapter } from "better-auth/adapters/drizzle";
import { nextCookies } from "better-auth/next-js";
import { authTables } from "../../db/auth-store.ts";
import type { Db } from "../../db/client.ts";
import { newId } from "../../db/ids.ts";
import { database } from "./database.ts";
import { type Settings, settings } from "./env.ts";
import { sendResetLink } from "./mail.ts";
import { PASSWORD_LEAST, PASSWORD_MOST } from "./passwords.ts";
import { clientAddress } from "./request.ts";

type Auth = ReturnType<typeof make>;

declare global {
  var counterleafAuth: Auth | undefined;
}

/** The one of this process; made at the first call, because it wants the opened database. */
export async function auth(): Promise<Auth> {
  const db = await database();
  globalThis.counterleafAuth ??= make(db, settings());
  return globalThis.counterleafAuth;
}

const RESET_LINK_SECONDS = 3600;
const ADDRESS_HEADER = "x-counterleaf-address";

function make(db: Db, set: Settings) {
  return betterAuth({
    appName: "Counterleaf",
    baseURL: set.url,
    basePath: "/api/auth",
    secret: set.secret,
    database: drizzleAdapter(db, { provider: "pg", schema: authTables }),
    emailAndPassword: {
      enabled: true,
      disableSignUp: true,
      minPasswordLength: PASSWORD_LEAST,
      maxPasswordLength: PASSWORD_MOST,
      resetPasswordTokenExpiresIn: RESET_LINK_SECONDS,
      revokeSessionsOnPasswordReset: true,
      sendResetPassword: ({ user, token }) => sendResetLink(db, set, user, token),
    },
    // expiresAt is the absolute end; updatedAt says when the person was last there.
    session: {
      expiresIn: set.sessionAbsoluteHours * 3600,
      disableSessionRefresh: true,
      cookieCache: { enabled: false },
    },
    // Only a hash of a reset link's code is kept.
    verification: { storeIdentifier: "hashed" },
    trustedOrigins: set.origins,
    rateLimit: { enabled: false },
    telemetry: { enabled: false },
    logger: { disabled: true },
    advanced: {
      cookiePrefix: "counterleaf",
      useSecureCookies: set.url.startsWith("https:"),
      // Lax, not strict: a link in a mail shall open the page that it names. Changes are held off by their origin (request.ts).
      defaultCookieAttributes: { httpOnly: true, sameSite: "lax", path: "/" },
      ipAddress: { ipAddressHeaders: [ADDRESS_HEADER] },
      database: { generateId: () => newId() },
    },
    plugins: [nextCookies()],
  });
}

/** Of a request's headers only what the library needs, and the address that we believe. */
export function sessionHeaders(asked: Headers): Headers {
  const passed = new Headers();
  for (const name of ["cookie", "user-agent"]) {
    const value = asked.get(name);
    if (value !== null) passed.set(name, value);
  }
  const address = clientAddress(asked, settings().proxyHops);
  if (address !== null) passed.set(ADDRESS_HEADER, address);
  return passed;
}
