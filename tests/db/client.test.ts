import { spawn } from "node:child_process";
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it, onTestFinished } from "vitest";
import { z } from "zod";
import { type Database, openDatabase, readRows } from "../../db/client.ts";
import { FolderInUse, FolderUnusable } from "../../db/folder.ts";
import { newId } from "../../db/ids.ts";
import { sql, type TestDatabase, testDatabase } from "../support/database.ts";

// Making a store on disk takes about 6 s of processor time; other work may share the machine.
const FRESH_STORE_MS = 180_000;

const numbered = z.object({ n: z.coerce.number() });

describe("a store", () => {
  let store: TestDatabase;
  beforeAll(async () => {
    store = await testDatabase();
  });
  afterAll(() => store.close());

  it("gives bytes back as they were, and quickly", async () => {
    const bytes = new Uint8Array(1024 * 1024).map((_, place) => (place * 31) % 256);
    await store.db.execute(sql`create table bytes_test (b bytea)`);
    await store.db.execute(sql`insert into bytes_test values (${bytes})`);
    const [row] = await readRows(store.db, z.object({ b: z.instanceof(Uint8Array) }), sql`select b from bytes_test`);
    expect(Buffer.compare(Buffer.from(row?.b ?? []), Buffer.from(bytes))).toBe(0);
    await store.db.execute(sql`drop table bytes_test`);
  });

  it("counts time in UTC, whatever the machine's zone (REC-13)", async () => {
    const [row] = await readRows(
      store.db,
      z.object({ zone: z.string() }),
      sql`select current_setting('TimeZone') as zone`,
    );
    expect(row?.zone).toBe("UTC");
  });

  it("has the extensions for finding", async () => {
    const rows = await readRows(
      store.db,
      z.object({ s: z.coerce.number(), u: z.string() }),
      sql`select similarity('citric', 'citrik') as s, unaccent('Säure') as u`,
    );
    expect(rows[0]?.s).toBeGreaterThan(0.4);
    expect(rows[0]?.u).toBe("Saure");
  });

  it("tells of a commit, not of a rollback", async () => {
    const heard: string[] = [];
    const stop = await store.listen("client_test", (payload) => heard.push(payload));
    await expect(
      store.db.transaction(async (tx) => {
        await tx.execute(sql`select pg_notify('client_test', 'rolled back')`);
        throw new Error("no");
      }),
    ).rejects.toThrow("no");
    await store.db.transaction(async (tx) => {
      await tx.execute(sql`select pg_notify('client_test', 'committed')`);
    });
    await until(() => heard.length > 0);
    expect(heard).toEqual(["committed"]);
    await stop();
    await store.db.execute(sql`select pg_notify('client_test', 'after')`);
    await store.db.execute(sql`select 1`);
    expect(heard).toEqual(["committed"]);
  });

  it("rolls a nested transaction back alone", async () => {
    await store.db.execute(sql`create table nested_test (n integer)`);
    await store.db.transaction(async (tx) => {
      await tx.execute(sql`insert into nested_test values (1)`);
      await tx
        .transaction(async (inner) => {
          await inner.execute(sql`insert into nested_test values (2)`);
          throw new Error("inner");
        })
        .catch(() => {});
    });
    expect(await readRows(store.db, numbered, sql`select n from nested_test`)).toEqual([{ n: 1 }]);
    await store.db.execute(sql`drop table nested_test`);
  });

  it("migrates again without a change", async () => {
    const before = await readRows(store.db, numbered, sql`select count(*) as n from migrations`);
    await store.migrate();
    expect(await readRows(store.db, numbered, sql`select count(*) as n from migrations`)).toEqual(before);
    expect(before[0]?.n).toBeGreaterThan(1);
  });

  it("hears again after its listening connection was lost, and says that it may have missed something", async () => {
    // An embedded store has no connection to lose.
    if (store.kind === "embedded") return expect(await store.again()).toBeNull();
    const heard: string[] = [];
    const stop = await store.listen("lost_test", (payload) => heard.push(payload));
    await store.db.execute(
      sql`select pg_terminate_backend(pid) from pg_stat_activity where application_name = 'counterleaf listen' and datname = current_database()`,
    );
    await until(() => heard.includes(""));
    await store.db.execute(sql`select pg_notify('lost_test', 'back')`);
    await until(() => heard.includes("back"));
    await stop();
  });

  it("is migrated once when two servers start at the same moment", async () => {
    const other = await store.again();
    if (other === null) return expect(store.kind).toBe("embedded");
    await store.db.execute(sql`alter table migrations disable trigger all`);
    await store.db.execute(sql`drop schema public cascade`);
    await store.db.execute(sql`create schema public`);
    await Promise.all([store.migrate(), other.migrate(), store.migrate()]);
    const rows = await readRows(store.db, numbered, sql`select position as n from migrations order by position`);
    expect(rows.map(({ n }) => n)).toEqual(rows.map((_, place) => place));
  });
});

