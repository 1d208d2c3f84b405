// The only file that knows the driver. `file:` is PGlite in this process, `memory:` the same without a folder (tests),
// `postgres:` a server. The rest of db/ cannot tell them apart.
import { readFile } from "node:fs/promises";
import { PGlite, types } from "@electric-sql/pglite";
import { pg_trgm } from "@electric-sql/pglite/contrib/pg_trgm";
import { unaccent } from "@electric-sql/pglite/contrib/unaccent";
import type { SQL } from "drizzle-orm";
import { drizzle as drizzleServer } from "drizzle-orm/node-postgres";
import type { PgDatabase, PgQueryResultHKT } from "drizzle-orm/pg-core";
import { drizzle as drizzleEmbedded } from "drizzle-orm/pglite";
import pg from "pg";
import { z } from "zod";
import { takeFolder } from "./folder.ts";
import { applyMigrations } from "./migrate.ts";

/** The database or a transaction of it: a verb takes either and joins the transaction that it is given. */
export type Db = PgDatabase<PgQueryResultHKT, Record<string, never>>;

export type Database = {
  db: Db;
  kind: "embedded" | "server";
  migrate(): Promise<void>;
  /**
   * Calls `heard` for each notification on the channel. On a server the connection comes back by itself; `heard("")` then
   * says that notifications may have been missed. Returns the function that stops listening.
   */
  listen(channel: string, heard: (payload: string) => void): Promise<() => Promise<void>>;
  close(): Promise<void>;
};

/** Opens the store that the address names: "file:<folder>", "memory:", "memory:<dump of a migrated store>" or "postgres://…". */
export function openDatabase(url: string): Promise<Database> {
  if (url.startsWith("file:")) return openFolder(url.slice("file:".length).replace(/^\/\/(?=\/)/, ""));
  if (url.startsWith("memory:")) return openMemory(url.slice("memory:".length));
  if (/^postgres(ql)?:/.test(url)) return openServer(url);
  throw new Error('The address of the database must begin with "file:" or "postgres:".');
}

const rowsShape = z.object({ rows: z.array(z.unknown()) });

/** The rows of a hand-written query, each checked by the schema; both drivers answer `execute` with `{ rows }`. */
export async function readRows<T>(db: Db, row: z.ZodType<T>, query: SQL): Promise<T[]> {
  const { rows } = rowsShape.parse(await db.execute(query));
  return rows.map((each) => row.parse(each));
}

/** How many rows a hand-written UPDATE or DELETE touched. */
export async function countTouched(db: Db, query: SQL): Promise<number> {
  const touched = z.object({ rowCount: z.number().nullish(), affectedRows: z.number().nullish() });
  const answer = touched.parse(await db.execute(query));
  return answer.rowCount ?? answer.affectedRows ?? 0;
}

/** What PGlite is opened with, so that a dump for the tests is made in the same way. */
export const embeddedOptions = {
  extensions: { pg_trgm, unaccent },
  // Its own conversion builds a string for each byte: seconds for what takes Buffer milliseconds.
  serializers: { [types.BYTEA]: (value: Uint8Array) => `\\x${asBuffer(value).toString("hex")}` },
  parsers: { [types.BYTEA]: (text: string) => new Uint8Array(Buffer.from(text.slice(2), "hex")) },
};

async function openFolder(folder: string): Promise<Database> {
  const taken = await takeFolder(folder);
  try {
    const client = await PGlite.create({ dataDir: taken.dataFolder, ...embeddedOptions });
    return await embedded(client, taken.release);
  } catch (fault) {
    await taken.release();
    throw fault;
  }
}

async function openMemory(dump: string): Promise<Database> {
  const loaded = dump === "" ? {} : { loadDataDir: new Blob([new Uint8Array(await readFile(dump))]) };
  return embedded(await PGlite.create({ ...embeddedOptions, ...loaded }), async () => {});
}

async function embedded(client: PGlite, release: () => Promise<void>): Promise<Database> {
  await client.exec("set time zone 'UTC'");
  let open = true;
  return {
    db: drizzleEmbedded(client),
    kind: "embedded",
    migrate: () =>
      client.transaction((tx) =>
        applyMigrations({
          run: async (text) => {
            await tx.exec(text);
          },
          rows: async (text, values) => (await tx.query(text, values)).rows,
        }),
      ),
    listen: async (channel, heard) => {
      const stop = await client.listen(channel, heard);
      return async () => {
        if (open) await stop();
      };
    },
    close: async () => {
      if (!open) return;
      open = false;
      await client.close();
      await release();
    },
  };
}

