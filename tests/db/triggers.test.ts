// What the database itself refuses, whoever asks: each statement is tried as plain SQL on rows that are there.

import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { z } from "zod";
import { readRows } from "../../db/client.ts";
import { newId } from "../../db/ids.ts";
import { isLegalStep, STATES, type State } from "../../db/states.ts";
import { makeNotebook, makePerson, type SQL, sql, type TestDatabase, testDatabase } from "../support/database.ts";

let store: TestDatabase;
let personId: string;
let notebookId: string;
let made: Awaited<ReturnType<typeof makeRevision>>;
beforeAll(async () => {
  store = await testDatabase();
  const notebook = await makeNotebook(store.db);
  notebookId = notebook.id;
  personId = (await makePerson(store.db, { memberOf: [notebookId] })).id;
  made = await makeRevision();
  await fill(made);
});
afterAll(() => store.close());

/** Nothing of these rows ever changes; the column is one to try an UPDATE with. */
const STAY = {
  events: "action",
  signed_contents: "content",
  signatures: "meaning",
  attachments: "name",
  attachment_chunks: "bytes",
  results: "outcome",
  block_solves: "block_id",
  updates: "bytes",
  stray_updates: "text",
  contributors: "since",
  findings: "engine",
  yjs_clients: "session_id",
} as const;

/** These rows are never removed; the columns named change only where the trigger says. */
const REMAIN = {
  user: ["id", "created_at"],
  notebooks: ["id", "code", "created_at"],
  entries: ["id", "notebook_id", "number", "author_id", "created_at"],
  revisions: [
    "id",
    "entry_id",
    "number",
    "created_at",
    "created_by",
    "begun_because",
    "signed_at",
    "witnessed_at",
    "returned_at",
  ],
  revision_attachments: ["revision_id", "attachment_id"],
  openings: ["revision_id", "person_id", "session_id", "content_sha256"],
  audit_heads: ["id", "seq"],
  constants: ["id", "pka", "source", "uncertainty"],
  signing_keys: ["kid", "public_jwk", "sealed_private", "created_at"],
  invitations: ["code_hash", "roles", "expires_at", "created_by"],
  outbox: ["to", "subject", "text", "created_at"],
  migrations: [],
} as const;

/** What is derived, counted or the sign-in library's, and what stands in the events besides. A new table needs a decision here. */
const FREE = [
  "account",
  "compound_families",
  "compound_names",
  "failures",
  "families",
  "hazards",
  "ions",
  "locks",
  "memberships",
  "mixing",
  "occurrences",
  "page_texts",
  "person_roles",
  "rate_counters",
  "reagents",
  "search_ph",
  "search_words",
  "session",
  "settings",
  "snapshots",
  "typed_values",
  "uploads",
  "verification",
];

describe("every table", () => {
  it("is named here as kept, as remaining or as free (REC-07)", async () => {
    const tables = await readRows(
      store.db,
      z.object({ name: z.string() }),
      sql`select table_name as name from information_schema.tables where table_schema = 'public' and table_type = 'BASE TABLE'`,
    );
    expect(tables.map(({ name }) => name).sort()).toEqual(
      [...Object.keys(STAY), ...Object.keys(REMAIN), ...FREE].sort(),
    );
  });
});

describe.each(Object.entries(STAY))("rows of %s", (table, column) => {
  it("stay as they were written: UPDATE, DELETE and TRUNCATE are refused (REC-01, REC-07)", async () => {
    const before = await dump(table);
    expect(before.length).toBeGreaterThan(0);
    const name = sql.identifier(table);
    await refused(sql`update ${name} set ${sql.identifier(column)} = ${sql.identifier(column)}`);
    await refused(sql`delete from ${name}`);
    await refused(sql`truncate ${name} cascade`);
    expect(await dump(table)).toEqual(before);
  });
});

