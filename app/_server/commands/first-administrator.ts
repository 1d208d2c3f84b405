// Prints the one-time link with which the first administrator makes their account. Refused when there is one.
import "server-only";
import { Refused } from "../../../db/errors.ts";
import { firstAdministrator } from "../../../db/invitations.ts";
import { joinLink } from "../account.ts";
import { database } from "../database.ts";
import { closeAll } from "../shutdown.ts";

try {
  const { code, expiresAt } = await firstAdministrator(await database());
  process.stdout.write(
    `Open this address once, before ${expiresAt.toISOString()}, and choose a password:\n\n  ${joinLink(code)}\n\n`,
  );
} catch (error) {
  const isThere = error instanceof Refused && error.code === "administration.not-first";
  process.stderr.write(
    `${isThere ? "There is an administrator already: they invite others in Administration." : error instanceof Error ? error.message : "It could not be done."}\n`,
  );
  process.exitCode = 1;
} finally {
  await closeAll();
}
