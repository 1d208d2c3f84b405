// A database of its own for each test file, migrated once and copied: embedded, or on the server that TEST_DATABASE_URL
// names. And people, notebooks and actors, made by the verbs themselves.
import { createHash } from "node:crypto";
import { existsSync } from "node:fs";
import { mkdir, rename, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { PGlite } from "@electric-sql/pglite";
import { sql } from "drizzle-orm";
import pg from "pg";
import { type Database, type Db, embeddedOptions, openDatabase } from "../../db/client.ts";
import { newId } from "../../db/ids.ts";
import { enrolPerson } from "../../db/invitations.ts";
import { applyMigrations, readMigrations } from "../../db/migrate.ts";
import { addMember, createNotebook } from "../../db/notebooks.ts";
import { actorOf } from "../../db/people.ts";
import type { Actor, Role } from "../../db/policy.ts";

export type TestDatabase = Database & {
  /** "embedded" or "server", for the few tests that only one of them can answer */
  kind: "embedded" | "server";
  /** another server process's view of the same store; null when the store is embedded, which has one process only */
  again(): Promise<Database | null>;
};

/** A migrated, empty store. Call `close` in `afterAll`: it also drops the server's database. */
export function testDatabase(): Promise<TestDatabase> {
  const server = process.env["TEST_DATABASE_URL"];
  return server === undefined || server === "" ? embeddedCopy() : serverCopy(server);
}

async function embeddedCopy(): Promise<TestDatabase> {
  const dump = await migratedDump();
  const database = await openDatabase(`memory:${dump}`);
  return { ...database, again: async () => null };
}

/** The dump of a migrated store, made once for each state of the migrations. */
async function migratedDump(): Promise<string> {
  const folder = join(tmpdir(), "counterleaf-tests");
  const path = join(folder, `${await migrationsHash()}.tar`);
  if (existsSync(path)) return path;
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
  const dump = new Uint8Array(await (await client.dumpDataDir("none")).arrayBuffer());
  await client.close();
  await mkdir(folder, { recursive: true });
  // Several test files may get here at once; each writes its own file, and the last one to move it wins with the same bytes.
  const own = `${path}.${process.pid}.${newId()}`;
  await writeFile(own, dump);
  await rename(own, path);
  return path;
}

async function serverCopy(server: string): Promise<TestDatabase> {
  const template = `counterleaf_template_${(await migrationsHash()).slice(0, 16)}`;
  const name = `counterleaf_${newId().replaceAll("-", "")}`;
  await withServer(server, async (client) => {
    // One maker of the template at a time, and nobody copies it half made.
    await client.query("select pg_advisory_lock(71)");
    const found = await client.query("select 1 from pg_database where datname = $1", [template]);
    if (found.rowCount === 0) {
      const making = `${template}_making`;
      await client.query(`drop database if exists ${making}`);
      await client.query(`create database ${making}`);
      const database = await openDatabase(withName(server, making));
      await database.migrate();
      await database.close();
      await client.query(`alter database ${making} rename to ${template}`);
    }
    await client.query(`create database ${name} template ${template}`);
    await client.query("select pg_advisory_unlock(71)");
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

async function migrationsHash(): Promise<string> {
  const hash = createHash("sha256");
  for (const { tag, sha256 } of await readMigrations()) hash.update(`${tag} ${sha256}\n`);
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
