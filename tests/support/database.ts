// A database of its own for each test file, migrated once and copied: embedded, or on the server that TEST_DATABASE_URL
// names. And people, notebooks and actors, made by the verbs themselves.
import { createHash } from "node:crypto";
import { existsSync } from "node:fs";
import { mkdir, readdir, readFile, rename, rm, stat, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { PGlite } from "@electric-sql/pglite";
import { sql } from "drizzle-orm";
import { drizzle } from "drizzle-orm/pglite";
import pg from "pg";
import { type Database, type Db, embeddedOptions, openDatabase } from "../../db/client.ts";
import { newId } from "../../db/ids.ts";
import { enrolPerson } from "../../db/invitations.ts";
import { applyMigrations, readMigrations } from "../../db/migrate.ts";
import { addMember, createNotebook } from "../../db/notebooks.ts";
import { actorOf } from "../../db/people.ts";
import type { Actor, Role } from "../../db/policy.ts";
import { importLibrary } from "../../db/seed/library.ts";

export type TestDatabase = Database & {
  /** "embedded" or "server", for the few tests that only one of them can answer */
  kind: "embedded" | "server";
  /** another server process's view of the same store; null when the store is embedded, which has one process only */
  again(): Promise<Database | null>;
};

/** What a store is a copy of: migrated and empty, or with the library in it. */
type Template = "empty" | "library";

/** A migrated, empty store. Call `close` in `afterAll`: it also drops the server's database. */
export function testDatabase(): Promise<TestDatabase> {
  return copyOf("empty");
}

/** A migrated store with the library in it, as every store has it once the program has started on it. */
export function libraryDatabase(): Promise<TestDatabase> {
  return copyOf("library");
}

/** Makes both templates, so that no test file waits for another that makes them: vitest's global set-up. */
export async function makeTemplates(): Promise<void> {
  const server = serverUrl();
  if (server === null) await embeddedDump("library");
  else
    await withServer(server, async (client) => {
      await serverTemplate(client, server, "library");
    });
}

function copyOf(template: Template): Promise<TestDatabase> {
  const server = serverUrl();
  return server === null ? embeddedCopy(template) : serverCopy(server, template);
}

function serverUrl(): string | null {
  const url = process.env.TEST_DATABASE_URL;
  return url === undefined || url === "" ? null : url;
}

async function embeddedCopy(template: Template): Promise<TestDatabase> {
  const database = await openDatabase(`memory:${await embeddedDump(template)}`);
  return { ...database, again: async () => null };
}

/** The dump of such a store, made once for each state of what it is made from. */
async function embeddedDump(template: Template): Promise<string> {
  const folder = join(tmpdir(), "counterleaf-tests");
  const hash = await hashOfSources();
  const path = (wanted: Template) => join(folder, `${hash}-${wanted}.tar`);
  if (existsSync(path(template))) return path(template);
  await mkdir(folder, { recursive: true });
  await forgetOldDumps(folder);
  // Small segments of the write-ahead log: the dump, which every test file loads, is a third of the size.
  const client = await PGlite.create({ ...embeddedOptions, initDbStartParams: ["--wal-segsize=1"] });
  await client.transaction((tx) =>
    applyMigrations({
      run: async (text) => {
        await tx.exec(text);
      },
      rows: async (text, values) => (await tx.query(text, values)).rows,
    }),
  );
  await keepDump(client, path("empty"));
  await importLibrary(drizzle(client));
  await client.exec("vacuum analyze");
  await keepDump(client, path("library"));
  await client.close();
  return path(template);
}

async function keepDump(client: PGlite, path: string): Promise<void> {
  await client.exec("checkpoint");
  const dump = new Uint8Array(await (await client.dumpDataDir("none")).arrayBuffer());
  // Several test files may get here at once; each writes its own file, and the last one to move it wins with the same store.
  const own = `${path}.${process.pid}.${newId()}`;
  await writeFile(own, dump);
  await rename(own, path);
}

async function forgetOldDumps(folder: string): Promise<void> {
  const dayAgo = Date.now() - 86_400_000;
  for (const name of await readdir(folder)) {
    const path = join(folder, name);
    if ((await stat(path)).mtimeMs < dayAgo) await rm(path, { force: true });
  }
}

async function serverCopy(server: string, template: Template): Promise<TestDatabase> {
  const name = `counterleaf_${newId().replaceAll("-", "")}`;
  await withServer(server, async (client) => {
    const from = await serverTemplate(client, server, template);
    await client.query(`create database ${name} template ${from}`);
  });
  const url = withName(server, name);
  const database = await openDatabase(url);
  const others: Database[] = [];
  return {
    ...database,
    again: async () => {
      const other = await openDatabase(url);
      others.push(other);
      return other;
    },
    close: async () => {
      for (const other of others) await other.close();
      await database.close();
      await withServer(server, async (client) => {
        await client.query(`drop database ${name} with (force)`);
      });
    },
  };
}

/** The name of the server's database to copy. One maker at a time, and nobody copies it half made. */
async function serverTemplate(client: pg.Client, server: string, template: Template): Promise<string> {
  const hash = (await hashOfSources()).slice(0, 16);
  const nameOf = (which: Template) => `counterleaf_${which}_${hash}`;
  await client.query("select pg_advisory_lock(71)");
  const make = async (which: Template, from: string, fill: (database: Database) => Promise<unknown>) => {
    const found = await client.query("select 1 from pg_database where datname = $1", [nameOf(which)]);
    if (found.rowCount !== 0) return;
    const making = `${nameOf(which)}_making`;
    await client.query(`drop database if exists ${making}`);
    await client.query(`create database ${making} template ${from}`);
    const database = await openDatabase(withName(server, making));
    await fill(database);
    await database.close();
    await client.query(`alter database ${making} rename to ${nameOf(which)}`);
  };
  await make("empty", "template1", (database) => database.migrate());
  if (template === "library") await make("library", nameOf("empty"), (database) => importLibrary(database.db));
  await client.query("select pg_advisory_unlock(71)");
  return nameOf(template);
}

async function withServer(url: string, use: (client: pg.Client) => Promise<void>): Promise<void> {
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  try {
    await use(client);
  } finally {
    await client.end();
  }
}

function withName(url: string, name: string): string {
  const address = new URL(url);
  address.pathname = `/${name}`;
  return address.href;
}

/** Of everything that a template is made from: the migrations, and the room that fills the tables. */
async function hashOfSources(): Promise<string> {
  const hash = createHash("sha256");
  for (const { tag, sha256 } of await readMigrations()) hash.update(`${tag} ${sha256}\n`);
  for (const file of (await readdir("db", { recursive: true, withFileTypes: true }))
    .filter((each) => each.isFile())
    .map((each) => join(each.parentPath, each.name))
    .sort()) {
    hash.update(`${file}\n`).update(await readFile(file));
  }
  return hash.digest("hex");
}

// ---- people and notebooks -----------------------------------------------------------------------------------

const administrators = new WeakMap<Db, Promise<Actor>>();

/** The administrator who makes the other people of a test; one for each database. */
export function theAdministrator(db: Db): Promise<Actor> {
  const known = administrators.get(db);
  if (known !== undefined) return known;
  const made = enrolPerson(db, null, {
    email: "administrator@test.invalid",
    printedName: "T. Administrator",
    roles: ["administrator"],
    passwordHash: null,
  }).then(({ personId }) => signIn(db, personId));
  administrators.set(db, made);
  return made;
}

export type PersonToMake = { roles?: Role[]; memberOf?: string[]; printedName?: string; email?: string };

let made = 0;

/** A person with a session, as the actor that the database knows. `memberOf` holds ids of notebooks. */
export async function makePerson(db: Db, person: PersonToMake = {}): Promise<Actor> {
  made++;
  const administrator = await theAdministrator(db);
  const { personId } = await enrolPerson(db, null, {
    email: person.email ?? `person-${made}-${newId().slice(-6)}@test.invalid`,
    printedName: person.printedName ?? `P. Person ${made}`,
    roles: person.roles ?? ["researcher"],
    passwordHash: null,
  });
  for (const notebookId of person.memberOf ?? []) {
    await addMember(db, administrator, { notebookId, personId, reason: "for a test" });
  }
  return signIn(db, personId);
}

/** A notebook without members; returns its id and code. */
export async function makeNotebook(
  db: Db,
  notebook: { code?: string; title?: string } = {},
): Promise<{ id: string; code: string }> {
  made++;
  const code = notebook.code ?? `T${made.toString(36).toUpperCase().padStart(4, "0")}`;
  const { id } = await createNotebook(db, await theAdministrator(db), {
    code,
    title: notebook.title ?? `Notebook ${code}`,
    about: "",
  });
  return { id, code };
}

/** A new session of the person, written as the sign-in library writes it, and the actor who holds it. */
export async function signIn(db: Db, personId: string, expiresAt = new Date(Date.now() + 3_600_000)): Promise<Actor> {
  const sessionId = newId();
  await db.execute(
    sql`insert into session (id, token, user_id, expires_at) values (${sessionId}, ${newId()}, ${personId}, ${expiresAt.toISOString()})`,
  );
  const actor = await actorOf(db, { personId, sessionId });
  if (actor === null) throw new Error("The person who was just made cannot act.");
  return actor;
}

/** The same person as the database knows them now: roles and memberships may have changed. */
export async function again(db: Db, actor: Actor): Promise<Actor> {
  const now = await actorOf(db, { personId: actor.id, sessionId: actor.sessionId });
  if (now === null) throw new Error("The person can no longer act.");
  return now;
}

// ---- plain SQL ----------------------------------------------------------------------------------------------

// Tests see no tables; where one looks at a row, or tries what no verb does, it writes the SQL with this.
export { type SQL, sql } from "drizzle-orm";
