// Says everything that is wrong with the settings, before a server is started with them.
import "server-only";
import { SettingsRefused, settings } from "../env.ts";

try {
  settings();
} catch (error) {
  if (!(error instanceof SettingsRefused)) throw error;
  process.stderr.write(`${error.message}\n`);
  process.exitCode = 1;
}
