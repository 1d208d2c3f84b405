// npm run demo · npm start · npm run dev · npm run build. Plain Node, because nothing may be installed yet. Says in one sentence what stands in the way.
import { spawn, spawnSync } from "node:child_process";
import { createHash } from "node:crypto";
import { existsSync, mkdirSync, readdirSync, readFileSync, statfsSync, statSync, writeFileSync } from "node:fs";
import { createServer } from "node:net";
import { join } from "node:path";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL("../../../", import.meta.url));
const mode = process.argv[2] ?? "";
const SOURCES = ["app", "components", "editor", "chem", "db", "drizzle", "public"];
const SETTINGS = [
  "package-lock.json",
  "next.config.mjs",
  "postcss.config.mjs",
  "tailwind.config.ts",
  "tsconfig.json",
  "proxy.ts",
  "instrumentation.ts",
  "instrumentation-node.ts",
];
const MIB = 1024 * 1024;
const NEXT = join("node_modules", "next", "dist", "bin", "next");

process.chdir(root);
if (mode === "build") {
  demandNode();
  install();
  build();
} else if (mode === "demo" || mode === "start") {
  await launch(mode === "demo");
} else if (mode === "dev") {
  await develop();
} else {
  stop(`Say "demo", "start", "dev" or "build".`);
}

/** The development server, on a demo laboratory of its own unless the environment says otherwise. */
async function develop() {
  demandNode();
  const port = readPort();
  await demandPort(port);
  install();
  const isOwn = process.env.COUNTERLEAF_SECRET !== undefined;
  const environment = isOwn
    ? process.env
    : { COUNTERLEAF_DEMO: "1", COUNTERLEAF_DATA: join(root, ".data", "dev"), ...process.env };
  const server = spawn(process.execPath, [NEXT, "dev", "--port", String(port)], {
    env: { ...environment, PORT: String(port), NEXT_TELEMETRY_DISABLED: "1" },
    stdio: "inherit",
  });
  for (const signal of ["SIGINT", "SIGTERM"]) process.on(signal, () => server.kill(signal));
  server.on("exit", (code) => process.exit(code ?? 0));
}

async function launch(demo) {
  demandNode();
  const port = readPort();
  await demandPort(port);
  demandRoom();
  install();
  build();
  const environment = {
    ...process.env,
    PORT: String(port),
    NODE_ENV: "production",
    NEXT_TELEMETRY_DISABLED: "1",
    // Our own code ends the process, after the database is closed.
    NEXT_MANUAL_SIG_HANDLE: "true",
    ...(demo
      ? { COUNTERLEAF_DEMO: "1", COUNTERLEAF_DATA: process.env.COUNTERLEAF_DATA ?? join(root, ".data", "demo") }
      : {}),
  };
  if (!demo) {
    const checked = tsx("app/_server/commands/check-settings.ts", environment);
    if (checked !== 0) process.exit(checked);
  }
  const server = spawn(process.execPath, [NEXT, "start", "--port", String(port)], {
    env: environment,
    stdio: ["ignore", "pipe", "inherit"],
  });
  // Next's own banner says less than ours; everything after it (the log) goes through.
  server.stdout.on("data", (bytes) => {
    const kept = bytes
      .toString()
      .split("\n")
      .filter((line) => line.startsWith("{"));
    if (kept.length > 0) process.stdout.write(`${kept.join("\n")}\n`);
  });
  for (const signal of ["SIGINT", "SIGTERM"]) process.on(signal, () => server.kill("SIGTERM"));
  server.on("exit", (code, signal) => process.exit(code ?? (signal === "SIGTERM" || signal === "SIGINT" ? 0 : 1)));
  if (await answers(port, server)) greet(demo, port);
}

function demandNode() {
  const [major = 0, minor = 0] = process.versions.node.split(".").map(Number);
  if (major !== 20 || minor < 9) {
    stop(
      `Counterleaf needs Node 20 (20.9 or later of that line); this is ${process.versions.node}. Install Node 20 and run the command again.`,
    );
  }
}

function readPort() {
  const text = process.env.PORT ?? "3000";
  const port = Number(text);
  if (!/^\d{1,5}$/.test(text) || port < 1 || port > 65535)
    stop(`PORT is "${text}", which is no port number: choose one from 1 to 65535.`);
  return port;
}

