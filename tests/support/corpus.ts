// A store full of entries whose answers are known beforehand: written straight into the tables, and remembered here.
import { sql } from "drizzle-orm";
import { z } from "zod";
import { type Db, readRows } from "../../db/client.ts";
import { newId } from "../../db/ids.ts";
import type { State } from "../../db/states.ts";

export type KnownEntry = {
  entryId: string;
  label: string;
  notebookId: string;
  authorId: string;
  createdAt: string;
  revisions: KnownRevision[];
};
export type KnownRevision = {
  id: string;
  number: number;
  state: State;
  title: string;
  text: string;
  doneOn: string;
  occurrences: { compound: string; role: "component" | "mentioned"; line: string }[];
  calculated: string[];
  measured: string[];
};

/** A repeatable stream of numbers in [0, 1): mulberry32. */
export function seededRandom(seed: number): () => number {
  let a = seed >>> 0;
  return () => {
    a = (a + 0x6d2b79f5) >>> 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

const WORDS =
  "rinse descaling plate exchanger milk residue flow pump sample titre deposit film drain rest wash scale batch probe".split(
    " ",
  );
const DAY_MS = 86_400_000;

export type CorpusPlan = {
  entries: number;
  seed: number;
  notebooks: { id: string; code: string }[];
  authors: string[];
  /** compounds that the pages are made of */
  compounds: string[];
};

/** Makes entries with one or two revisions each, writes them, and returns what was written. */
export async function writeCorpus(db: Db, plan: CorpusPlan): Promise<KnownEntry[]> {
  const random = seededRandom(plan.seed);
  const pick = <T>(from: readonly T[]): T => {
    const one = from[Math.floor(random() * from.length)];
    if (one === undefined) throw new Error("Nothing to pick from.");
    return one;
  };
  const numbers = new Map<string, number>();
  const start = Date.parse("2024-01-01T06:00:00Z");
  const entries = Array.from({ length: plan.entries }, (_, i): KnownEntry => {
    const notebook = pick(plan.notebooks);
    const number = (numbers.get(notebook.id) ?? 0) + 1;
    numbers.set(notebook.id, number);
    // Every tenth pair shares its instant to the microsecond: only the id tells them apart.
    const at = start + Math.floor(i / (i % 10 === 1 ? 2 : 1)) * 3_600_000;
    const createdAt = new Date(at)
      .toISOString()
      .replace("Z", `${String(Math.floor(random() * 1000)).padStart(3, "0")}Z`);
    const revision = (n: number, state: State): KnownRevision => {
      const occurrences = Array.from({ length: 1 + Math.floor(random() * 3) }, () => {
        const compound = pick(plan.compounds);
        const role = random() < 0.7 ? ("component" as const) : ("mentioned" as const);
        return { compound, role, line: `E1: ${compound} ${(random() * 0.2).toFixed(4)} mol/L` };
      });
      const title = `Trial ${i + 1}, ${pick(WORDS)}`;
      const measured = random() < 0.5 ? [(1 + random() * 12).toFixed(2)] : [];
      return {
        id: newId(),
        number: n,
        state,
        title,
        text: [title, Array.from({ length: 12 }, () => pick(WORDS)).join(" "), ...occurrences.map((o) => o.line)].join(
          "\n",
        ),
        doneOn: new Date(at - Math.floor(random() * 3) * DAY_MS).toISOString().slice(0, 10),
        occurrences,
        calculated: random() < 0.6 ? [(1 + random() * 12).toFixed(4)] : [],
        measured,
      };
    };
    const kind = random();
    const revisions =
      kind < 0.15
        ? [revision(1, "returned"), revision(2, "draft")]
        : [revision(1, kind < 0.5 ? "draft" : kind < 0.7 ? "signed" : kind < 0.95 ? "witnessed" : "voided")];
    return {
      entryId: newId(),
      label: `${notebook.code}-${String(number).padStart(4, "0")}`,
      notebookId: notebook.id,
      authorId: pick(plan.authors),
      createdAt,
      revisions,
    };
  });
  for (let i = 0; i < entries.length; i += 500) await write(db, entries.slice(i, i + 500));
  await db.execute(sql`analyze`);
  return entries;
}

/** States that lead to the one wanted; the triggers let no revision begin as anything but a draft. */
const PATHS: Record<State, readonly State[]> = {
  draft: [],
  signed: ["signed"],
  witnessed: ["signed", "witnessed"],
  returned: ["signed", "returned"],
  superseded: ["signed", "witnessed", "superseded"],
  voided: ["voided"],
};

async function write(db: Db, entries: readonly KnownEntry[]): Promise<void> {
  const rows = (values: unknown[]) => JSON.stringify(values);
  const newest = (entry: KnownEntry) => entry.revisions.at(-1);
  await db.execute(sql`insert into entries (id, notebook_id, number, author_id, created_at, revision_number, state)
    select * from jsonb_to_recordset(${rows(
      entries.map((e) => ({
        id: e.entryId,
        notebook_id: e.notebookId,
        number: Number(e.label.split("-").at(-1)),
        author_id: e.authorId,
        created_at: e.createdAt,
        revision_number: newest(e)?.number,
        state: newest(e)?.state,
      })),
    )}::jsonb) as x (id text, notebook_id text, number int, author_id text, created_at timestamptz, revision_number int, state text)`);
  const revisions = entries.flatMap((e) => e.revisions.map((r) => ({ ...r, entry: e })));
  await db.execute(sql`insert into revisions (id, entry_id, number, state, created_at, created_by, title, done_on)
    select id, entry_id, number, 'draft', at, author, title, done_on from jsonb_to_recordset(${rows(
      revisions.map((r) => ({
        id: r.id,
        entry_id: r.entry.entryId,
        number: r.number,
        at: r.entry.createdAt,
        author: r.entry.authorId,
        title: r.title,
        done_on: r.doneOn,
      })),
    )}::jsonb) as x (id text, entry_id text, number int, at timestamptz, author text, title text, done_on text)`);
  await db.execute(sql`insert into page_texts (revision_id, entry_id, text, calculated_ph, measured_ph)
    select * from jsonb_to_recordset(${rows(
      revisions.map((r) => ({
        revision_id: r.id,
        entry_id: r.entry.entryId,
        text: r.text,
        calculated_ph: r.calculated.join(" ") || null,
        measured_ph: r.measured.join(" ") || null,
      })),
    )}::jsonb) as x (revision_id text, entry_id text, text text, calculated_ph text, measured_ph text)`);
  await db.execute(sql`insert into occurrences (revision_id, position, entry_id, notebook_id, compound_id, role, line)
    select * from jsonb_to_recordset(${rows(
      revisions.flatMap((r) =>
        r.occurrences.map((o, position) => ({
          revision_id: r.id,
          position,
          entry_id: r.entry.entryId,
          notebook_id: r.entry.notebookId,
          compound_id: o.compound,
          role: o.role,
          line: o.line,
        })),
      ),
    )}::jsonb) as x (revision_id text, position int, entry_id text, notebook_id text, compound_id text, role text, line text)`);
  for (let step = 0; step < 3; step++) {
    const moved = revisions.flatMap((r) => {
      const state = PATHS[r.state][step];
      return state === undefined ? [] : [{ id: r.id, state }];
    });
    if (moved.length === 0) continue;
    await db.execute(sql`update revisions r set state = x.state,
        signed_at = case when x.state = 'signed' then r.created_at + interval '1 day' else r.signed_at end,
        witnessed_at = case when x.state = 'witnessed' then r.created_at + interval '2 days' else r.witnessed_at end
      from jsonb_to_recordset(${rows(moved)}::jsonb) as x (id text, state text) where r.id = x.id`);
  }
}

/** Attaches a file's name to a revision, bytes left aside. */
export async function nameAttachment(db: Db, known: KnownEntry, revisionId: string, name: string): Promise<void> {
  const id = newId();
  await db.execute(sql`insert into attachments (id, entry_id, name, announced_type, size, sha256, person_id, at)
    values (${id}, ${known.entryId}, ${name}, 'text/plain', 1, ${"0".repeat(64)}, ${known.authorId}, now())`);
  await db.execute(sql`insert into revision_attachments (revision_id, attachment_id) values (${revisionId}, ${id})`);
}

/** The plan of a statement as lines of text, with sequential scans forbidden where an index can answer. */
export async function explain(db: Db, statement: ReturnType<typeof sql>): Promise<string> {
  const shape = z.object({ "QUERY PLAN": z.string() });
  return db.transaction(async (tx) => {
    await tx.execute(sql`set local enable_seqscan = off`);
    const rows = await readRows(tx, shape, sql`explain ${statement}`);
    return rows.map((row) => row["QUERY PLAN"]).join("\n");
  });
}
