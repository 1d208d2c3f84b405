// Finding entries, against a store whose answers are known beforehand.
import { readFileSync } from "node:fs";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { z } from "zod";
import { searchCompounds } from "../../db/compounds.ts";
import type { Actor } from "../../db/policy.ts";
import {
  CSV_HEADER,
  countEntries,
  csvCells,
  type SearchHit,
  type SearchQuery,
  searchChoices,
  searchEntries,
  searchRows,
} from "../../db/search.ts";
import { explain, type KnownEntry, type KnownRevision, nameAttachment, writeCorpus } from "../support/corpus.ts";
import { libraryDatabase, makeNotebook, makePerson, sql, type TestDatabase } from "../support/database.ts";

let store: TestDatabase;
let corpus: KnownEntry[];
let both: Actor;
let onlyRinse: Actor;
let outsider: Actor;
let notebooks: { descaling: string; rinse: string; pilot: string };

/** Families of a compound, read from the library's file and not from the store: the known answer stands on its own. */
const reagentFile = z
  .object({
    items: z.array(
      z.object({ id: z.string(), gives: z.array(z.object({ kind: z.string(), family: z.string().optional() })) }),
    ),
  })
  .parse(JSON.parse(readFileSync(new URL("../../db/seed/library/reagents.json", import.meta.url), "utf8")));
const familiesOfReagent = new Map(
  reagentFile.items.map((item) => [`reagent:${item.id}`, item.gives.flatMap((part) => part.family ?? [])]),
);
const familiesOf = (compound: string): string[] => familiesOfReagent.get(compound) ?? [compound.split(":")[1] ?? ""];

const COMPOUNDS = [
  ...reagentFile.items
    .filter((item) =>
      item.gives.some((part) =>
        /^(citric|phosphoric|pyrophosphoric|acetic|carbonic)-acid$|^ammonia$/.test(part.family ?? ""),
      ),
    )
    .map((item) => `reagent:${item.id}`),
  "reagent:sodium-hydroxide-50",
  "reagent:sodium-chloride",
  "form:citric-acid:2",
  "family:phosphoric-acid",
];

beforeAll(async () => {
  store = await libraryDatabase();
  const [descaling, rinse, pilot] = [
    await makeNotebook(store.db, { code: "DSB" }),
    await makeNotebook(store.db, { code: "RNB" }),
    await makeNotebook(store.db, { code: "PLT" }),
  ];
  notebooks = { descaling: descaling.id, rinse: rinse.id, pilot: pilot.id };
  both = await makePerson(store.db, {
    roles: ["supervisor"],
    memberOf: [descaling.id, rinse.id],
    printedName: "P. Both",
  });
  onlyRinse = await makePerson(store.db, { roles: ["researcher"], memberOf: [rinse.id], printedName: "R. Rinse" });
  outsider = await makePerson(store.db, { roles: ["administrator"], memberOf: [] });
  const authors = [both.id, onlyRinse.id];
  corpus = await writeCorpus(store.db, {
    entries: 2000,
    seed: 42,
    notebooks: [descaling, rinse, pilot],
    authors,
    compounds: COMPOUNDS,
  });
}, 300_000);
afterAll(() => store.close());

const all = async (actor: Actor, query: SearchQuery): Promise<SearchHit[]> => {
  const hits: SearchHit[] = [];
  for await (const hit of searchRows(store.db, actor, query)) hits.push(hit);
  return hits;
};

const readableBy = (actor: Actor) => corpus.filter((entry) => actor.memberOf.includes(entry.notebookId));
const newestFirst = (a: KnownEntry, b: KnownEntry) =>
  a.createdAt < b.createdAt ? 1 : a.createdAt > b.createdAt ? -1 : a.entryId < b.entryId ? 1 : -1;