function demandPort(port) {
  return new Promise((done) => {
    const probe = createServer();
    probe.once("error", (fault) => {
      if (fault.code === "EADDRINUSE")
        stop(`Port ${port} is taken by another program: stop that one, or choose another with PORT=${port + 1}.`);
      if (fault.code === "EACCES") stop(`This user may not open port ${port}: choose one above 1023 with PORT.`);
      stop(`Port ${port} cannot be opened (${fault.code}): choose another with PORT.`);
    });
    probe.listen(port, () => probe.close(done));
  });
}

function demandRoom() {
  const { bavail, bsize } = statfsSync(root);
  const needed = existsSync(join(root, "node_modules")) ? 300 : 2000;
  if (bavail * bsize < needed * MIB) {
    stop(
      `The disk has ${Math.floor((bavail * bsize) / MIB)} MiB left and ${needed} MiB are needed: make room, then run the command again.`,
    );
  }
}

/** Installs from the lock file when that is newer than what was installed. */
function install() {
  const done = join(root, "node_modules", ".package-lock.json");
  if (existsSync(done) && installedFor() === lockHash()) return;
  if (existsSync(done) && installedFor() === null && statSync(done).mtimeMs >= statSync("package-lock.json").mtimeMs)
    return remember();
  console.log("Installing the packages of the lock file …");
  const run = spawnSync("npm", ["ci", "--no-audit", "--no-fund"], { stdio: ["ignore", "ignore", "inherit"] });
  if (run.status !== 0)
    stop("The packages could not be installed (npm's words are above). See to it, then run the command again.");
  remember();
}

function lockHash() {
  return createHash("sha256").update(readFileSync("package-lock.json")).digest("hex");
}

function installedFor() {
  const path = join("node_modules", ".counterleaf-lock");
  return existsSync(path) ? readFileSync(path, "utf8") : null;
}

function remember() {
  writeFileSync(join("node_modules", ".counterleaf-lock"), lockHash());
}

/** Builds when the build was made from other sources than these. */
function build() {
  const stamp = join(".next", "counterleaf-sources");
  const hash = sourcesHash();
  if (existsSync(join(".next", "BUILD_ID")) && existsSync(stamp) && readFileSync(stamp, "utf8") === hash) return;
  console.log("Building …");
  const run = spawnSync(process.execPath, [NEXT, "build"], {
    env: { ...process.env, NODE_ENV: "production", NEXT_TELEMETRY_DISABLED: "1" },
    encoding: "utf8",
    maxBuffer: 64 * MIB,
  });
  if (run.status !== 0) {
    process.stderr.write(run.stdout + run.stderr);
    stop("The build failed (its words are above).");
  }
  mkdirSync(".next", { recursive: true });
  writeFileSync(stamp, hash);
}

function sourcesHash() {
  const hash = createHash("sha256");
  const read = (path) => hash.update(`${path}\n`).update(readFileSync(path));
  const walk = (folder) => {
    for (const entry of readdirSync(folder, { withFileTypes: true }).sort((a, b) => (a.name < b.name ? -1 : 1))) {
      const path = `${folder}/${entry.name}`;
      if (entry.isDirectory()) walk(path);
      else read(path);
    }
  };
  for (const folder of SOURCES) if (existsSync(folder)) walk(folder);
  for (const file of SETTINGS) if (existsSync(file)) read(file);
  return hash.digest("hex");
}

/** Waits until the server answers; false when it ended first. */
async function answers(port, server) {
  let ended = false;
  server.once("exit", () => {
    ended = true;
  });
  while (!ended) {
    try {
      const answer = await fetch(`http://127.0.0.1:${port}/api/health`);
      if (answer.ok) return true;
    } catch {
      // Not listening yet.
    }
    await new Promise((done) => setTimeout(done, 100));
  }
  return false;
}

function greet(demo, port) {
  console.log(`\nCounterleaf answers at http://localhost:${port}   (Ctrl-C ends it and closes the database)\n`);
  if (!demo) return;
  const people = JSON.parse(readFileSync(join("db", "seed", "demo-people.json"), "utf8"));
  console.log("The demo laboratory and everything in it are invented. Its people:");
  for (const { printedName, email, password, roles } of people) {
    console.log(`  ${printedName.padEnd(14)} ${roles.join(", ").padEnd(14)} ${email.padEnd(26)} password: ${password}`);
  }
  console.log("");
}

function tsx(file, environment) {
  const run = spawnSync(process.execPath, ["--conditions=react-server", "--import", "tsx", file], {
    env: environment,
    stdio: "inherit",
  });
  return run.status ?? 1;
}

function stop(sentence) {
  console.error(sentence);
  process.exit(1);
}