describe.each(Object.entries(REMAIN))("rows of %s", (table, columns) => {
  it("are never removed (REC-07)", async () => {
    const before = await dump(table);
    expect(before.length).toBeGreaterThan(0);
    await refused(sql`delete from ${sql.identifier(table)}`);
    await refused(sql`truncate ${sql.identifier(table)} cascade`);
    expect(await dump(table)).toEqual(before);
  });
  it.each(columns.map((column) => [column] as const))("keep their %s", async (column) => {
    const before = await dump(table);
    const [type] = await readRows(
      store.db,
      z.object({ name: z.string() }),
      sql`select data_type as name from information_schema.columns where table_name = ${table} and column_name = ${column} and table_schema = 'public'`,
    );
    const another = OTHER_VALUES[type?.name ?? ""];
    if (another === undefined) throw new Error(`No other value is known for ${type?.name}.`);
    await refused(sql`update ${sql.identifier(table)} set ${sql.identifier(column)} = ${another}`);
    expect(await dump(table)).toEqual(before);
  });
});

const OTHER_VALUES: Record<string, SQL | undefined> = {
  text: sql`'another'`,
  integer: sql`98765`,
  bigint: sql`98765`,
  "timestamp with time zone": sql`now() + interval '1 year'`,
  ARRAY: sql`array['administrator']`,
};

describe("a revision", () => {
  const pairs = STATES.flatMap((from) => STATES.filter((to) => to !== from).map((to) => [from, to] as const));

  it.each(pairs)("goes from %s to %s only if the table of states says so (SGN-06, SGN-19)", async (from, to) => {
    const revision = await makeRevision();
    await bring(revision.id, from);
    const step = sql`update revisions set state = ${to} where id = ${revision.id}`;
    if (isLegalStep(from, to)) await store.db.execute(step);
    else await refused(step);
    const [now] = await readRows(
      store.db,
      z.object({ state: z.string() }),
      sql`select state from revisions where id = ${revision.id}`,
    );
    expect(now?.state).toBe(isLegalStep(from, to) ? to : from);
  });

  it("begins as a draft, and knows no other word for a state", async () => {
    await refused(insertRevision(newId(), made.entryId, 90, "signed"));
    await refused(sql`update revisions set state = 'approved' where id = ${made.id}`, /known|is refused/);
  });

  it.each(STATES.filter((state) => state !== "draft").map((state) => [state] as const))(
    "that is %s keeps its title, dates, reasons and numbers, takes no update and no file (REC-07)",
    async (state) => {
      const revision = await makeRevision();
      await bring(revision.id, state);
      for (const change of [
        sql`title = 'another'`,
        sql`done_on = '2026-01-01'`,
        sql`late_reason = 'another'`,
        sql`last_seq = 7`,
        sql`last_typed_at = now()`,
        sql`signed_at = now() + interval '1 day'`,
        sql`witnessed_at = now() + interval '1 day'`,
        sql`returned_at = now() + interval '1 day'`,
        sql`return_reason = 'another'`,
        sql`voided_at = now() + interval '1 day'`,
        sql`void_reason = 'another'`,
      ]) {
        await refused(sql`update revisions set ${change} where id = ${revision.id}`);
      }
      await refused(insertUpdate(revision.id, 1));
      await refused(
        sql`insert into revision_attachments (revision_id, attachment_id) values (${revision.id}, ${made.attachmentId})`,
      );
      await store.db.execute(sql`update revisions set derived_seq = 1 where id = ${revision.id}`);
    },
  );

  it("that is a draft is written on, but numbers of updates never fall", async () => {
    const revision = await makeRevision();
    await store.db.execute(
      sql`update revisions set title = 'Bath', last_seq = 3, done_on = '2026-01-01' where id = ${revision.id}`,
    );
    await refused(sql`update revisions set last_seq = 2 where id = ${revision.id}`);
    await refused(sql`update revisions set signed_at = now() where id = ${revision.id}`);
  });
});

describe("a file that was struck from a draft", () => {
  it("can no longer be struck or brought back once the page is signed (REC-07)", async () => {
    const revision = await makeRevision();
    await store.db.execute(
      sql`insert into revision_attachments (revision_id, attachment_id) values (${revision.id}, ${made.attachmentId})`,
    );
    const strike = sql`update revision_attachments set struck_at = now(), struck_reason = 'blurred' where revision_id = ${revision.id}`;
    await store.db.execute(strike);
    await bring(revision.id, "signed");
    await refused(sql`update revision_attachments set struck_at = null where revision_id = ${revision.id}`);
    await refused(strike);
  });
});