/** The answer by hand: labels with the revision found, newest entry first. */
function known(actor: Actor, meets: (revision: KnownRevision, entry: KnownEntry) => boolean): string[] {
  return readableBy(actor)
    .toSorted(newestFirst)
    .flatMap((entry) => {
      const revision = entry.revisions.findLast((each) => meets(each, entry));
      return revision === undefined ? [] : [`${entry.label}/${revision.number}`];
    });
}
const asLabels = (hits: readonly SearchHit[]) => hits.map((hit) => `${hit.label}/${hit.revision}`);
const holds = (family: string) => (revision: KnownRevision) =>
  revision.occurrences.some((each) => familiesOf(each.compound).includes(family));

describe("by compound (FND-01, FND-02)", () => {
  it.each([
    ["trisodium citrate", "citric-acid"],
    ["citric acid", "citric-acid"],
    ["77-92-9", "citric-acid"],
    ["Na3C6H5O7", "citric-acid"],
    ["O7C6H8", "citric-acid"],
    ["2-hydroxypropane-1,2,3-tricarboxylic acid", "citric-acid"],
    ["hydrogen citrate", "citric-acid"],
    ["orthophosphoric acid", "phosphoric-acid"],
    ["monosodium phosphate 2-hydrate", "phosphoric-acid"],
    ["7664-38-2", "phosphoric-acid"],
    ["H3PO4", "phosphoric-acid"],
    ["O4PH3", "phosphoric-acid"],
    ["brushite", "phosphoric-acid"],
    ["tetrasodium pyrophosphate", "pyrophosphoric-acid"],
    ["sodium bicarbonate", "carbonic-acid"],
  ])("%s finds every entry with %s, its salts, hydrates, forms and solutions, and no other", async (name, family) => {
    const { items } = await searchCompounds(store.db, name, 1);
    const expected = known(both, holds(family));
    expect(expected.length).toBeGreaterThan(20);
    const hits = await all(both, { compound: items[0]?.id });
    expect(asLabels(hits)).toEqual(expected);
    expect(await countEntries(store.db, both, { compound: items[0]?.id })).toBe(expected.length);
  });

  it("says in which role and on which line the compound stands", async () => {
    const byRevision = new Map(
      corpus.flatMap((entry) => entry.revisions.map((each) => [`${entry.label}/${each.number}`, each])),
    );
    for (const hit of (await all(both, { compound: "family:citric-acid" })).slice(0, 50)) {
      const here = (byRevision.get(`${hit.label}/${hit.revision}`)?.occurrences ?? []).filter((each) =>
        familiesOf(each.compound).includes("citric-acid"),
      );
      const there = [
        ...here.filter((each) => each.role === "component"),
        ...here.filter((each) => each.role === "mentioned"),
      ];
      expect(hit.lines.map((line) => ({ compound: line.compound?.id, role: line.role, line: line.line }))).toEqual(
        there.slice(0, 3),
      );
      expect(hit.moreLines).toBe(Math.max(0, there.length - 3));
    }
  });

  it("can be narrowed to some of the compounds and to a role", async () => {
    const narrow = ["reagent:citric-acid-monohydrate"];
    expect(asLabels(await all(both, { compound: "reagent:citric-acid", narrow }))).toEqual(
      known(both, (revision) => revision.occurrences.some((each) => narrow.includes(each.compound))),
    );
    expect(asLabels(await all(both, { compound: "reagent:citric-acid", roles: ["mentioned"] }))).toEqual(
      known(both, (revision) =>
        revision.occurrences.some(
          (each) => each.role === "mentioned" && familiesOf(each.compound).includes("citric-acid"),
        ),
      ),
    );
    expect(await all(both, { compound: "reagent:citric-acid", narrow: ["reagent:sodium-chloride"] })).toEqual([]);
  });

  it("refuses a compound that the library lacks", async () => {
    await expect(searchEntries(store.db, both, { query: { compound: "reagent:nothing" } })).rejects.toMatchObject({
      code: "compound.not-found",
    });
  });
});

