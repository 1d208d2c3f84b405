// Finding entries by what stands on their pages. What a person may not read is kept out by the query itself, so that neither
// hits nor counts nor errors tell of it. One hit an entry: its newest revision that meets everything asked.
import { type SQL, sql } from "drizzle-orm";
import { z } from "zod";
import type { Db } from "./client.ts";
import { readRows } from "./client.ts";
import { expandedIds, namesOf } from "./compounds.ts";
import { Refused } from "./errors.ts";
import { type Actor, demand, readableNotebooks } from "./policy.ts";
import { STATES, type State } from "./states.ts";

export const SEARCH_ROLES = ["component", "mentioned"] as const;
export type SearchRole = (typeof SEARCH_ROLES)[number];
export const DATE_KINDS = ["recorded", "done", "signed"] as const;
export type DateKind = (typeof DATE_KINDS)[number];
export const PH_KINDS = ["calculated", "measured"] as const;
export type PHKind = (typeof PH_KINDS)[number];

export type SearchQuery = {
  /** compound id; everything of its families is taken in unless `narrow` is set */
  compound?: string | undefined;
  /** the compounds of the expansion to look for; empty or missing = all of them */
  narrow?: readonly string[] | undefined;
  roles?: readonly SearchRole[] | undefined;
  /** words of page, title and attachment names; each may be the beginning of one; "quoted words" stand together */
  words?: string | undefined;
  states?: readonly State[] | undefined;
  notebookId?: string | undefined;
  authorId?: string | undefined;
  /** days as YYYY-MM-DD, both included, in the actor's time zone */
  dates?: { kind: DateKind; from?: string | undefined; to?: string | undefined } | undefined;
  /** which of the two is asked must be said */
  pH?: { kind: PHKind; from: number; to: number } | undefined;
  /** only the newest revision of each entry: returned, superseded and voided ones before it are left aside */
  newestOnly?: boolean | undefined;
  /** only entries begun at or before this instant, as the first page answered it: keeps count, pages and CSV together */
  asOf?: string | undefined;
};

export type SearchHit = {
  entryId: string;
  /** DSB-0042 */
  label: string;
  revision: number;
  /** whether the revision that was found is the entry's newest */
  isNewest: boolean;
  state: State;
  title: string;
  notebook: { id: string; code: string; title: string };
  author: { id: string; name: string };
  recordedAt: string;
  doneOn: string | null;
  signedAt: string | null;
  witnessedAt: string | null;
  calculatedPH: number[];
  measuredPH: number[];
  /** where on the page, compositions first: role, the line, and the compound as named there; "words" for a hit by words */
  lines: { role: SearchRole | "words"; line: string; compound: { id: string; name: string } | null }[];
  /** lines beyond those shown */
  moreLines: number;
};

export type SearchPage = {
  hits: SearchHit[];
  /** hand it in as `after` for the next page; null at the end */
  next: string | null;
  asOf: string;
};

export const LONGEST_SEARCH_PAGE = 100;
/** The most rows of one CSV; beyond it the search is to be narrowed, and says so. */
export const MOST_CSV_ROWS = 50_000;
const LINES_OF_A_HIT = 3;
const MOST_WORDS_CHARACTERS = 400;

/** One page of hits, newest entry first, by the last row's key: nothing is missed or doubled while entries are added. */
export async function searchEntries(
  db: Db,
  actor: Actor,
  { query, after, limit = 25 }: { query: SearchQuery; after?: string | undefined; limit?: number | undefined },
): Promise<SearchPage> {
  demand(actor, "entries.search", null);
  const asked = await ask(db, actor, query);
  const key = after === undefined ? null : readCursor(after);
  const now = query.asOf ?? new Date().toISOString();
  if (asked === null) return { hits: [], next: null, asOf: now };
  const count = Math.min(Math.max(1, Math.trunc(limit)), LONGEST_SEARCH_PAGE);
  const rows = await readHits(db, asked, key, count + 1);
  const shown = rows.slice(0, count);
  const last = shown.at(-1);
  return {
    hits: await withLines(db, asked, shown),
    next: rows.length > count && last !== undefined ? writeCursor(last) : null,
    // Another server's clock may run ahead of this one: what was just shown is never later than "as of".
    asOf: query.asOf ?? laterOf(now, shown[0]?.key ?? now),
  };
}

