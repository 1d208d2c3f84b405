// People, sign-in and rights. `user`, `session`, `account` and `verification` are written by the sign-in library through
// db/auth-store.ts; roles, memberships, failures and mail are written by our own verbs, with their events.
import { boolean, index, integer, pgTable, primaryKey, text, timestamp } from "drizzle-orm/pg-core";

const at = (name: string) => timestamp(name, { withTimezone: true, mode: "date" });

export const user = pgTable("user", {
  id: text("id").primaryKey(),
  name: text("name").notNull(),
  email: text("email").notNull().unique(),
  emailVerified: boolean("email_verified").notNull().default(false),
  image: text("image"),
  createdAt: at("created_at").notNull().defaultNow(),
  updatedAt: at("updated_at").notNull().defaultNow(),
  decimalSign: text("decimal_sign").notNull().default("."),
  timeZone: text("time_zone").notNull().default("UTC"),
  /** set when the person left; the row and its id stay for good */
  closedAt: at("closed_at"),
  /** set by a password reset that an administrator began; signing waits until a second person has confirmed */
  signingHeldAt: at("signing_held_at"),
  signingHeldBy: text("signing_held_by"),
});

export const session = pgTable(
  "session",
  {
    id: text("id").primaryKey(),
    token: text("token").notNull().unique(),
    userId: text("user_id")
      .notNull()
      .references(() => user.id),
    expiresAt: at("expires_at").notNull(),
    createdAt: at("created_at").notNull().defaultNow(),
    updatedAt: at("updated_at").notNull().defaultNow(),
    ipAddress: text("ip_address"),
    userAgent: text("user_agent"),
  },
  (t) => [index("session_user").on(t.userId)],
);

export const account = pgTable(
  "account",
  {
    id: text("id").primaryKey(),
    accountId: text("account_id").notNull(),
    providerId: text("provider_id").notNull(),
    userId: text("user_id")
      .notNull()
      .references(() => user.id),
    accessToken: text("access_token"),
    refreshToken: text("refresh_token"),
    idToken: text("id_token"),
    accessTokenExpiresAt: at("access_token_expires_at"),
    refreshTokenExpiresAt: at("refresh_token_expires_at"),
    scope: text("scope"),
    password: text("password"),
    createdAt: at("created_at").notNull().defaultNow(),
    updatedAt: at("updated_at").notNull().defaultNow(),
  },
  (t) => [index("account_user").on(t.userId)],
);

export const verification = pgTable(
  "verification",
  {
    id: text("id").primaryKey(),
    identifier: text("identifier").notNull(),
    value: text("value").notNull(),
    expiresAt: at("expires_at").notNull(),
    createdAt: at("created_at").notNull().defaultNow(),
    updatedAt: at("updated_at").notNull().defaultNow(),
  },
  (t) => [index("verification_identifier").on(t.identifier)],
);

/** The roles that a person holds now. What was held before stands in the events. */
export const personRoles = pgTable(
  "person_roles",
  {
    personId: text("person_id")
      .notNull()
      .references(() => user.id),
    role: text("role").notNull(),
    grantedAt: at("granted_at").notNull(),
    grantedBy: text("granted_by"),
  },
  (t) => [primaryKey({ columns: [t.personId, t.role] })],
);

/** One row a failure at either door (sign-in, signing), counted together. */
export const failures = pgTable(
  "failures",
  {
    id: text("id").primaryKey(),
    /** lower-case e-mail as typed: an unknown name is counted like a known one */
    account: text("account").notNull(),
    door: text("door").notNull(),
    at: at("at").notNull(),
  },
  (t) => [index("failures_account").on(t.account, t.at)],
);

/** One row an account that ever failed: its row lock makes attempts queue, `times` makes the next lock longer. */
export const locks = pgTable("locks", {
  account: text("account").primaryKey(),
  until: at("until").notNull(),
  times: integer("times").notNull().default(0),
});

/** Mail that was handed to the post, kept so that an administrator of the demo can read it. */
export const outbox = pgTable(
  "outbox",
  {
    id: text("id").primaryKey(),
    to: text("to").notNull(),
    subject: text("subject").notNull(),
    text: text("text").notNull(),
    createdAt: at("created_at").notNull(),
    sentAt: at("sent_at"),
  },
  (t) => [index("outbox_created").on(t.createdAt)],
);

/** One-time invitations and the first administrator's link: only the hash of the code is kept. */
export const invitations = pgTable("invitations", {
  id: text("id").primaryKey(),
  codeHash: text("code_hash").notNull().unique(),
  email: text("email"),
  printedName: text("printed_name"),
  roles: text("roles").array().notNull(),
  createdAt: at("created_at").notNull(),
  createdBy: text("created_by"),
  expiresAt: at("expires_at").notNull(),
  usedAt: at("used_at"),
});

export const signingKeys = pgTable("signing_keys", {
  kid: text("kid").primaryKey(),
  publicJwk: text("public_jwk").notNull(),
  /** the private key, encrypted under the secret from the environment; opened only in app/_server/seal.ts */
  sealedPrivate: text("sealed_private").notNull(),
  createdAt: at("created_at").notNull(),
  retiredAt: at("retired_at"),
});

export const settings = pgTable("settings", { key: text("key").primaryKey(), value: text("value").notNull() });

export const rateCounters = pgTable(
  "rate_counters",
  {
    key: text("key").notNull(),
    windowStart: at("window_start").notNull(),
    count: integer("count").notNull(),
  },
  (t) => [primaryKey({ columns: [t.key, t.windowStart] })],
);