describe("by words", () => {
  it("finds beginnings of words in title and page, all of them together", async () => {
    const meets = (revision: KnownRevision) => /\bresid/.test(revision.text) && /\bpump\b/.test(revision.text);
    expect(asLabels(await all(both, { words: "Pump resid" }))).toEqual(known(both, meets));
  });

  it("finds what stands in quotation marks as it stands", async () => {
    const meets = (revision: KnownRevision) => /\bmilk\s+residue\b/.test(revision.text);
    expect(asLabels(await all(both, { words: '"milk residue"' }))).toEqual(known(both, meets));
  });

  it("finds an entry by its number, and by the name of a file on it, accents or not", async () => {
    const [entry] = readableBy(both);
    if (entry === undefined) throw new Error("no entry");
    expect((await all(both, { words: entry.label })).map((hit) => hit.label)).toEqual([entry.label]);
    const draft = readableBy(both).find((each) => each.revisions.length === 1 && each.revisions[0]?.state === "draft");
    if (draft?.revisions[0] === undefined) throw new Error("no draft");
    await nameAttachment(store.db, draft, draft.revisions[0].id, "élution_curve-7.csv");
    for (const words of ["elution", "ÉLUTION", "élution_curve-7.csv", "curve"]) {
      expect(
        (await all(both, { words })).map((hit) => hit.label),
        words,
      ).toEqual([draft.label]);
    }
  });

  it("shows the line of the page in which they stand", async () => {
    const [hit] = await all(both, { words: "residue" });
    expect(hit?.lines.at(-1)).toMatchObject({ role: "words", compound: null });
    expect(hit?.lines.at(-1)?.line).toMatch(/residue/);
  });

  it.each(["' | x", "a & !b", "\\", "':*", "((", "<->", "%", "—", "x:*A", "''''"])(
    "takes %j as words and nothing else",
    async (words) => {
      await expect(all(both, { words })).resolves.toBeInstanceOf(Array);
    },
  );
});