const MIGRATION_LOCK = 4_918_273;
const LONGEST_WAIT_FOR_A_LOCK_MS = 15_000;
const SESSION = `-c timezone=UTC -c lock_timeout=${LONGEST_WAIT_FOR_A_LOCK_MS} -c idle_in_transaction_session_timeout=120000`;

async function openServer(url: string): Promise<Database> {
  const pool = new pg.Pool({ connectionString: url, max: 12, options: SESSION, application_name: "counterleaf" });
  // An idle connection that the server closed: the pool makes another when one is asked for.
  pool.on("error", () => {});
  // One that is cut while a verb holds it: the verb's own statement fails, and that is enough. Without a listener the whole
  // process would end.
  pool.on("connect", (client) => {
    client.on("error", () => {});
  });
  try {
    (await pool.connect()).release();
  } catch (fault) {
    await pool.end();
    throw fault;
  }
  const bell = startBell(url);
  let open = true;
  return {
    db: drizzleServer(pool),
    kind: "server",
    migrate: () => migrateServer(pool),
    listen: bell.listen,
    close: async () => {
      if (!open) return;
      open = false;
      await bell.close();
      await pool.end();
    },
  };
}

async function migrateServer(pool: pg.Pool): Promise<void> {
  const client = await pool.connect();
  try {
    // Held until the commit: a second server that starts at the same moment waits here, then finds nothing to do.
    await client.query("begin");
    await client.query("set local lock_timeout = 0");
    await client.query("select pg_advisory_xact_lock($1)", [MIGRATION_LOCK]);
    await applyMigrations({
      run: async (text) => {
        await client.query(text);
      },
      rows: async (text, values) => (await client.query(text, values)).rows,
    });
    await client.query("commit");
  } catch (fault) {
    await client.query("rollback");
    throw fault;
  } finally {
    client.release();
  }
}

type Bell = { listen: Database["listen"]; close(): Promise<void> };

/** One connection that only listens, opened at the first listener, and opened again whenever it is lost. */
function startBell(url: string): Bell {
  const listeners = new Map<string, Set<(payload: string) => void>>();
  let connection: pg.Client | null = null;
  let connecting: Promise<pg.Client> | null = null;
  let retry: NodeJS.Timeout | null = null;
  let delayMs = 100;
  let closed = false;

  function connect(): Promise<pg.Client> {
    connecting ??= dial().finally(() => {
      connecting = null;
    });
    return connecting;
  }

  async function dial(): Promise<pg.Client> {
    const client = new pg.Client({ connectionString: url, keepAlive: true, application_name: "counterleaf listen" });
    client.on("notification", (notice) => {
      for (const heard of listeners.get(notice.channel) ?? []) heard(notice.payload ?? "");
    });
    client.on("error", () => {});
    client.on("end", () => {
      if (connection === client) connection = null;
      again();
    });
    await client.connect();
    for (const channel of listeners.keys()) await client.query(`listen ${pg.escapeIdentifier(channel)}`);
    connection = client;
    delayMs = 100;
    return client;
  }

  function again(): void {
    if (closed || retry !== null || listeners.size === 0) return;
    retry = setTimeout(async () => {
      retry = null;
      try {
        await connect();
        for (const all of listeners.values()) for (const heard of all) heard("");
      } catch {
        // The server is still away; this is the place that waits for it.
        delayMs = Math.min(delayMs * 2, 5_000);
        again();
      }
    }, delayMs);
  }

  return {
    async listen(channel, heard) {
      const known = listeners.get(channel);
      const all = known ?? new Set();
      all.add(heard);
      listeners.set(channel, all);
      if (connection === null) await connect();
      else if (known === undefined) await connection.query(`listen ${pg.escapeIdentifier(channel)}`);
      return async () => {
        all.delete(heard);
        if (all.size > 0 || listeners.get(channel) !== all) return;
        listeners.delete(channel);
        if (connection !== null) await connection.query(`unlisten ${pg.escapeIdentifier(channel)}`);
      };
    },
    async close() {
      closed = true;
      if (retry !== null) clearTimeout(retry);
      await connecting?.catch(() => {});
      await connection?.end();
    },
  };
}

function asBuffer(bytes: Uint8Array): Buffer {
  return Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}
