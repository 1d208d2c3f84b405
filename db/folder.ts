// The folder of the embedded store belongs to one process at a time: a second one would corrupt it without a word.
// On Linux the holder listens on an abstract socket named after the folder's real path, which dies with its process and
// tells those who ask who it is; elsewhere a lock file names the process and when it started.
import { execFileSync } from "node:child_process";
import { createHash } from "node:crypto";
import { constants } from "node:fs";
import { access, mkdir, readFile, realpath, rename, rm, statfs, writeFile } from "node:fs/promises";
import { createServer, connect as dial, type Server } from "node:net";
import { join } from "node:path";
import { z } from "zod";

/** Thrown when another process holds the folder. Its message is a sentence for people. */
export class FolderInUse extends Error {
  readonly pid: number | null;
  constructor(folder: string, holder: Holder | null) {
    const who = holder === null ? "another process" : `process ${holder.pid} (since ${holder.since})`;
    super(`The data folder ${folder} is in use by ${who}. Stop that one first, or choose another folder.`);
    this.name = "FolderInUse";
    this.pid = holder?.pid ?? null;
  }
}

/** Thrown when the folder cannot be made or written. Its message is a sentence for people. */
export class FolderUnusable extends Error {
  constructor(sentence: string, cause?: unknown) {
    super(sentence, { cause });
    this.name = "FolderUnusable";
  }
}

export type TakenFolder = {
  /** where PGlite keeps its files */
  dataFolder: string;
  release(): Promise<void>;
};

type Holder = z.infer<typeof holder>;
const holder = z.object({ pid: z.number(), since: z.string(), started: z.string().optional() });

const LEAST_FREE_BYTES = 64 * 1024 * 1024;

/** Makes the folder if need be and holds it until `release` or the end of the process. */
export async function takeFolder(folder: string): Promise<TakenFolder> {
  if (folder === "")
    throw new FolderUnusable('The address of the database names no folder: write "file:" and its path.');
  const real = await prepare(folder);
  const release = process.platform === "linux" ? await holdSocket(folder, real) : await holdFile(folder, real);
  return { dataFolder: join(real, "store"), release };
}

async function prepare(folder: string): Promise<string> {
  try {
    await mkdir(folder, { recursive: true });
    const real = await realpath(folder);
    await access(real, constants.R_OK | constants.W_OK | constants.X_OK);
    const { bavail, bsize } = await statfs(real);
    if (bavail * bsize < LEAST_FREE_BYTES) {
      throw new FolderUnusable(
        `The disk that holds the data folder ${folder} has less than 64 MiB left. Make room first.`,
      );
    }
    return real;
  } catch (fault) {
    if (fault instanceof FolderUnusable) throw fault;
    const why = codeOf(fault) === "ENOSPC" ? "the disk is full" : (reasons[codeOf(fault)] ?? "it cannot be opened");
    throw new FolderUnusable(`The data folder ${folder} cannot be used: ${why}.`, fault);
  }
}

const reasons: Record<string, string | undefined> = {
  EACCES: "this user may not write there",
  EPERM: "this user may not write there",
  EROFS: "the file system is read-only",
  ENOTDIR: "a part of its path is a file",
  EEXIST: "a file has that name",
};

async function holdSocket(folder: string, real: string): Promise<() => Promise<void>> {
  // An abstract name holds 107 bytes, a path may be longer: hence its hash.
  const name = `\0counterleaf:${createHash("sha256").update(real).digest("hex")}`;
  const self = JSON.stringify({ pid: process.pid, since: new Date().toISOString() });
  const server = createServer((asking) => {
    asking.on("error", () => asking.destroy());
    asking.end(self);
  });
  try {
    await listening(server, name);
  } catch (fault) {
    if (codeOf(fault) === "EADDRINUSE") throw new FolderInUse(folder, (await ask(name)) ?? (await readNote(real)));
    throw fault;
  }
  server.unref();
  // The socket is the lock. The note only names the holder when it is too busy to answer.
  await writeFile(join(real, NOTE), self);
  return () => new Promise((done) => server.close(() => done()));
}

const NOTE = "holder.json";

async function readNote(real: string): Promise<Holder | null> {
  const text = await readFile(join(real, NOTE), "utf8").catch(() => "");
  return parseHolder(text);
}

function listening(server: Server, name: string): Promise<void> {
  return new Promise((done, failed) => {
    server.once("error", failed);
    server.listen({ path: name }, () => {
      server.off("error", failed);
      done();
    });
  });
}

/** Who holds the socket; null when nobody answers within a second. */
function ask(name: string): Promise<Holder | null> {
  return new Promise((done) => {
    const socket = dial({ path: name });
    let answer = "";
    socket.setEncoding("utf8");
    socket.setTimeout(1_000, () => socket.destroy());
    socket.on("data", (text) => {
      answer += text;
    });
    socket.on("error", () => done(null));
    socket.on("close", () => done(parseHolder(answer)));
  });
}

async function holdFile(folder: string, real: string): Promise<() => Promise<void>> {
  const path = join(real, "in-use");
  const self = JSON.stringify({ pid: process.pid, since: new Date().toISOString(), started: startOf(process.pid) });
  try {
    await writeFile(path, self, { flag: "wx" });
  } catch (fault) {
    if (codeOf(fault) !== "EEXIST") throw fault;
    const other = parseHolder(await readFile(path, "utf8"));
    if (other !== null && isAlive(other)) throw new FolderInUse(folder, other);
    // Its process is gone. Moving it away is atomic, and what stands there afterwards must be ours.
    await rename(path, `${path}.${process.pid}`);
    await rm(`${path}.${process.pid}`);
    await writeFile(path, self, { flag: "wx" });
  }
  if ((await readFile(path, "utf8")) !== self) throw new FolderInUse(folder, null);
  return () => rm(path, { force: true });
}

function isAlive({ pid, started }: Holder): boolean {
  try {
    process.kill(pid, 0);
  } catch (fault) {
    if (codeOf(fault) === "ESRCH") return false;
  }
  // The number may have gone to another process since.
  const now = startOf(pid);
  return started === undefined || now === undefined || now === started;
}

function startOf(pid: number): string | undefined {
  try {
    return execFileSync("ps", ["-o", "lstart=", "-p", String(pid)], { encoding: "utf8" }).trim();
  } catch {
    return undefined;
  }
}

function parseHolder(text: string): Holder | null {
  try {
    return holder.parse(JSON.parse(text));
  } catch {
    return null;
  }
}

function codeOf(fault: unknown): string {
  return fault instanceof Error && "code" in fault && typeof fault.code === "string" ? fault.code : "";
}