describe("by state, people, dates and pH", () => {
  it("finds states, of the newest revision or of all", async () => {
    expect(asLabels(await all(both, { states: ["returned"] }))).toEqual(
      known(both, (revision) => revision.state === "returned"),
    );
    expect(await all(both, { states: ["returned"], newestOnly: true })).toEqual([]);
    expect(asLabels(await all(both, { states: ["signed", "witnessed"] }))).toEqual(
      known(both, (revision) => ["signed", "witnessed"].includes(revision.state)),
    );
  });

  it("finds author and notebook", async () => {
    expect(asLabels(await all(both, { authorId: both.id, notebookId: notebooks.rinse }))).toEqual(
      known(both, (_, entry) => entry.authorId === both.id && entry.notebookId === notebooks.rinse),
    );
  });

  it("finds days, both ends included: recorded, done, signed", async () => {
    const [from, to] = ["2024-01-20", "2024-01-22"];
    const inside = (day: string) => day >= from && day <= to;
    expect(asLabels(await all(both, { dates: { kind: "recorded", from, to } }))).toEqual(
      known(both, (_, entry) => inside(entry.createdAt.slice(0, 10))),
    );
    expect(asLabels(await all(both, { dates: { kind: "done", from, to } }))).toEqual(
      known(both, (revision) => inside(revision.doneOn)),
    );
    const dayAfter = (at: string) =>
      new Date(Date.parse(`${at.slice(0, 23)}Z`) + 86_400_000).toISOString().slice(0, 10);
    expect(asLabels(await all(both, { dates: { kind: "signed", from, to } }))).toEqual(
      known(
        both,
        (revision, entry) =>
          ["signed", "witnessed", "returned"].includes(revision.state) && inside(dayAfter(entry.createdAt)),
      ),
    );
    const tokyo = await all({ ...both, timeZone: "Asia/Tokyo" }, { dates: { kind: "recorded", from, to } });
    const inTokyo = (at: string) =>
      new Date(Date.parse(`${at.slice(0, 23)}Z`) + 9 * 3_600_000).toISOString().slice(0, 10);
    expect(asLabels(tokyo)).toEqual(known(both, (_, entry) => inside(inTokyo(entry.createdAt))));
  });

  it("finds a range of measured or of calculated pH, and never the one for the other (FND-07)", async () => {
    const within = (values: readonly string[]) => values.some((value) => Number(value) >= 1.5 && Number(value) <= 4);
    expect(asLabels(await all(both, { pH: { kind: "measured", from: 1.5, to: 4 } }))).toEqual(
      known(both, (revision) => within(revision.measured)),
    );
    const hits = await all(both, { pH: { kind: "calculated", from: 1.5, to: 4 } });
    expect(asLabels(hits)).toEqual(known(both, (revision) => within(revision.calculated)));
    for (const hit of hits) expect(hit.calculatedPH.some((pH) => pH >= 1.5 && pH <= 4)).toBe(true);
  });

  it("finds what meets everything at once, in one and the same revision", async () => {
    const query: SearchQuery = {
      compound: "family:phosphoric-acid",
      states: ["witnessed"],
      words: "rinse",
      pH: { kind: "measured", from: 1, to: 9 },
    };
    const meets = (revision: KnownRevision) =>
      holds("phosphoric-acid")(revision) &&
      revision.state === "witnessed" &&
      /\brinse/.test(revision.text) &&
      revision.measured.some((value) => Number(value) >= 1 && Number(value) <= 9);
    expect(asLabels(await all(both, query))).toEqual(known(both, meets));
    expect(await countEntries(store.db, both, query)).toBe(known(both, meets).length);
  });

  it.each([
    [{ dates: { kind: "done", from: "2024-02-30" } }, "dates.from"],
    [{ dates: { kind: "done", from: "2024-02-02", to: "2024-02-01" } }, "dates.to"],
    [{ dates: { kind: "recorded", to: "1. 2. 2024" } }, "dates.to"],
    [{ pH: { kind: "measured", from: Number.NaN, to: 4 } }, "pH.from"],
    [{ pH: { kind: "measured", from: 5, to: 4 } }, "pH.to"],
    [{ words: "x".repeat(401) }, "words"],
    [{ words: "a\u0000b" }, "words"],
    [{ asOf: "yesterday" }, "asOf"],
  ] satisfies [SearchQuery, string][])("refuses %j at its field", async (query, field) => {
    await expect(searchEntries(store.db, both, { query })).rejects.toMatchObject({
      code: "search.invalid",
      detail: { field },
    });
    await expect(countEntries(store.db, both, query)).rejects.toMatchObject({ code: "search.invalid" });
  });
});

describe("what one may not read (FND-03)", () => {
  it("is in no hit and in no count", async () => {
    for (const query of [{}, { compound: "family:citric-acid" }, { words: "rinse" }] satisfies SearchQuery[]) {
      const meets = (revision: KnownRevision) =>
        (query.compound === undefined || holds("citric-acid")(revision)) &&
        (query.words === undefined || /\brinse/.test(revision.text));
      const hits = await all(onlyRinse, query);
      expect(asLabels(hits)).toEqual(known(onlyRinse, meets));
      expect(hits.every((hit) => hit.notebook.id === notebooks.rinse)).toBe(true);
      expect(await countEntries(store.db, onlyRinse, query)).toBe(hits.length);
    }
  });

  it("answers for a hidden notebook exactly as for one that does not exist", async () => {
    const asOf = "2030-01-01T00:00:00.000Z";
    const hidden = await searchEntries(store.db, onlyRinse, { query: { notebookId: notebooks.pilot, asOf } });
    expect(hidden).toEqual(await searchEntries(store.db, onlyRinse, { query: { notebookId: "nothing", asOf } }));
    expect(hidden).toEqual({ hits: [], next: null, asOf });
  });

  it("gives an administrator without membership nothing", async () => {
    expect(await all(outsider, {})).toEqual([]);
    expect(await countEntries(store.db, outsider, {})).toBe(0);
    expect(await searchChoices(store.db, outsider)).toEqual({ notebooks: [], authors: [] });
  });

  it("offers as choices only one's own notebooks and who wrote in them", async () => {
    const choices = await searchChoices(store.db, onlyRinse);
    expect(choices.notebooks.map((each) => each.code)).toEqual(["RNB"]);
    expect(choices.authors.map((each) => each.name).sort()).toEqual(["P. Both", "R. Rinse"]);
  });
});