/** How many hits there are in all, for the same actor and query. */
export async function countEntries(db: Db, actor: Actor, query: SearchQuery): Promise<number> {
  demand(actor, "entries.search", null);
  const asked = await ask(db, actor, query);
  if (asked === null) return 0;
  const [row] = await readRows(
    db,
    z.object({ n: z.coerce.number() }),
    sql`select count(*)::text as n from entries e where ${asked.ofEntry} and exists (${asked.revisions(sql`1`)})`,
  );
  return row?.n ?? 0;
}

/** Every hit in order, page by page. Stops at `MOST_CSV_ROWS`. */
export async function* searchRows(db: Db, actor: Actor, query: SearchQuery): AsyncGenerator<SearchHit> {
  let after: string | undefined;
  for (let rows = 0; rows < MOST_CSV_ROWS; ) {
    const page = await searchEntries(db, actor, { query, after, limit: LONGEST_SEARCH_PAGE });
    yield* page.hits;
    rows += page.hits.length;
    if (page.next === null) return;
    after = page.next;
  }
}

export type SearchChoices = {
  notebooks: { id: string; code: string; title: string }[];
  authors: { id: string; name: string }[];
};

/** What the filters offer: the actor's notebooks, and who has written entries in them. */
export async function searchChoices(db: Db, actor: Actor): Promise<SearchChoices> {
  demand(actor, "entries.search", null);
  const readable = readableNotebooks(actor);
  if (readable.length === 0) return { notebooks: [], authors: [] };
  const notebooks = await readRows(
    db,
    z.object({ id: z.string(), code: z.string(), title: z.string() }),
    sql`select n.id, n.code, n.title from notebooks n where n.id in ${readable} order by n.code`,
  );
  const authors = await readRows(
    db,
    z.object({ id: z.string(), name: z.string() }),
    sql`select u.id, u.name from "user" u
      where exists (select 1 from entries e where e.author_id = u.id and e.notebook_id in ${readable}) order by u.name, u.id`,
  );
  return { notebooks, authors };
}

export const CSV_HEADER = [
  "entry",
  "revision",
  "state",
  "newest revision",
  "title",
  "notebook",
  "author",
  "recorded (UTC)",
  "done on",
  "signed (UTC)",
  "witnessed (UTC)",
  "calculated pH",
  "measured pH",
  "role",
  "compound",
  "line",
] as const;

/** A hit as cells under `CSV_HEADER`. Several values of one cell are parted by "; ". */
export function csvCells(hit: SearchHit): (string | number | null)[] {
  const several = (values: readonly string[]) => [...new Set(values)].join("; ");
  return [
    hit.label,
    hit.revision,
    hit.state,
    hit.isNewest ? "yes" : "no",
    hit.title,
    `${hit.notebook.code} ${hit.notebook.title}`,
    hit.author.name,
    hit.recordedAt,
    hit.doneOn,
    hit.signedAt,
    hit.witnessedAt,
    several(hit.calculatedPH.map(String)),
    several(hit.measuredPH.map(String)),
    several(hit.lines.map((line) => line.role)),
    several(hit.lines.flatMap((line) => line.compound?.name ?? [])),
    several(hit.lines.map((line) => line.line)) + (hit.moreLines > 0 ? `; and ${hit.moreLines} more` : ""),
  ];
}

type Asked = {
  /** conditions on `e`, an entry */
  ofEntry: SQL;
  /** the revisions of `e` that meet everything, with the columns asked for, newest last */
  revisions(columns: SQL): SQL;
  /** the tsquery, or null when no words were asked */
  words: SQL | null;
  compoundIds: string[] | null;
  roles: readonly SearchRole[];
};