describe("bytes of a file", () => {
  it("come and go while it is being sent, and stay once it is there, without one more", async () => {
    const id = newId();
    await store.db.execute(
      sql`insert into attachment_chunks (attachment_id, index, bytes) values (${id}, 0, 'abc'::bytea)`,
    );
    await store.db.execute(sql`delete from attachment_chunks where attachment_id = ${id}`);
    await refused(
      sql`insert into attachment_chunks (attachment_id, index, bytes) values (${made.attachmentId}, 9, 'abc'::bytea)`,
    );
    await refused(sql`delete from attachment_chunks where attachment_id = ${made.attachmentId}`);
  });
});

describe("numbers", () => {
  it("of entries run without a gap, and of events follow the head (REC-04, REC-06)", async () => {
    await refused(sql`update notebooks set next_number = next_number + 2 where id = ${notebookId}`);
    await refused(sql`update notebooks set next_number = next_number - 1 where id = ${notebookId}`);
    await store.db.execute(sql`update notebooks set next_number = next_number + 1 where id = ${notebookId}`);
    await refused(sql`update audit_heads set seq = seq + 2 where id = 'store'`);
    await refused(sql`update audit_heads set seq = 0 where id = 'store'`);
    await refused(sql`update audit_heads set seq = seq + 1, hash = repeat('f', 64) where id = 'store'`);
    await refused(sql`insert into events (seq, at, action, object_kind, object_id, detail, previous_hash, hash)
      select h.seq + n, now(), 'x', 'x', 'x', '{}', case n when 1 then h.hash else 'another' end, 'x' || n
      from audit_heads h, generate_series(1, 2) n where h.id = 'store'`);
    const event = (
      seq: SQL,
    ) => sql`insert into events (seq, at, action, object_kind, object_id, detail, previous_hash, hash)
      select ${seq}, now(), 'x', 'x', 'x', '{}', hash, 'x' from audit_heads where id = 'store'`;
    await refused(event(sql`seq + 2`));
    await refused(event(sql`seq`));
    await refused(sql`insert into events (seq, at, action, object_kind, object_id, detail, previous_hash, hash)
      select seq + 1, now(), 'x', 'x', 'x', '{}', 'another', 'x' from audit_heads where id = 'store'`);
  });
});

describe("an account", () => {
  it("that is closed is not opened again (SGN-08)", async () => {
    const { id } = await makePerson(store.db);
    await store.db.execute(sql`update "user" set closed_at = now() where id = ${id}`);
    await refused(sql`update "user" set closed_at = null where id = ${id}`);
  });
  it("has roles, signs and an address only in the known spelling", async () => {
    const { id } = await makePerson(store.db);
    await refused(
      sql`insert into person_roles (person_id, role, granted_at) values (${id}, 'owner', now())`,
      /role_known/,
    );
    await refused(sql`update "user" set decimal_sign = ';' where id = ${id}`, /decimal_sign_known/);
    await refused(sql`update "user" set email = 'Upper@test.invalid' where id = ${id}`, /lower_case/);
  });
});

async function refused(statement: SQL, why = /is refused/): Promise<void> {
  const fault: unknown = await store.db.execute(statement).then(
    () => null,
    (thrown: unknown) => thrown,
  );
  expect(fault, "the statement was carried out").not.toBeNull();
  expect(String(fault instanceof Error ? (fault.cause ?? fault) : fault)).toMatch(why);
}

async function dump(table: string): Promise<unknown[]> {
  return readRows(
    store.db,
    z.object({ row: z.string() }),
    sql`select t::text as row from ${sql.identifier(table)} t order by 1`,
  );
}

let number = 0;

async function makeRevision(): Promise<{ id: string; entryId: string; attachmentId: string }> {
  const [entryId, id] = [newId(), newId()];
  number++;
  await store.db.execute(sql`insert into entries (id, notebook_id, number, author_id, created_at, revision_number, state)
    values (${entryId}, ${notebookId}, ${number}, ${personId}, now(), 1, 'draft')`);
  await store.db.execute(insertRevision(id, entryId, 1, "draft"));
  return { id, entryId, attachmentId: made?.attachmentId ?? newId() };
}

function insertRevision(id: string, entryId: string, revision: number, state: State): SQL {
  return sql`insert into revisions (id, entry_id, number, state, created_at, created_by) values (${id}, ${entryId}, ${revision}, ${state}, now(), ${personId})`;
}

