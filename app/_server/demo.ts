// The invented laboratory of the demo, set up once with the means that only this room has: passwords' hashes and the seal.
import "server-only";
import type { Db } from "../../db/client.ts";
import { seedDemo } from "../../db/seed/demo.ts";
import { log } from "./log.ts";
import { hashPassword } from "./secrets.ts";
import { signingSeal } from "./signing-key.ts";

export async function seedDemoOnce(db: Db): Promise<void> {
  const began = performance.now();
  const done = await seedDemo(db, { hashPassword, seal: await signingSeal() });
  if (done === "seeded")
    log.info({ elapsedMs: Math.round(performance.now() - began) }, "the demo laboratory is set up");
}