/** Turns the question into conditions; null when nothing can be found, because nothing may be read or nothing was meant. */
async function ask(db: Db, actor: Actor, query: SearchQuery): Promise<Asked | null> {
  const checked = checkQuery(query);
  const readable = readableNotebooks(actor).filter((id) => query.notebookId === undefined || id === query.notebookId);
  if (readable.length === 0) return null;
  const compoundIds = await wantedCompounds(db, query);
  if (compoundIds?.length === 0) return null;
  const roles = query.roles ?? [];
  const words = query.words === undefined || query.words.trim() === "" ? null : tsquery(query.words);
  const day = (date: string) => sql`(${date}::date)::timestamp at time zone ${actor.timeZone}`;
  const ofEntry = [sql`e.notebook_id in ${readable}`];
  const ofRevision = [sql`r.entry_id = e.id`];
  if (query.authorId !== undefined) ofEntry.push(sql`e.author_id = ${query.authorId}`);
  if (query.asOf !== undefined) ofEntry.push(sql`e.created_at <= ${query.asOf}::timestamptz`);
  if (query.newestOnly === true) ofRevision.push(sql`r.number = e.revision_number`);
  if (query.states !== undefined && query.states.length > 0) ofRevision.push(sql`r.state in ${query.states}`);
  if (compoundIds !== null) {
    const stands = (extra: SQL) =>
      sql`(select o.entry_id from occurrences o where o.compound_id in ${compoundIds} ${roles.length === 0 ? sql`` : sql`and o.role in ${roles}`} ${extra})`;
    ofEntry.push(sql`e.id in ${stands(sql``)}`);
    ofRevision.push(sql`exists ${stands(sql`and o.revision_id = r.id`)}`);
  }
  if (words !== null) {
    ofEntry.push(sql`e.id in (select w.entry_id from search_words w where w.words @@ ${words})`);
    ofRevision.push(sql`exists (select 1 from search_words w where w.revision_id = r.id and w.words @@ ${words})`);
  }
  if (query.pH !== undefined) {
    const { kind, from, to } = query.pH;
    const reads = sql`p.kind = ${kind} and p.ph between ${from} and ${to}`;
    ofEntry.push(sql`e.id in (select p.entry_id from search_ph p where ${reads})`);
    ofRevision.push(sql`exists (select 1 from search_ph p where p.revision_id = r.id and ${reads})`);
  }
  if (checked.dates !== null) {
    const { kind, from, to } = checked.dates;
    const [column, place] = DATE_COLUMNS[kind];
    const target = place === "entry" ? ofEntry : ofRevision;
    if (from !== null) target.push(kind === "done" ? sql`${column} >= ${from}` : sql`${column} >= ${day(from)}`);
    if (to !== null)
      target.push(kind === "done" ? sql`${column} <= ${to}` : sql`${column} < ${day(to)} + interval '1 day'`);
  }
  return {
    ofEntry: sql.join(ofEntry, sql` and `),
    revisions: (columns) => sql`select ${columns} from revisions r where ${sql.join(ofRevision, sql` and `)}`,
    words,
    compoundIds,
    roles,
  };
}

const DATE_COLUMNS = {
  recorded: [sql`e.created_at`, "entry"],
  done: [sql`r.done_on`, "revision"],
  signed: [sql`r.signed_at`, "revision"],
} as const;

async function wantedCompounds(db: Db, query: SearchQuery): Promise<string[] | null> {
  if (query.compound === undefined) return null;
  const all = await expandedIds(db, [query.compound]);
  if (all.length === 0) throw new Refused("compound.not-found", { compound: query.compound });
  if (query.narrow === undefined || query.narrow.length === 0) return all;
  const wanted = new Set(query.narrow);
  return all.filter((id) => wanted.has(id));
}

