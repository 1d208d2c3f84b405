import { sql } from "drizzle-orm";
import { beginEntry } from "../../db/entries.ts";
import { takeFrom } from "../../db/rate.ts";
import { findRevision, lockRevision } from "../../db/subjects.ts";
import { makeNotebook, makePerson, testDatabase } from "../support/database.ts";

const store = await testDatabase();
const { db } = store;
const { id: notebookId } = await makeNotebook(db);
const a = await makePerson(db, { roles: ["researcher"], memberOf: [notebookId] });
const d = await beginEntry(db, a, { notebookId });
async function time(name: string, f: () => Promise<unknown>) {
  const ts: number[] = [];
  for (let i = 0; i < 60; i++) {
    const s = performance.now();
    await f();
    ts.push(performance.now() - s);
  }
  ts.sort((x, y) => x - y);
  console.log(name, "p50", ts[30]!.toFixed(2), "min", ts[0]!.toFixed(2), "p95", ts[57]!.toFixed(2));
}
await time("select 1", () => db.execute(sql`select 1`));
await time("takeFrom", () => takeFrom(db, "x", 100000, 60000));
await time("empty tx", () => db.transaction(async () => 1));
await time("findRevision", () => findRevision(db, a, d.revisionId));
await time("tx lock", () => db.transaction((tx) => lockRevision(tx, a, d.revisionId)));
await time("tx update rev", () =>
  db.transaction((tx) => tx.execute(sql`update revisions set last_typed_at = now() where id = ${d.revisionId}`)),
);
let n = 100;
await time("tx insert upd", () =>
  db.transaction((tx) =>
    tx.execute(
      sql`insert into updates (revision_id, seq, update_id, bytes, at) values (${d.revisionId}, ${n++}, ${"u" + n}, ${Buffer.alloc(40)}, now())`,
    ),
  ),
);
await time("notify", () => db.execute(sql`select pg_notify('leaf', 'x')`));
await store.close();