describe("pages of hits (FND-06)", () => {
  it("miss and double nothing while entries are added between them", async () => {
    const before = known(both, () => true);
    const seen: string[] = [];
    let after: string | undefined;
    let asOf: string | undefined;
    for (let page = 0; ; page++) {
      const got = await searchEntries(store.db, both, { query: {}, after, limit: 97 });
      asOf ??= got.asOf;
      seen.push(...asLabels(got.hits));
      if (page === 2) {
        await addNow();
      }
      if (got.next === null) break;
      after = got.next;
    }
    expect(seen).toEqual(before);
    const inAll = await countEntries(store.db, both, {});
    expect(inAll).toBe(before.length + 1);
    expect(await countEntries(store.db, both, { asOf })).toBe(before.length);
  });

  it.each([
    "",
    "x",
    "e30",
    Buffer.from('["2024-01-01T00:00:00Z"]').toString("base64url"),
    Buffer.from('["1; drop", "x"]').toString("base64url"),
  ])("refuse the cursor %j", async (after) => {
    await expect(searchEntries(store.db, both, { query: {}, after })).rejects.toMatchObject({
      code: "search.invalid",
      detail: { field: "after" },
    });
  });
});

/** An entry begun while somebody leafs through the hits: later than all of the corpus. */
async function addNow(): Promise<void> {
  await store.db.execute(sql`insert into entries (id, notebook_id, number, author_id, created_at, revision_number, state)
    values ('added', ${notebooks.rinse}, 9999, ${both.id}, now(), 1, 'draft')`);
  await store.db.execute(sql`insert into revisions (id, entry_id, number, state, created_at, created_by)
    values ('added-1', 'added', 1, 'draft', now(), ${both.id})`);
}

describe("the plan", () => {
  it("answers compound, words, pH, notebook, state and dates from indexes", async () => {
    const plans: [string, RegExp][] = [
      [
        await explain(
          store.db,
          sql`select entry_id from occurrences where compound_id in ('reagent:citric-acid', 'family:citric-acid')`,
        ),
        /occurrences_compound/,
      ],
      [
        await explain(store.db, sql`select entry_id from search_words where words @@ to_tsquery('simple', 'milk:*')`),
        /search_words_words/,
      ],
      [
        await explain(store.db, sql`select entry_id from search_ph where kind = 'measured' and ph between 1.5 and 1.6`),
        /search_ph_value/,
      ],
      [
        await explain(
          store.db,
          sql`select id from entries where notebook_id = ${notebooks.rinse} order by created_at desc, id desc limit 25`,
        ),
        /entries_in_notebook_newest|entries_newest/,
      ],
      [await explain(store.db, sql`select entry_id from revisions where state = 'returned'`), /revisions_state/],
      [
        await explain(
          store.db,
          sql`select entry_id from revisions where done_on between '2024-02-01' and '2024-02-02'`,
        ),
        /revisions_done_on/,
      ],
    ];
    for (const [plan, index] of plans) expect(plan).toMatch(index);
  });
});

describe("the cells of a hit", () => {
  it("stand under their header", async () => {
    const [hit] = await all(both, { compound: "family:phosphoric-acid" });
    if (hit === undefined) throw new Error("no hit");
    const cells = csvCells(hit);
    expect(cells.length).toBe(CSV_HEADER.length);
    expect(cells[0]).toBe(hit.label);
    expect(cells[CSV_HEADER.indexOf("state")]).toBe(hit.state);
  });
});
