// The launcher says in one sentence what stands in the way, and changes nothing.
import { execFile } from "node:child_process";
import { createServer } from "node:net";
import { fileURLToPath } from "node:url";
import { expect, it } from "vitest";

const launcher = fileURLToPath(new URL("../../app/_server/commands/launch.mjs", import.meta.url));

function launch(mode: string, environment: Record<string, string>): Promise<{ code: number | null; said: string }> {
  return new Promise((done) => {
    const child = execFile(
      process.execPath,
      [launcher, mode],
      { env: { ...process.env, ...environment } },
      (_error, out, err) => {
        done({ code: child.exitCode, said: (out + err).trim() });
      },
    );
  });
}

it("names a port that is taken and what to do, and ends with a code that is not 0", async () => {
  const server = createServer();
  const port = await new Promise<number>((done) => {
    server.listen(0, () => {
      const address = server.address();
      done(typeof address === "object" && address !== null ? address.port : 0);
    });
  });
  const { code, said } = await launch("demo", { PORT: String(port) });
  server.close();
  expect(said).toBe(
    `Port ${port} is taken by another program: stop that one, or choose another with PORT=${port + 1}.`,
  );
  expect(code).toBe(1);
});

it.each(["abc", "0", "70000", "-1"])("refuses %s as a port", async (port) => {
  const { code, said } = await launch("start", { PORT: port });
  expect(said).toBe(`PORT is "${port}", which is no port number: choose one from 1 to 65535.`);
  expect(code).toBe(1);
});

it("says which words it knows", async () => {
  const { code, said } = await launch("", {});
  expect(said).toBe('Say "demo", "start", "dev" or "build".');
  expect(code).toBe(1);
});
