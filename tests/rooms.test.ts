// The import rules are only worth something if they read every file: what was read is compared with what is there.
import { execFile } from "node:child_process";
import { readdirSync } from "node:fs";
import { join } from "node:path";
import { promisify } from "node:util";
import { expect, it } from "vitest";
import { z } from "zod";

const ROOMS = ["app", "components", "editor", "chem", "db", "tests"];
const CODE = /[.]tsx?$/;
const cruised = z.object({
  modules: z.array(z.object({ source: z.string() })),
  summary: z.object({ error: z.number(), violations: z.array(z.unknown()) }),
});

it("lets the import rules read every file of the six rooms, and finds none broken", async () => {
  const { modules, summary } = cruised.parse(JSON.parse(await cruise()));
  const read = modules
    .map(({ source }) => source)
    .filter((path) => ROOMS.some((room) => path.startsWith(`${room}/`)) && CODE.test(path))
    .sort();
  const onDisk = ROOMS.flatMap(filesBelow).sort();
  expect(onDisk).not.toEqual([]);
  expect(read).toEqual(onDisk);
  expect(summary.violations).toEqual([]);
  expect(summary.error).toBe(0);
}, 180_000);

async function cruise(): Promise<string> {
  const parameters = ["--config", ".dependency-cruiser.mjs", "--output-type", "json", ...ROOMS];
  const bin = join("node_modules", "dependency-cruiser", "bin", "dependency-cruise.mjs");
  // With violations its exit code is their number, and the report is still what it printed.
  const { stdout } = await promisify(execFile)(process.execPath, [bin, ...parameters], { maxBuffer: 2 ** 28 }).catch(
    (fault: unknown) => z.object({ stdout: z.string().min(1) }).parse(fault),
  );
  return stdout;
}

function filesBelow(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((found) => {
    const path = `${folder}/${found.name}`;
    if (found.isDirectory()) return filesBelow(path);
    return CODE.test(found.name) ? [path] : [];
  });
}
