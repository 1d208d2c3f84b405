// A laboratory of its own for each worker: the production build on a free port with a fresh data folder. It can be killed
// and started again on the same folder.
import { type ChildProcess, spawn } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync } from "node:fs";
import { createServer } from "node:net";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { z } from "zod";

const root = fileURLToPath(new URL("../../../", import.meta.url));
const person = z.object({
  printedName: z.string(),
  email: z.string(),
  password: z.string(),
  roles: z.array(z.string()),
});
export type DemoPerson = z.infer<typeof person>;

export type Laboratory = {
  url: string;
  person: (printedName: string) => DemoPerson;
  /** SIGKILL: nothing is closed, nothing is flushed. */
  kill: () => Promise<void>;
  start: () => Promise<void>;
  /** SIGTERM, as Ctrl-C does; resolves with the exit code. */
  stop: () => Promise<number | null>;
  remove: () => Promise<void>;
};

export async function openLaboratory(): Promise<Laboratory> {
  const port = await freePort();
  const folder = mkdtempSync(join(tmpdir(), "counterleaf-e2e-"));
  const people = z.array(person).parse(JSON.parse(readFileSync(join(root, "db/seed/demo-people.json"), "utf8")));
  const url = `http://localhost:${port}`;
  let server: ChildProcess | null = null;

  const start = async (): Promise<void> => {
    const child = spawn(process.execPath, ["node_modules/next/dist/bin/next", "start", "--port", String(port)], {
      cwd: root,
      env: {
        ...process.env,
        NODE_ENV: "production",
        NEXT_TELEMETRY_DISABLED: "1",
        NEXT_MANUAL_SIG_HANDLE: "true",
        PORT: String(port),
        COUNTERLEAF_DEMO: "1",
        COUNTERLEAF_DATA: folder,
      },
      stdio: ["ignore", "ignore", "inherit"],
    });
    server = child;
    await healthy(url, child);
  };
  const end = async (signal: "SIGKILL" | "SIGTERM"): Promise<number | null> => {
    const child = server;
    if (child === null || child.exitCode !== null || child.signalCode !== null) return child?.exitCode ?? null;
    const ended = new Promise<number | null>((done) => child.once("exit", (code) => done(code)));
    child.kill(signal);
    return ended;
  };
  await start();
  return {
    url,
    person: (printedName) => {
      const found = people.find((each) => each.printedName === printedName);
      if (found === undefined) throw new Error(`Nobody in the demo laboratory is called ${printedName}.`);
      return found;
    },
    kill: async () => {
      await end("SIGKILL");
    },
    start,
    stop: () => end("SIGTERM"),
    remove: async () => {
      await end("SIGTERM");
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

async function healthy(url: string, child: ChildProcess): Promise<void> {
  const giveUp = Date.now() + 90_000;
  while (Date.now() < giveUp) {
    if (child.exitCode !== null) throw new Error(`The server ended with code ${child.exitCode} before it answered.`);
    const answered = await fetch(`${url}/api/health`).then(
      (response) => response.ok,
      () => false,
    );
    if (answered) return;
    await new Promise((done) => setTimeout(done, 100));
  }
  throw new Error("The server did not answer within 90 s.");
}

export function freePort(): Promise<number> {
  return new Promise((done, failed) => {
    const probe = createServer();
    probe.once("error", failed);
    probe.listen(0, () => {
      const address = probe.address();
      probe.close(() =>
        typeof address === "object" && address !== null ? done(address.port) : failed(new Error("No port.")),
      );
    });
  });
}
