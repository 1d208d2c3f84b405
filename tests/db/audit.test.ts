import { afterAll, beforeAll, beforeEach, describe, expect, it } from "vitest";
import {
  chainFrom,
  entryChain,
  listEvents,
  lockHeads,
  readHead,
  record,
  recordAll,
  recordRefusal,
} from "../../db/audit.ts";
import { verifyChain, verifyEntryChain } from "../../db/chain.ts";
import { newId } from "../../db/ids.ts";
import type { Actor } from "../../db/policy.ts";
import { EVENT_ACTIONS, sentence, withheldSentence } from "../../db/sentences.ts";
import {
  makeNotebook,
  makePerson,
  sql,
  type TestDatabase,
  testDatabase,
  theAdministrator,
} from "../support/database.ts";

let store: TestDatabase;
let notebookId: string;
let researcher: Actor;
let entryId: string;
beforeAll(async () => {
  store = await testDatabase();
  notebookId = (await makeNotebook(store.db)).id;
  researcher = await makePerson(store.db, { roles: ["researcher"], memberOf: [notebookId], printedName: "R. Okafor" });
});
afterAll(() => store.close());
beforeEach(async () => {
  entryId = await insertEntry(store, notebookId, researcher.id);
});

describe("an event", () => {
  it("is chained in the store and in its entry, with UTC time and canonical detail (REC-01, REC-04, REC-13)", async () => {
    const before = await readHead(store.db);
    const first = await store.db.transaction((tx) =>
      record(tx, researcher, "value.set", on(entryId, { new: "0.100", label: "amount" })),
    );
    const second = await store.db.transaction((tx) =>
      record(
        tx,
        researcher,
        "value.changed",
        on(entryId, { label: "amount", new: "0.110", old: "0.100", reason: "misread" }),
      ),
    );
    expect(first.seq).toBe(before.seq + 1);
    expect([first.entrySeq, second.entrySeq]).toEqual([1, 2]);
    expect(await readHead(store.db)).toEqual({ seq: second.seq, hash: second.hash });
    const own = await entryChain(store.db, entryId);
    expect(own[0]).toMatchObject({ detail: '{"label":"amount","new":"0.100"}', printedName: "R. Okafor" });
    expect(own[0]?.at).toMatch(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$/);
    expect(verifyEntryChain(own)).toMatchObject({ ok: true, events: 2 });
    expect(verifyChain(await chainFrom(store.db, 1, 10_000), [before, await readHead(store.db)])).toMatchObject({
      ok: true,
    });
    const heads = await store.db.transaction((tx) => lockHeads(tx, entryId));
    expect(heads).toEqual({ store: { seq: second.seq, hash: second.hash }, entry: { seq: 2, hash: second.entryHash } });
  });

  it("of many in one stroke is a link of its own, in both chains, in their order (REC-01, REC-04)", async () => {
    const other = await insertEntry(store, notebookId, researcher.id);
    const before = await readHead(store.db);
    // More than go into one statement.
    const happened = Array.from({ length: 1203 }, (_, place) => ({
      action: "value.set" as const,
      ...on(place % 3 === 0 ? other : entryId, { label: "amount", new: String(place) }),
    }));
    const recorded = await store.db.transaction(async (tx) => {
      await record(tx, researcher, "value.set", on(entryId, { new: "first" }));
      return recordAll(tx, researcher, [
        ...happened,
        { action: "demo.seeded", objectKind: "store", objectId: "store" },
      ]);
    });
    expect(recorded.map(({ seq }) => seq)).toEqual(recorded.map((_, index) => before.seq + 2 + index));
    expect(recorded.at(-1)).toMatchObject({ entrySeq: null, entryHash: null });
    const own = await entryChain(store.db, entryId);
    expect(verifyEntryChain(own)).toMatchObject({ ok: true, events: 803 });
    expect(own[1]?.detail).toBe('{"label":"amount","new":"1"}');
    expect(verifyEntryChain(await entryChain(store.db, other))).toMatchObject({ ok: true, events: 401 });
    const heads = [before, await readHead(store.db)];
    expect(heads[1]?.seq).toBe(before.seq + 1205);
    expect(verifyChain(await chainFrom(store.db, 1, 10_000), heads)).toMatchObject({ ok: true });
    expect((await store.db.transaction((tx) => lockHeads(tx, other))).entry.seq).toBe(401);
    expect(await store.db.transaction((tx) => recordAll(tx, researcher, []))).toEqual([]);
  });

  it("goes with its transaction when that is rolled back (REC-01)", async () => {
    const before = await readHead(store.db);
    await expect(
      store.db.transaction(async (tx) => {
        await record(tx, researcher, "value.set", on(entryId, { new: "1" }));
        throw new Error("no");
      }),
    ).rejects.toThrow("no");
    expect(await readHead(store.db)).toEqual(before);
    expect(await entryChain(store.db, entryId)).toEqual([]);
  });

  it("of twenty writers at once, over several entries in any order, queues without a gap or a deadlock (REC-04)", async () => {
    const other = await insertEntry(store, notebookId, researcher.id);
    await Promise.all(
      Array.from({ length: 20 }, (_, place) =>
        store.db.transaction(async (tx) => {
          const [one, two] = place % 2 === 0 ? [entryId, other] : [other, entryId];
          await record(tx, researcher, "value.set", on(one, { new: String(place) }));
          await record(tx, null, "demo.seeded", { objectKind: "store", objectId: "store" });
          await record(tx, researcher, "value.set", on(two, { new: String(place) }));
        }),
      ),
    );
    expect(verifyEntryChain(await entryChain(store.db, entryId))).toMatchObject({ ok: true, events: 20 });
    expect(verifyEntryChain(await entryChain(store.db, other))).toMatchObject({ ok: true, events: 20 });
    expect(verifyChain(await chainFrom(store.db, 1, 10_000))).toMatchObject({ ok: true });
  });

  it("of a refusal is written in a transaction of its own (ACCESS: refusals are events)", async () => {
    const recorded = await recordRefusal(store.db, researcher, {
      code: "revision.contributor",
      request: "countersign",
    });
    const [event] = await chainFrom(store.db, recorded.seq, 1);
    expect(event).toMatchObject({ action: "request.refused", personId: researcher.id });
    expect(event?.detail).toBe('{"code":"revision.contributor","request":"countersign"}');
  });
});

