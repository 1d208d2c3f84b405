// npm test: installs what is missing, then types, lint, arrows, unit, database, route and browser tests, and the sums.
// Plain Node, because nothing may be installed yet. `npm test -- unit` runs the named stages only.
import { spawn, spawnSync } from "node:child_process";
import { existsSync, mkdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL("../", import.meta.url));
process.chdir(root);
const wanted = process.argv.slice(2);
const sums = { passed: 0, failed: 0 };
const lines = [];
const isRoot = process.getuid?.() === 0;
const bin = (name) => `node_modules/.bin/${name}`;

mkdirSync(".tmp", { recursive: true });
rmSync(".tmp/sums.json", { force: true });
// Installs from the lock file and builds when the build is older than the sources.
one("install and build", process.execPath, ["app/_server/commands/launch.mjs", "build"], { always: true });
one("types", bin("next"), ["typegen"], { quiet: true, uncounted: true });
one("types", bin("tsc"), ["--noEmit", "-p", "."]);
one("lint", bin("biome"), ["ci", "."]);
one("arrows", "npm", ["run", "--silent", "arrows"]);
vitest("unit", ["--exclude", "tests/db/**", "--exclude", "tests/app/**"]);
vitest("database", ["tests/db", "tests/app"]);
if (runs("postgresql")) await onPostgres();
if (runs("browser")) browser();
finish();

function runs(stage) {
  return wanted.length === 0 || wanted.includes(stage);
}

/** One command that counts as one test. */
function one(stage, command, args, { always = false, quiet = false, uncounted = false } = {}) {
  if (!always && !runs(stage)) return true;
  console.log(`\n── ${stage}`);
  const run = spawnSync(command, args, {
    stdio: quiet ? ["ignore", "ignore", "inherit"] : "inherit",
    env: { ...process.env, FORCE_COLOR: "0" },
  });
  const fits = run.status === 0;
  if (!uncounted) count(stage, fits ? 1 : 0, fits ? 0 : 1);
  return fits;
}

function vitest(stage, args, environment = {}) {
  if (!runs(stage)) return;
  console.log(`\n── ${stage}`);
  const report = `.tmp/vitest-${stage}.json`;
  rmSync(report, { force: true });
  const run = spawnSync(
    bin("vitest"),
    ["run", "--reporter=default", "--reporter=json", `--outputFile.json=${report}`, ...args],
    {
      stdio: "inherit",
      env: { ...process.env, ...environment, FORCE_COLOR: "0" },
    },
  );
  if (!existsSync(report)) return count(stage, 0, 1);
  const { numPassedTests, numFailedTests, numFailedTestSuites, numTotalTests } = JSON.parse(
    readFileSync(report, "utf8"),
  );
  // A file that could not be loaded has no tests to count, and a run without tests has shown nothing.
  const broken = run.status !== 0 && numFailedTests === 0 ? Math.max(1, numFailedTestSuites) : 0;
  count(stage, numPassedTests, numFailedTests + broken + (numTotalTests === 0 ? 1 : 0));
}

/** The database and route tests once more, on Debian's PostgreSQL. */
async function onPostgres() {
  console.log("\n── postgresql");
  const server = spawn(process.execPath, ["--import", "tsx", "tests/support/postgres.ts"], {
    stdio: ["pipe", "pipe", "inherit"],
  });
  const url = await firstLine(server);
  if (url === null) {
    console.log("PostgreSQL could not be started (the reason is above).");
    return count("postgresql", 0, 1);
  }
  vitest("postgresql", ["tests/db", "tests/app"], { TEST_DATABASE_URL: url });
  server.stdin.end();
  await new Promise((done) => (server.exitCode === null ? server.once("exit", done) : done()));
}

function firstLine(server) {
  return new Promise((done) => {
    let text = "";
    server.stdout.on("data", (bytes) => {
      text += bytes;
      const url = /postgres(ql)?:\/\/\S+/.exec(text);
      if (url !== null && text.includes("\n")) done(url[0]);
    });
    server.once("exit", () => done(null));
  });
}

function browser() {
  console.log("\n── browser");
  if (!demandChromium()) return count("browser", 0, 1);
  const report = ".tmp/playwright.json";
  rmSync(report, { force: true });
  const run = spawnSync(bin("playwright"), ["test"], { stdio: "inherit", env: { ...process.env, FORCE_COLOR: "0" } });
  if (!existsSync(report)) return count("browser", 0, 1);
  const { stats, errors } = JSON.parse(readFileSync(report, "utf8"));
  const failed = stats.unexpected + stats.flaky + errors.length;
  count(
    "browser",
    stats.expected,
    failed + (run.status !== 0 && failed === 0 ? 1 : 0) + (stats.expected + failed === 0 ? 1 : 0),
  );
}

function demandChromium() {
  const path = process.env.CHROMIUM ?? "/usr/bin/chromium";
  if (existsSync(path)) return true;
  if (isRoot && existsSync("/usr/bin/apt-get")) {
    console.log("Installing Chromium …");
    spawnSync("apt-get", ["update"], { stdio: "ignore" });
    spawnSync("apt-get", ["install", "-y", "--no-install-recommends", "chromium"], {
      stdio: ["ignore", "ignore", "inherit"],
      env: { ...process.env, DEBIAN_FRONTEND: "noninteractive" },
    });
    if (existsSync(path)) return true;
  }
  console.error(
    `The browser tests need Chromium at ${path}: install Debian's package chromium as root, or name another with CHROMIUM=/path/to/it.`,
  );
  return false;
}

function count(stage, passed, failed) {
  sums.passed += passed;
  sums.failed += failed;
  lines.push(`${stage}: ${passed} passed, ${failed} failed`);
}

function finish() {
  writeFileSync(".tmp/sums.json", JSON.stringify(sums));
  console.log(`\n── sums\n${lines.map((line) => `   ${line}`).join("\n")}`);
  console.log(`   altogether: ${sums.passed} passed, ${sums.failed} failed`);
  process.exit(sums.failed === 0 && sums.passed > 0 ? 0 : 1);
}