function checkQuery(query: SearchQuery): { dates: { kind: DateKind; from: string | null; to: string | null } | null } {
  if ((query.words ?? "").length > MOST_WORDS_CHARACTERS) throw invalid("words");
  if ((query.words ?? "").includes("\u0000")) throw invalid("words");
  if (query.states?.some((state) => !STATES.includes(state))) throw invalid("states");
  if (query.asOf !== undefined && !isInstant(query.asOf)) throw invalid("asOf");
  if (query.pH !== undefined) {
    const { from, to } = query.pH;
    if (!Number.isFinite(from)) throw invalid("pH.from");
    if (!Number.isFinite(to) || to < from) throw invalid("pH.to");
  }
  if (query.dates === undefined) return { dates: null };
  const { kind, from = "", to = "" } = query.dates;
  if (from !== "" && !isDay(from)) throw invalid("dates.from");
  if (to !== "" && (!isDay(to) || (from !== "" && to < from))) throw invalid("dates.to");
  return { dates: { kind, from: from === "" ? null : from, to: to === "" ? null : to } };
}

function laterOf(a: string, b: string): string {
  return Date.parse(a) >= Date.parse(b) ? a : b;
}

function invalid(field: string): Refused {
  return new Refused("search.invalid", { field });
}

function isDay(text: string): boolean {
  if (!/^\d{4}-\d{2}-\d{2}$/.test(text)) return false;
  const day = new Date(`${text}T00:00:00Z`);
  return !Number.isNaN(day.getTime()) && day.toISOString().startsWith(text);
}

function isInstant(text: string): boolean {
  return /^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}:\d{2}(\.\d{1,6})?Z$/.test(text) && !Number.isNaN(Date.parse(text));
}

/**
 * Words joined by "and", each as the beginning of a word; what stands in quotation marks as a phrase. Null in the database, which
 * finds nothing, when there is no word in it.
 */
function tsquery(words: string): SQL {
  const phrases: string[] = [];
  const loose = words.replace(/"([^"]*)"/g, (_, phrase: string) => {
    if (phrase.trim() !== "") phrases.push(phrase);
    return " ";
  });
  const parts = phrases.map((phrase) => sql`phraseto_tsquery('simple', unaccent(${phrase}))`);
  if (loose.trim() !== "" || phrases.length === 0) {
    parts.push(
      sql`(select to_tsquery('simple', string_agg('''' || replace(replace(lexeme, '\\', '\\\\'), '''', '''''') || ''':*', ' & '))
        from unnest(to_tsvector('simple', unaccent(${loose}))))`,
    );
  }
  return sql`(${sql.join(parts, sql` && `)})`;
}

const stateShape = z.enum(STATES);
const numbers = z.string().transform((text) => (text === "" ? [] : text.split(" ").map(Number)));
const hitShape = z.object({
  entry_id: z.string(),
  key: z.string(),
  notebook_id: z.string(),
  code: z.string(),
  notebook_title: z.string(),
  number: z.coerce.number(),
  revision_id: z.string(),
  revision: z.coerce.number(),
  newest: z.coerce.number(),
  state: stateShape,
  title: z.string(),
  author_id: z.string(),
  author: z.string(),
  done_on: z.string().nullable(),
  signed_at: z.string().nullable(),
  witnessed_at: z.string().nullable(),
  calculated: numbers,
  measured: numbers,
  headline: z.string().nullable(),
});
type HitRow = z.infer<typeof hitShape>;

const instant = (column: SQL) => sql`to_char(${column} at time zone 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.US"Z"')`;
const pHOf = (kind: PHKind) =>
  sql`coalesce((select string_agg(p.ph::text, ' ' order by p.position) from search_ph p where p.revision_id = r.id and p.kind = ${kind}), '')`;

type Key = { at: string; id: string };