describe("the list of events", () => {
  it("is refused to whoever is no administrator, unless they name an entry that they read (REC-14, ADM-03)", async () => {
    const outsider = await makePerson(store.db, { roles: ["researcher", "supervisor"] });
    await expect(listEvents(store.db, researcher, {})).rejects.toThrow("administration.forbidden");
    await expect(listEvents(store.db, outsider, { filters: { entryId } })).rejects.toThrow("entry.not-found");
    await expect(listEvents(store.db, outsider, { filters: { entryId: newId() } })).rejects.toThrow("entry.not-found");
    await store.db.transaction((tx) => record(tx, researcher, "entry.begun", on(entryId, { label: "DSB-0042" })));
    const { events } = await listEvents(store.db, researcher, { filters: { entryId } });
    expect(events.map((event) => event.sentence)).toEqual(["R. Okafor began the entry DSB-0042."]);
  });

  it("shows an administrator that something happened on an entry, not what the page says (ADM-03)", async () => {
    await store.db.transaction((tx) =>
      record(tx, researcher, "value.changed", on(entryId, { label: "mass", old: "20.0", new: "20.00" })),
    );
    const administrator = await theAdministrator(store.db);
    const { events } = await listEvents(store.db, administrator, { filters: { entryId } });
    expect(events).toHaveLength(1);
    expect(events[0]).toMatchObject({ printedName: "R. Okafor", action: "value.changed", detail: null });
    expect(JSON.stringify(events)).not.toContain("20.0");
  });

  it("filters by person, kind and time, and pages by the last number without a gap or a double (REC-14)", async () => {
    const writer = await makePerson(store.db, { roles: ["researcher"], memberOf: [notebookId] });
    const from = new Date();
    for (let n = 1; n <= 7; n++) {
      await store.db.transaction((tx) => record(tx, writer, "value.set", on(entryId, { label: "n", new: String(n) })));
      await store.db.transaction((tx) =>
        record(tx, researcher, "value.cleared", on(entryId, { label: "n", old: String(n) })),
      );
    }
    const filters = { entryId, personId: writer.id, action: "value.set", from, to: new Date() };
    const seen: unknown[] = [];
    let after: number | undefined;
    for (;;) {
      const page = await listEvents(store.db, researcher, {
        filters,
        limit: 3,
        ...(after === undefined ? {} : { after }),
      });
      expect(page.events.length).toBeLessThanOrEqual(3);
      seen.push(...page.events.map((event) => event.detail?.new));
      if (page.next === null) break;
      after = page.next;
    }
    expect(seen).toEqual(["7", "6", "5", "4", "3", "2", "1"]);
    expect(await listEvents(store.db, researcher, { filters: { ...filters, to: new Date(0) } })).toEqual({
      events: [],
      next: null,
    });
  });
});

describe("a sentence", () => {
  it("stands for every action, with and without its detail", () => {
    for (const action of EVENT_ACTIONS) {
      const text = sentence({ action, printedName: "R. Okafor", objectKind: "x", objectId: "y", detail: {} });
      expect(text).toMatch(/^R\. Okafor .+\.$/);
      expect(text).not.toMatch(/undefined|null|\[object/);
      expect(withheldSentence({ action, printedName: "R. Okafor" })).toMatch(/^R\. Okafor: .+\.$/);
    }
  });
  it("says old, new and reason", () => {
    const detail = { label: "mass of citric acid", old: "20.0", new: "20.00", reason: "misread" };
    expect(
      sentence({ action: "value.changed", printedName: "R. Okafor", objectKind: "x", objectId: "y", detail }),
    ).toBe("R. Okafor changed mass of citric acid from “20.0” to “20.00” because: misread.");
    const roles = { person: "H. Sato", role: "witness", old: [], new: ["witness"], reason: "trained" };
    expect(
      sentence({ action: "role.granted", printedName: "T. Lindqvist", objectKind: "x", objectId: "y", detail: roles }),
    ).toBe("T. Lindqvist gave H. Sato the role witness; before: none, now: witness because: trained.");
  });
  it("does not fail on an action of a later version", () => {
    expect(sentence({ action: "later.thing", printedName: null, objectKind: "x", objectId: "y", detail: {} })).toBe(
      "The program did “later.thing”.",
    );
  });
});

function on(entry: string, detail: Record<string, string>) {
  return { objectKind: "entry", objectId: entry, entryId: entry, detail };
}

let number = 0;

async function insertEntry({ db }: TestDatabase, notebook: string, authorId: string): Promise<string> {
  const id = newId();
  number++;
  await db.execute(
    sql`insert into entries (id, notebook_id, number, author_id, created_at, revision_number, state)
        values (${id}, ${notebook}, ${number}, ${authorId}, now(), 1, 'draft')`,
  );
  return id;
}
