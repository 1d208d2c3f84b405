// `npm run bench`, the store's part: how long an acknowledgement of a keystroke takes, with one writer and with twenty on one
// page, against a bare insert of the same bytes in the same run; and the server's time for a page of ten blocks, solved afresh
// and read from the store. With TEST_DATABASE_URL set it is measured on a server. tests/bench.ts runs it.
import * as Y from "yjs";
import type { Db } from "../../db/client.ts";
import { beginEntry } from "../../db/entries.ts";
import { newId } from "../../db/ids.ts";
import type { Actor } from "../../db/policy.ts";
import { resultFor } from "../../db/results.ts";
import { appendUpdate } from "../../db/updates.ts";
import { libraryDatabase, makeNotebook, makePerson } from "../support/database.ts";
import { addBlock, firstLine, openWriter, rowOf, sql } from "../support/laboratory.ts";

const KEYSTROKES = 400;
const WRITERS = 20;
const BLOCKS = 10;
const PAGES = 12;

type Times = { p50: number; p95: number };
type Print = (line: string) => void;

/** Runs the store's benchmarks; prints `name: value unit` lines. */
export async function runDbBench(print: Print): Promise<void> {
  const store = await libraryDatabase();
  const { db } = store;
  const { id: notebookId } = await makeNotebook(db);
  const people: Actor[] = [];
  for (let count = 0; count < WRITERS; count += 1) {
    people.push(await makePerson(db, { roles: ["researcher"], memberOf: [notebookId] }));
  }
  const [author] = people;
  if (author === undefined) throw new Error("nobody writes");
  const draft = await beginEntry(db, author, { notebookId });
  await fillPage(db, author, draft.revisionId);
  const bare = await bareInserts(db);
  const on = `db (${store.kind})`;
  say(print, `${on} bare insert`, bare, bare);
  say(print, `${on} keystroke, 1 writer`, await typing(db, [author], draft.revisionId, KEYSTROKES), bare);
  say(
    print,
    `${on} keystroke, ${WRITERS} writers on one page`,
    await typing(db, people, draft.revisionId, KEYSTROKES),
    bare,
  );
  say(print, `${on} typed value in a block, with its event`, await amounts(db, author, draft.revisionId, 40), bare);
  const { fresh, kept } = await pagesOfBlocks(db, author, draft.revisionId);
  print(`${on} page of ${BLOCKS} blocks, solved afresh, p50: ${fresh.p50.toFixed(1)} ms`);
  print(`${on} page of ${BLOCKS} blocks, from the store, p50: ${kept.p50.toFixed(1)} ms`);
  print(`${on} page of ${BLOCKS} blocks, afresh against the store: ${(fresh.p50 / kept.p50).toFixed(2)} times`);
  await store.close();
}

/** A page of ten blocks and two hundred lines, so that a validation of the whole page costs something. */
async function fillPage(db: Db, author: Actor, revisionId: string): Promise<void> {
  const writer = await openWriter(db, author, revisionId);
  const row = await rowOf(db, "r", "reagent:sodium-chloride", "0.100");
  await writer.write((page) => {
    for (let line = 0; line < 200; line += 1) {
      const paragraph = new Y.XmlElement("paragraph");
      paragraph.insert(0, [
        new Y.XmlText(`Line ${line} of the page, as long as lines usually are when somebody writes.`),
      ]);
      page.push([paragraph]);
    }
    for (let block = 0; block < 10; block += 1) addBlock(page, `b${block}`, [{ ...row, id: `b${block}r` }]);
  });
}

async function bareInserts(db: Db): Promise<Times> {
  await db.execute(sql`create table bare (id text primary key, bytes bytea not null)`);
  const times: number[] = [];
  for (let count = 0; count < KEYSTROKES; count += 1) {
    const start = performance.now();
    await db.execute(sql`insert into bare values (${newId()}, ${Buffer.alloc(40)})`);
    times.push(performance.now() - start);
  }
  return summary(times);
}

async function typing(db: Db, people: readonly Actor[], revisionId: string, keystrokes: number): Promise<Times> {
  const writers = await Promise.all(people.map((person) => openWriter(db, person, revisionId)));
  const times: number[] = [];
  await Promise.all(
    writers.map(async (writer, index) => {
      const person = people[index];
      if (person === undefined) return;
      for (let count = 0; count < keystrokes / people.length; count += 1) {
        const bytes = writer.change((page) => firstLine(page).insert(0, "k"));
        const start = performance.now();
        await appendUpdate(db, person, { revisionId, updateId: newId(), bytes });
        times.push(performance.now() - start);
      }
    }),
  );
  return summary(times);
}

async function amounts(db: Db, author: Actor, revisionId: string, changes: number): Promise<Times> {
  const writer = await openWriter(db, author, revisionId);
  const times: number[] = [];
  for (let count = 0; count < changes; count += 1) {
    const bytes = writer.change((page) => {
      const block = page.get(page.length - 1);
      const row = block instanceof Y.XmlElement ? block.get(0) : null;
      if (row instanceof Y.XmlElement) row.setAttribute("amount", `0.${100 + count}`);
    });
    const start = performance.now();
    await appendUpdate(db, author, { revisionId, updateId: newId(), bytes });
    times.push(performance.now() - start);
  }
  return summary(times);
}

function summary(times: number[]): Times {
  const sorted = [...times].sort((a, b) => a - b);
  const at = (share: number) => sorted[Math.min(sorted.length - 1, Math.floor(sorted.length * share))] ?? 0;
  return { p50: at(0.5), p95: at(0.95) };
}

/** Ten blocks of two families in Davies, asked for one after another: each page has inputs of its own, then the same once more. */
async function pagesOfBlocks(db: Db, author: Actor, revisionId: string): Promise<{ fresh: Times; kept: Times }> {
  const rows = [
    await rowOf(db, "acid", "reagent:citric-acid-monohydrate", "0.0500"),
    await rowOf(db, "salt", "reagent:disodium-hydrogen-phosphate", "0.0200"),
    await rowOf(db, "base", "reagent:sodium-hydroxide", "0.0300"),
  ];
  const block = (page: number, place: number) => ({
    id: `p${place}`,
    title: "",
    volume: "1.000",
    volumeUnit: "L",
    temperatureC: "25",
    activity: "davies",
    measuredPH: "",
    show: "",
    rows: rows.map((row, index) => ({
      constants: "",
      unit: "mol/L",
      massFraction: "",
      density: "",
      lot: "",
      ...row,
      amount: index === 0 ? `0.0${500 + page * BLOCKS + place}` : row.amount,
    })),
  });
  const ask = async (page: number) => {
    const start = performance.now();
    for (let place = 0; place < BLOCKS; place += 1) {
      const { outcome } = await resultFor(db, author, { revisionId, block: block(page, place) });
      if (!outcome.ok) throw new Error(`the bench's own block is refused: ${JSON.stringify(outcome.refusals)}`);
    }
    return performance.now() - start;
  };
  const fresh: number[] = [];
  const kept: number[] = [];
  for (let page = 0; page < PAGES; page += 1) {
    fresh.push(await ask(page));
    kept.push(await ask(page));
  }
  return { fresh: summary(fresh), kept: summary(kept) };
}

function say(print: Print, what: string, times: Times, bare: Times): void {
  print(`${what}, p50: ${times.p50.toFixed(2)} ms`);
  print(`${what}, p95: ${times.p95.toFixed(2)} ms`);
  if (times !== bare) print(`${what}, p50 against a bare insert: ${(times.p50 / bare.p50).toFixed(1)} times`);
}
