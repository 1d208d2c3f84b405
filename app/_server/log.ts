// One line of JSON for each thing worth knowing. No body, no cookie, no password and no key ever goes in here.
import "server-only";
import { type DestinationStream, type Logger, pino } from "pino";

const SECRET_FIELDS = [
  "password",
  "newPassword",
  "currentPassword",
  "secret",
  "token",
  "cookie",
  "authorization",
  "jws",
];

/** The log of this process. `COUNTERLEAF_LOG` sets the level; tests are silent. */
export const log: Logger = createLog(process.env.COUNTERLEAF_LOG ?? (process.env.VITEST ? "silent" : "info"));

export function createLog(level: string, destination?: DestinationStream): Logger {
  const options = {
    level,
    base: null,
    timestamp: pino.stdTimeFunctions.isoTime,
    redact: { paths: SECRET_FIELDS.flatMap((field) => [field, `*.${field}`, `*.*.${field}`]), censor: "[left out]" },
    serializers: { error: errorFields },
  };
  return destination === undefined ? pino(options) : pino(options, destination);
}

/** Name, message and place of a fault. What a driver adds (the query, its parameters) stays out: it may hold what people typed. */
function errorFields(error: unknown) {
  if (!(error instanceof Error)) return { name: "unknown", message: "something that is not an error was thrown" };
  const cause = error.cause instanceof Error ? { name: error.cause.name, code: codeOf(error.cause) } : undefined;
  // drizzle's own message repeats the statement with its parameters.
  const message = error.message.startsWith("Failed query") ? "a statement failed" : error.message;
  const stack = error.stack
    ?.split("\n")
    .filter((line) => line.trimStart().startsWith("at "))
    .slice(0, 12);
  return { name: error.name, message, code: codeOf(error), cause, stack };
}

function codeOf(error: Error): string | undefined {
  return "code" in error && typeof error.code === "string" ? error.code : undefined;
}