function insertUpdate(revisionId: string, seq: number): SQL {
  return sql`insert into updates (revision_id, seq, update_id, bytes, person_id, at) values (${revisionId}, ${seq}, ${newId()}, 'abc'::bytea, ${personId}, now())`;
}

/** Walks the legal way to the state, with the times that belong to each step. */
async function bring(revisionId: string, state: State): Promise<void> {
  const ways: Record<State, SQL[]> = {
    draft: [],
    signed: [sql`state = 'signed', signed_at = now()`],
    witnessed: [sql`state = 'signed', signed_at = now()`, sql`state = 'witnessed', witnessed_at = now()`],
    returned: [
      sql`state = 'signed', signed_at = now()`,
      sql`state = 'returned', returned_at = now(), returned_by = ${personId}, return_reason = 'lot?'`,
    ],
    superseded: [
      sql`state = 'signed', signed_at = now()`,
      sql`state = 'witnessed', witnessed_at = now()`,
      sql`state = 'superseded'`,
    ],
    voided: [sql`state = 'voided', voided_at = now(), void_reason = 'by mistake'`],
  };
  for (const step of ways[state]) await store.db.execute(sql`update revisions set ${step} where id = ${revisionId}`);
}

/** One row at least in every table that is guarded. */
async function fill(revision: { id: string; entryId: string; attachmentId: string }): Promise<void> {
  const { id, entryId, attachmentId } = revision;
  const rows = [
    insertUpdate(id, 1),
    sql`insert into stray_updates (id, revision_id, update_id, bytes, text, person_id, at) values (${newId()}, ${id}, 'u', 'abc'::bytea, 'words', ${personId}, now())`,
    sql`insert into contributors (entry_id, person_id, since) values (${entryId}, ${personId}, now())`,
    sql`insert into yjs_clients (revision_id, client_id, person_id) values (${id}, 7, ${personId})`,
    sql`insert into results (key, engine, inputs, outcome, at) values ('k', '1', '{}', '{}', now())`,
    sql`insert into block_solves (revision_id, block_id, key, person_id, at) values (${id}, 'b', 'k', ${personId}, now())`,
    sql`insert into attachment_chunks (attachment_id, index, bytes) values (${attachmentId}, 0, 'abc'::bytea)`,
    sql`insert into attachments (id, entry_id, name, announced_type, size, sha256, person_id, at) values (${attachmentId}, ${entryId}, 'a.txt', 'text/plain', 3, 'x', ${personId}, now())`,
    sql`insert into revision_attachments (revision_id, attachment_id) values (${id}, ${attachmentId})`,
    sql`insert into signed_contents (revision_id, version, content, sha256, at) values (${id}, 1, '{}', 'x', now())`,
    sql`insert into signatures (id, revision_id, kind, person_id, printed_name, role, meaning, at, content_sha256, manifest, jws, kid)
        values (${newId()}, ${id}, 'author', ${personId}, 'R. Okafor', 'researcher', 'written by me', now(), 'x', '{}', 'x', 'k')`,
    sql`insert into openings (revision_id, person_id, session_id, content_sha256, seq, opened_at) values (${id}, ${personId}, 's', 'x', 0, now())`,
    sql`insert into findings (id, revision_id, person_id, content_sha256, engine, blocks, files, at) values (${newId()}, ${id}, ${personId}, 'x', '1', '[]', '[]', now())`,
    sql`insert into families (id, name, kind, formula, molar_mass, z0, forms) values ('f', 'An acid', 'acid', 'HA', '60', 0, '[]')`,
    sql`insert into constants (id, family_id, step, version, pka, basis, temperature_c, source, from_memory, nominal, since, current)
        values ('f.1.v1', 'f', 1, 1, '4.76', 'thermodynamic', '25', 'a source', false, false, now(), true)`,
    sql`insert into signing_keys (kid, public_jwk, sealed_private, created_at) values ('k', '{}', 'x', now())`,
    sql`insert into invitations (id, code_hash, roles, created_at, expires_at) values (${newId()}, 'x', array['witness'], now(), now())`,
    sql`insert into outbox (id, "to", subject, text, created_at) values (${newId()}, 'a@test.invalid', 's', 't', now())`,
  ];
  for (const row of rows) await store.db.execute(row);
}
