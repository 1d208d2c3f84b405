// Sets up the demo laboratory in the store, once; what people did since stays. The server does the same at its start.
import "server-only";
import { database } from "../database.ts";
import { seedDemoOnce } from "../demo.ts";
import { settings } from "../env.ts";
import { closeAll } from "../shutdown.ts";

try {
  if (!settings().demo) throw new Error("Only the demo is seeded: set COUNTERLEAF_DEMO=1.");
  await seedDemoOnce(await database());
  process.stdout.write("The demo laboratory is set up.\n");
} catch (error) {
  process.stderr.write(`${error instanceof Error ? error.message : "It could not be done."}\n`);
  process.exitCode = 1;
} finally {
  await closeAll();
}
