// The environment, read and checked once. Whatever is wrong is said at once, all of it.
import "server-only";
import { randomBytes } from "node:crypto";
import { mkdirSync, readFileSync, writeFileSync } from "node:fs";
import { join, resolve } from "node:path";
import { z } from "zod";

export type Settings = {
  demo: boolean;
  secret: string;
  /** public address without a path, e.g. https://notebook.example */
  url: string;
  /** origins that a change may come from */
  origins: string[];
  /** what db/client.ts opens: "file:<folder>" or "postgres://…" */
  databaseUrl: string;
  /** null: mail goes to the outbox only */
  smtpUrl: string | null;
  mailFrom: string;
  /** how many proxies of our own stand in front and append to X-Forwarded-For */
  proxyHops: number;
  sessionIdleMinutes: number;
  sessionAbsoluteHours: number;
};

export class SettingsRefused extends Error {
  override name = "SettingsRefused";
  constructor(readonly problems: string[]) {
    super(`The settings are not usable:\n${problems.map((problem) => `  - ${problem}`).join("\n")}`);
  }
}

const whole = (name: string, fallback: number, least: number, most: number) =>
  z
    .string()
    .default(String(fallback))
    .refine((text) => /^\d{1,6}$/.test(text) && Number(text) >= least && Number(text) <= most, {
      error: `${name} is a whole number from ${least} to ${most}.`,
    })
    .transform(Number);

const environment = z
  .object({
    COUNTERLEAF_DEMO: z
      .enum(["0", "1"], { error: "COUNTERLEAF_DEMO is 1 (the invented demo laboratory) or 0." })
      .default("0"),
    COUNTERLEAF_SECRET: z
      .string()
      .min(32, {
        error:
          "COUNTERLEAF_SECRET needs at least 32 characters, made by chance, and kept: the signing key is closed with it.",
      })
      .max(512, { error: "COUNTERLEAF_SECRET has at most 512 characters." })
      .optional(),
    COUNTERLEAF_URL: z
      .string()
      .refine(isAddress, {
        error: "COUNTERLEAF_URL is the public address, https://host or http://host:port, with nothing after it.",
      })
      .optional(),
    COUNTERLEAF_DATA: z.string().min(1, { error: "COUNTERLEAF_DATA is a folder." }).optional(),
    DATABASE_URL: z
      .string()
      .regex(/^postgres(ql)?:\/\//, {
        error: "DATABASE_URL begins with postgres:// (the embedded database is chosen by COUNTERLEAF_DATA).",
      })
      .optional(),
    SMTP_URL: z
      .string()
      .regex(/^smtps?:\/\//, { error: "SMTP_URL begins with smtp:// or smtps://." })
      .optional(),
    MAIL_FROM: z
      .string()
      .regex(/^[^\r\n]*@[^\r\n]*$/, { error: "MAIL_FROM is the sender's address." })
      .optional(),
    PORT: z
      .string()
      .regex(/^\d{1,5}$/, { error: "PORT is a number." })
      .default("3000"),
    PROXY_HOPS: whole("PROXY_HOPS", 0, 0, 10),
    COUNTERLEAF_SESSION_IDLE_MINUTES: whole("COUNTERLEAF_SESSION_IDLE_MINUTES", 60, 1, 1440),
    COUNTERLEAF_SESSION_HOURS: whole("COUNTERLEAF_SESSION_HOURS", 12, 1, 168),
  })
  .superRefine((given, context) => {
    const say = (message: string) => context.addIssue({ code: "custom", message });
    const demo = given.COUNTERLEAF_DEMO === "1";
    if (!demo && given.COUNTERLEAF_SECRET === undefined) say("COUNTERLEAF_SECRET is missing.");
    if (!demo && given.COUNTERLEAF_URL === undefined) say("COUNTERLEAF_URL, the public address, is missing.");
    if (!demo && given.COUNTERLEAF_DATA === undefined && given.DATABASE_URL === undefined) {
      say("COUNTERLEAF_DATA (a folder for the embedded database) or DATABASE_URL (a PostgreSQL server) is missing.");
    }
    if (given.COUNTERLEAF_DATA !== undefined && given.DATABASE_URL !== undefined) {
      say("COUNTERLEAF_DATA and DATABASE_URL are both set: choose one store.");
    }
    if (given.SMTP_URL !== undefined && given.MAIL_FROM === undefined)
      say("MAIL_FROM is missing: SMTP_URL is set, and mail needs a sender.");
    if (demo && given.DATABASE_URL !== undefined && given.COUNTERLEAF_SECRET === undefined) {
      say("COUNTERLEAF_SECRET is missing: a demo on a PostgreSQL server has no folder to keep one in.");
    }
  });

/** Checks a set of variables. Refuses with every fault in it; in the demo a secret is made once and kept in the data folder. */
export function readSettings(source: Record<string, string | undefined>): Settings {
  const given = Object.fromEntries(Object.entries(source).filter(([, value]) => value !== undefined && value !== ""));
  const parsed = environment.safeParse(given);
  if (!parsed.success) throw new SettingsRefused(parsed.error.issues.map((issue) => issue.message));
  const read = parsed.data;
  const demo = read.COUNTERLEAF_DEMO === "1";
  const folder = resolve(read.COUNTERLEAF_DATA ?? ".data/demo");
  const url = (read.COUNTERLEAF_URL ?? `http://localhost:${read.PORT}`).replace(/\/$/, "");
  return {
    demo,
    secret: read.COUNTERLEAF_SECRET ?? keptSecret(folder),
    url,
    origins: demo ? [...new Set([url, `http://localhost:${read.PORT}`, `http://127.0.0.1:${read.PORT}`])] : [url],
    databaseUrl: read.DATABASE_URL ?? `file:${join(folder, "store")}`,
    smtpUrl: read.SMTP_URL ?? null,
    mailFrom: read.MAIL_FROM ?? "counterleaf@demo.invalid",
    proxyHops: read.PROXY_HOPS,
    sessionIdleMinutes: read.COUNTERLEAF_SESSION_IDLE_MINUTES,
    sessionAbsoluteHours: read.COUNTERLEAF_SESSION_HOURS,
  };
}

/** The settings of this process. */
export function settings(): Settings {
  globalThis.counterleafSettings ??= readSettings(process.env);
  return globalThis.counterleafSettings;
}

declare global {
  // A bundler loads a module more than once; the process has one environment.
  var counterleafSettings: Settings | undefined;
}

function isAddress(text: string): boolean {
  if (!URL.canParse(text)) return false;
  const { protocol, pathname, search, hash, username, password } = new URL(text);
  return ["http:", "https:"].includes(protocol) && pathname === "/" && search + hash + username + password === "";
}

function keptSecret(folder: string): string {
  const path = join(folder, "secret");
  mkdirSync(folder, { recursive: true });
  try {
    // "wx": two processes that start at once make one secret, not two.
    writeFileSync(path, randomBytes(48).toString("base64url"), { mode: 0o600, flag: "wx" });
  } catch (error) {
    if (!(error instanceof Error && "code" in error && error.code === "EEXIST")) throw error;
  }
  return readFileSync(path, "utf8").trim();
}