function readHits(db: Db, asked: Asked, after: Key | null, limit: number): Promise<HitRow[]> {
  const beyond = after === null ? sql`` : sql`and (e.created_at, e.id) < (${after.at}::timestamptz, ${after.id})`;
  const headline =
    asked.words === null
      ? sql`null::text`
      : sql`ts_headline('simple', t.text, ${asked.words}, 'StartSel="", StopSel="", MaxWords=24, MinWords=8, MaxFragments=1')`;
  return readRows(
    db,
    hitShape,
    sql`
      with found as (
        select e.id, e.created_at, e.notebook_id, e.number, e.revision_number, e.author_id,
          (${asked.revisions(sql`r.id`)} order by r.number desc limit 1) as revision_id
        from entries e
        where ${asked.ofEntry} ${beyond} and exists (${asked.revisions(sql`1`)})
        order by e.created_at desc, e.id desc
        limit ${limit}
      )
      select f.id as entry_id, ${instant(sql`f.created_at`)} as key, n.id as notebook_id, n.code, n.title as notebook_title, f.number,
        r.id as revision_id, r.number as revision, f.revision_number as newest, r.state, r.title, u.id as author_id, u.name as author,
        r.done_on, ${instant(sql`r.signed_at`)} as signed_at, ${instant(sql`r.witnessed_at`)} as witnessed_at,
        ${pHOf("calculated")} as calculated, ${pHOf("measured")} as measured, ${headline} as headline
      from found f
      join revisions r on r.id = f.revision_id
      join notebooks n on n.id = f.notebook_id
      join "user" u on u.id = f.author_id
      left join page_texts t on t.revision_id = r.id
      order by f.created_at desc, f.id desc`,
  );
}

const lineShape = z.object({
  revision_id: z.string(),
  role: z.enum(SEARCH_ROLES),
  line: z.string(),
  compound_id: z.string(),
});

async function withLines(db: Db, asked: Asked, rows: readonly HitRow[]): Promise<SearchHit[]> {
  const byRevision = new Map<string, z.infer<typeof lineShape>[]>();
  if (asked.compoundIds !== null && rows.length > 0) {
    const lines = await readRows(
      db,
      lineShape,
      sql`select o.revision_id, o.role, o.line, o.compound_id from occurrences o
        where o.revision_id in ${rows.map((row) => row.revision_id)} and o.compound_id in ${asked.compoundIds}
          ${asked.roles.length === 0 ? sql`` : sql`and o.role in ${asked.roles}`}
        order by o.revision_id, o.role <> 'component', o.position`,
    );
    for (const line of lines) byRevision.set(line.revision_id, [...(byRevision.get(line.revision_id) ?? []), line]);
  }
  const names = await namesOf(
    db,
    [...byRevision.values()].flat().map((line) => line.compound_id),
  );
  return rows.map((row) => {
    const lines = byRevision.get(row.revision_id) ?? [];
    const headline =
      row.headline === null || row.headline.trim() === "" ? [] : [row.headline.replace(/\s+/g, " ").trim()];
    return {
      entryId: row.entry_id,
      label: `${row.code}-${String(row.number).padStart(4, "0")}`,
      revision: row.revision,
      isNewest: row.revision === row.newest,
      state: row.state,
      title: row.title,
      notebook: { id: row.notebook_id, code: row.code, title: row.notebook_title },
      author: { id: row.author_id, name: row.author },
      recordedAt: row.key,
      doneOn: row.done_on,
      signedAt: row.signed_at,
      witnessedAt: row.witnessed_at,
      calculatedPH: row.calculated,
      measuredPH: row.measured,
      lines: [
        ...lines.slice(0, LINES_OF_A_HIT).map((line) => ({
          role: line.role,
          line: line.line,
          compound: { id: line.compound_id, name: names[line.compound_id] ?? line.compound_id },
        })),
        ...headline.map((line) => ({ role: "words" as const, line, compound: null })),
      ],
      moreLines: Math.max(0, lines.length - LINES_OF_A_HIT),
    };
  });
}

const keyShape = z.tuple([z.string().refine(isInstant), z.string().min(1).max(80)]);

/** The last row's key, to the microsecond that the database keeps. Opaque outside. */
function writeCursor(row: HitRow): string {
  return Buffer.from(JSON.stringify([row.key, row.entry_id])).toString("base64url");
}

function readCursor(text: string): Key {
  try {
    const [at, id] = keyShape.parse(JSON.parse(Buffer.from(text, "base64url").toString("utf8")));
    return { at, id };
  } catch {
    throw invalid("after");
  }
}
