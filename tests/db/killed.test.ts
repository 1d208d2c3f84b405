// A server or its database connection that dies in the middle: what was acknowledged is there, and nothing stands half (COL-03).
import { spawn } from "node:child_process";
import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it, onTestFinished } from "vitest";
import { z } from "zod";
import { chainFrom, readHead } from "../../db/audit.ts";
import { verifyChain } from "../../db/chain.ts";
import { openDatabase, readRows } from "../../db/client.ts";
import { newId } from "../../db/ids.ts";
import { actorOf } from "../../db/people.ts";
import { appendUpdate, pageState } from "../../db/updates.ts";
import { makePerson, sql, type TestDatabase, testDatabase } from "../support/database.ts";
import { countRows, firstLine, type Lab, makeDraft, makeLab, openWriter, textOf } from "../support/laboratory.ts";

const pids = z.object({ pid: z.number() });

describe("a process with an embedded store", () => {
  const folder = mkdtempSync(join(tmpdir(), "counterleaf-killed-"));
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  it("that is killed between two keystrokes loses nothing that it acknowledged (COL-03)", {
    timeout: 180_000,
  }, async () => {
    const url = `file:${join(folder, "store")}`;
    const child = spawn(process.execPath, ["--import", "tsx", "tests/support/typist.ts", url], {
      stdio: ["ignore", "pipe", "inherit"],
    });
    onTestFinished(() => {
      child.kill("SIGKILL");
    });
    let printed = "";
    child.stdout.setEncoding("utf8");
    const killed = new Promise<void>((done) => child.once("close", () => done()));
    child.stdout.on("data", (text: string) => {
      printed += text;
      // At once, whatever it is doing with the next word.
      if (printed.split("\n").length > 30) child.kill("SIGKILL");
    });
    await killed;
    const [first = "", ...lines] = printed.split("\n");
    const told = z
      .object({ personId: z.string(), sessionId: z.string(), revisionId: z.string() })
      .parse(JSON.parse(first));
    const acknowledged = lines.filter((line) => line !== "").map(Number);
    expect(acknowledged.length).toBeGreaterThanOrEqual(28);

    const store = await openDatabase(url);
    const author = await actorOf(store.db, told);
    if (author === null) throw new Error("the typist is gone");
    const page = textOf((await pageState(store.db, author, told.revisionId)).state);
    for (const word of acknowledged) expect(page.split(`[${word}]`), `word ${word}`).toHaveLength(2);
    // The page can be written on, and the trail goes on where it was.
    const writer = await openWriter(store.db, author, told.revisionId);
    await writer.type("[after]");
    expect(textOf((await pageState(store.db, author, told.revisionId)).state)).toBe(page.replace("</", "[after]</"));
    expect(verifyChain(await chainFrom(store.db, 1, 10_000), [await readHead(store.db)])).toMatchObject({ ok: true });
    await store.close();
  });
});

describe("a connection to the database server", () => {
  let store: TestDatabase;
  let lab: Lab;
  beforeAll(async () => {
    store = await testDatabase();
    lab = await makeLab(store.db);
  });
  afterAll(() => store.close());

  it("that is cut inside a transaction leaves nothing half, and the same update is taken when it comes again (COL-03)", async () => {
    const other = await store.again();
    // An embedded store has no connection that could be cut: its process is what is killed, above.
    if (other === null) return expect(store.kind).toBe("embedded");
    const { id, revisionId } = await makeDraft(store.db, lab, "Before.");
    const writer = await openWriter(other.db, lab.colleague, revisionId);
    const update = {
      revisionId,
      updateId: newId(),
      bytes: writer.change((page) => firstLine(page).insert(0, "Cut. ")),
    };
    const before = await readHead(store.db);
    let cut: Promise<unknown> = Promise.resolve();
    // Whoever holds the head of the audit trail stops the colleague's transaction after its row, before its event.
    await store.db.transaction(async (tx) => {
      await tx.execute(sql`select 1 from audit_heads where id = 'store' for update`);
      cut = appendUpdate(other.db, lab.colleague, update).then(
        () => "acknowledged",
        () => "refused",
      );
      let waiting: z.infer<typeof pids>[] = [];
      while (waiting.length === 0) {
        waiting = await readRows(
          tx,
          pids,
          sql`select pid from pg_stat_activity where datname = current_database() and wait_event_type = 'Lock'`,
        );
      }
      for (const { pid } of waiting) await tx.execute(sql`select pg_terminate_backend(${pid})`);
      expect(await cut).toBe("refused");
    });
    expect(await readHead(store.db)).toEqual(before);
    expect(await countRows(store.db, "updates", revisionId)).toBe(2);
    const own = sql`select count(*)::int as pid from contributors where entry_id = ${id} and person_id = ${lab.colleague.id}`;
    expect(await readRows(store.db, pids, own)).toEqual([{ pid: 0 }]);
    await appendUpdate(other.db, lab.colleague, update);
    expect(textOf((await pageState(store.db, lab.author, revisionId)).state)).toContain("Cut. Before.");
    expect(verifyChain(await chainFrom(store.db, 1, 10_000))).toMatchObject({ ok: true });
  });

  it("cut again and again while ten people type: each word that was acknowledged stands once (COL-03)", {
    timeout: 180_000,
  }, async () => {
    const other = await store.again();
    if (other === null) return expect(store.kind).toBe("embedded");
    const { revisionId } = await makeDraft(store.db, lab, "");
    const people = await Promise.all(
      Array.from({ length: 10 }, () => makePerson(store.db, { roles: ["researcher"], memberOf: [lab.notebookId] })),
    );
    let failures = 0;
    const words = people.map(async (person, index) => {
      const writer = await openWriter(store.db, person, revisionId);
      for (let count = 0; count < 10; count += 1) {
        const bytes = writer.change((page) => firstLine(page).insert(firstLine(page).length, `[${index}.${count}]`));
        const updateId = newId();
        // A browser sends it again until it is acknowledged, under the same id.
        for (let tries = 0; tries < 100; tries += 1) {
          const isTaken = await appendUpdate(other.db, person, { revisionId, updateId, bytes }).then(
            () => true,
            () => false,
          );
          if (isTaken) break;
          failures += 1;
          await rest(20);
        }
      }
    });
    for (let cuts = 0; cuts < 25; cuts += 1) {
      await store.db.execute(sql`select pg_terminate_backend(pid) from pg_stat_activity
        where datname = current_database() and pid <> pg_backend_pid() and xact_start is not null limit 2`);
      await rest(40);
    }
    await Promise.all(words);
    expect(failures).toBeGreaterThan(0);
    const page = textOf((await pageState(store.db, lab.author, revisionId)).state);
    for (const index of people.keys())
      for (let count = 0; count < 10; count += 1) expect(page.split(`[${index}.${count}]`)).toHaveLength(2);
    const seqs = await readRows(
      store.db,
      pids,
      sql`select seq as pid from updates where revision_id = ${revisionId} order by seq`,
    );
    expect(seqs.map(({ pid }) => pid)).toEqual(seqs.map((_, index) => index + 1));
    expect(verifyChain(await chainFrom(store.db, 1, 10_000), [await readHead(store.db)])).toMatchObject({ ok: true });
  });
});

const rest = (milliseconds: number) => new Promise((done) => setTimeout(done, milliseconds));