describe("a store of an unknown version", () => {
  it("is refused before anything is changed (KEE-08)", async () => {
    const store = await testDatabase();
    await store.db.execute(
      sql`insert into migrations (position, tag, sha256, at) values (999, '0999_later', 'x', now())`,
    );
    await expect(store.migrate()).rejects.toThrow(/"0999_later".*later one/);
    await store.close();
  });
});

describe("a data folder", () => {
  const folder = mkdtempSync(join(tmpdir(), "counterleaf-folder-"));
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  it(
    "is held by one process: the second one is told who holds it, and harms nothing",
    async () => {
      const path = join(folder, "held", "deep");
      const store = await openDatabase(`file:${path}`);
      const second = await openDatabase(`file:${path}`).catch((fault: unknown) => fault);
      expect(second).toBeInstanceOf(FolderInUse);
      expect(second).toHaveProperty("pid", process.pid);
      expect(String(second)).toContain(`in use by process ${process.pid}`);
      await store.db.execute(sql`create table kept (n integer)`);
      await store.close();
      const again = await openDatabase(`file:${path}`);
      expect(await readRows(again.db, numbered, sql`select count(*) as n from kept`)).toEqual([{ n: 0 }]);
      await again.close();
    },
    FRESH_STORE_MS,
  );

  it(
    "keeps what was acknowledged when its process is killed, and is free at once",
    async () => {
      const path = join(folder, "killed");
      const code = `
      const { openDatabase } = await import(${JSON.stringify(join(process.cwd(), "db/client.ts"))});
      const { sql } = await import("drizzle-orm");
      const store = await openDatabase(${JSON.stringify(`file:${path}`)});
      await store.db.execute(sql.raw("create table kept (n integer)"));
      for (let n = 1; ; n++) { await store.db.execute(sql.raw("insert into kept values (" + n + ")")); process.stdout.write(n + "\\n"); }`;
      const child = spawn(process.execPath, ["--import", "tsx", "--input-type=module", "-e", code], {
        stdio: ["ignore", "pipe", "inherit"],
      });
      let acknowledged = 0;
      child.stdout.setEncoding("utf8");
      child.stdout.on("data", (text: string) => {
        acknowledged = Number(text.trim().split("\n").at(-1));
      });
      onTestFinished(() => {
        child.kill("SIGKILL");
      });
      await until(() => acknowledged >= 50, FRESH_STORE_MS);
      await expect(openDatabase(`file:${path}`)).rejects.toThrow(`process ${child.pid} `);
      const gone = new Promise((done) => child.once("close", done));
      child.kill("SIGKILL");
      await gone;
      const store: Database = await openDatabase(`file:${path}`);
      const rows = await readRows(store.db, numbered, sql`select max(n) as n from kept`);
      expect(rows[0]?.n).toBeGreaterThanOrEqual(acknowledged);
      await store.close();
    },
    2 * FRESH_STORE_MS,
  );

  it("that cannot be used is refused in one sentence", async () => {
    const file = join(folder, "a-file");
    writeFileSync(file, "");
    for (const address of [`file:${file}`, `file:${join(file, "below")}`, "file:"]) {
      const refused = await openDatabase(address).catch((fault: unknown) => fault);
      expect(refused).toBeInstanceOf(FolderUnusable);
      expect(String(refused)).toMatch(/(cannot be used: .+|names no folder.+)[.]$/);
    }
    expect(() => openDatabase("mysql://x")).toThrow(/must begin with/);
  });
});

describe("ids", () => {
  it("are different, and sort by the time at which they were made", async () => {
    const ids = new Set(Array.from({ length: 1000 }, newId));
    expect(ids.size).toBe(1000);
    for (const id of ids) expect(id).toMatch(/^[0-9a-f]{8}-[0-9a-f]{4}-7[0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}$/);
    const early = newId();
    await new Promise((done) => setTimeout(done, 3));
    expect(newId() > early).toBe(true);
  });
});

async function until(isSo: () => boolean, withinMs = 10_000): Promise<void> {
  const end = Date.now() + withinMs;
  while (!isSo()) {
    if (Date.now() > end) throw new Error("It did not come about in time.");
    await new Promise((done) => setTimeout(done, 10));
  }
}
