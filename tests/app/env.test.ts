import { mkdtempSync, statSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { expect, it } from "vitest";
import { readSettings, SettingsRefused } from "../../app/_server/env.ts";

const real = {
  COUNTERLEAF_SECRET: "a secret that is used by this test only",
  COUNTERLEAF_URL: "https://notebook.example",
  COUNTERLEAF_DATA: "/srv/counterleaf",
};

function faults(source: Record<string, string>): string[] {
  try {
    readSettings(source);
  } catch (error) {
    if (error instanceof SettingsRefused) return error.problems;
    throw error;
  }
  return [];
}

it("takes what a real installation needs and fills in the rest", () => {
  expect(readSettings(real)).toMatchObject({
    demo: false,
    url: "https://notebook.example",
    origins: ["https://notebook.example"],
    databaseUrl: "file:/srv/counterleaf/store",
    smtpUrl: null,
    proxyHops: 0,
  });
});

it("says everything that is missing at once, by name", () => {
  const said = faults({}).join("\n");
  for (const name of ["COUNTERLEAF_SECRET", "COUNTERLEAF_URL", "COUNTERLEAF_DATA", "DATABASE_URL"])
    expect(said).toContain(name);
});

it.each([
  ["a short secret", { COUNTERLEAF_SECRET: "short" }, "COUNTERLEAF_SECRET"],
  ["an address with a path", { COUNTERLEAF_URL: "https://notebook.example/lab" }, "COUNTERLEAF_URL"],
  ["an address that is none", { COUNTERLEAF_URL: "javascript:alert(1)" }, "COUNTERLEAF_URL"],
  ["two stores", { DATABASE_URL: "postgres://localhost/lab" }, "both set"],
  ["mail without a sender", { SMTP_URL: "smtp://localhost" }, "MAIL_FROM"],
  ["a negative number of proxies", { PROXY_HOPS: "-1" }, "PROXY_HOPS"],
  ["a session without end", { COUNTERLEAF_SESSION_HOURS: "1e9" }, "COUNTERLEAF_SESSION_HOURS"],
])("refuses %s", (_, change, named) => {
  expect(faults({ ...real, ...change }).join("\n")).toContain(named);
});

it("never says a secret back", () => {
  expect(faults({ ...real, COUNTERLEAF_SECRET: "short-and-secret", COUNTERLEAF_URL: "x" }).join("\n")).not.toContain(
    "short-and-secret",
  );
});

it("makes a secret for the demo once and keeps it for its owner alone", () => {
  const folder = mkdtempSync(join(tmpdir(), "counterleaf-env-"));
  const first = readSettings({ COUNTERLEAF_DEMO: "1", COUNTERLEAF_DATA: folder, PORT: "3123" });
  const second = readSettings({ COUNTERLEAF_DEMO: "1", COUNTERLEAF_DATA: folder, PORT: "3123" });
  expect(first.secret).toBe(second.secret);
  expect(first.secret.length).toBeGreaterThanOrEqual(32);
  expect(first.url).toBe("http://localhost:3123");
  expect(statSync(join(folder, "secret")).mode & 0o077).toBe(0);
});
