import { afterAll, beforeAll, describe, expect, it } from "vitest";
import * as Y from "yjs";
import { z } from "zod";
import { writerOf, writersOfText } from "../../db/authorship.ts";
import { readRows } from "../../db/client.ts";
import { beginEntry, readEntry } from "../../db/entries.ts";
import { newId } from "../../db/ids.ts";
import { removeMember } from "../../db/notebooks.ts";
import { appendUpdate, LARGEST_UPDATE_BYTES, pageState, strayUpdates, updatesAfter } from "../../db/updates.ts";
import { libraryDatabase, signIn, type TestDatabase, theAdministrator } from "../support/database.ts";
import {
  addBlock,
  countRows,
  eventsOf,
  firstLine,
  type Lab,
  makeDraft,
  makeLab,
  openWriter,
  rowOf,
  sign,
  sql,
  textOf,
} from "../support/laboratory.ts";

let store: TestDatabase;
let lab: Lab;
beforeAll(async () => {
  store = await libraryDatabase();
  lab = await makeLab(store.db);
});
afterAll(() => store.close());

const begin = () => beginEntry(store.db, lab.author, { notebookId: lab.notebookId });
const post = (actor: Lab["author"], revisionId: string, bytes: Uint8Array, updateId = newId()) =>
  appendUpdate(store.db, actor, { revisionId, updateId, bytes });

describe("what is typed", () => {
  it("is numbered in the order of its acceptance and read back as it was typed (COL-03)", async () => {
    const { revisionId } = await begin();
    const writer = await openWriter(store.db, lab.author, revisionId);
    expect(await writer.type("Weighed ")).toBe(2);
    expect(await writer.type("20.00 g")).toBe(3);
    const state = await pageState(store.db, lab.author, revisionId);
    expect(state.seq).toBe(3);
    expect(textOf(state.state)).toBe("<paragraph>Weighed 20.00 g</paragraph>");
    const later = await updatesAfter(store.db, lab.author, revisionId, 2);
    expect(later.map((row) => [row.seq, row.personId])).toEqual([[3, lab.author.id]]);
  });

  it("of two people is one page, with nothing lost or doubled (COL-01)", async () => {
    const { revisionId } = await begin();
    const first = await openWriter(store.db, lab.author, revisionId);
    await first.type("ab");
    const second = await openWriter(store.db, lab.colleague, revisionId);
    await Promise.all([first.type("cd"), second.type("ef")]);
    await first.catchUp();
    await second.catchUp();
    const server = textOf((await pageState(store.db, lab.author, revisionId)).state);
    expect(first.doc.getXmlFragment("page").toString()).toBe(server);
    expect(second.doc.getXmlFragment("page").toString()).toBe(server);
    expect([...server.replace(/<\/?paragraph>/g, "")].sort().join("")).toBe("abcdef");
  });

  it("is answered with the first number when it is sent again, and stands once", async () => {
    const { revisionId } = await begin();
    const writer = await openWriter(store.db, lab.author, revisionId);
    const bytes = writer.change((page) => firstLine(page).insert(0, "once"));
    const updateId = newId();
    const first = await post(lab.author, revisionId, bytes, updateId);
    await writer.type(" more");
    expect(await post(lab.author, revisionId, bytes, updateId)).toEqual(first);
    expect(await countRows(store.db, "updates", revisionId)).toBe(3);
    const other = writer.change((page) => firstLine(page).insert(0, "x"));
    await expect(post(lab.author, revisionId, other, updateId)).rejects.toMatchObject({ code: "update.invalid" });
  });

  it("and changes nothing leaves no row and makes nobody a contributor", async () => {
    const { id, revisionId } = await begin();
    const writer = await openWriter(store.db, lab.author, revisionId);
    const bytes = writer.change((page) => firstLine(page).insert(0, "mine"));
    const { seq } = await post(lab.author, revisionId, bytes);
    expect(await post(lab.colleague, revisionId, bytes)).toEqual({ seq });
    expect(await post(lab.colleague, revisionId, Y.encodeStateAsUpdate(new Y.Doc()))).toEqual({ seq });
    expect(await countRows(store.db, "updates", revisionId)).toBe(2);
    expect((await eventsOf(store.db, id)).map((event) => event.action)).toEqual(["entry.begun", "contributor.added"]);
  });

  it("makes its writer a contributor once, with an event; the server's first state makes nobody one (REC-01)", async () => {
    const { id, revisionId } = await begin();
    expect(await countRows(store.db, "contributors")).toBe(
      (
        await readRows(
          store.db,
          z.object({ entry_id: z.string() }),
          sql`select entry_id from contributors where entry_id <> ${id}`,
        )
      ).length,
    );
    const writer = await openWriter(store.db, lab.colleague, revisionId);
    await writer.type("a");
    await writer.type("b");
    const added = (await eventsOf(store.db, id)).filter((event) => event.action === "contributor.added");
    expect(added.map((event) => event.personId)).toEqual([lab.colleague.id]);
  });

  it("survives 450 updates with snapshots between, and loads the same from the store alone", {
    timeout: 120_000,
  }, async () => {
    const { revisionId } = await begin();
    const writer = await openWriter(store.db, lab.author, revisionId);
    for (let count = 0; count < 450; count += 1) await writer.type(String(count % 10));
    expect(await countRows(store.db, "snapshots", revisionId)).toBe(2);
    globalThis.counterleafPages?.clear();
    const { seq, state } = await pageState(store.db, lab.author, revisionId);
    expect(seq).toBe(451);
    expect(textOf(state)).toBe(writer.doc.getXmlFragment("page").toString());
    expect(await writer.type("!")).toBe(452);
  });

  it("is not believed from memory when the store has moved on without it", async () => {
    const { revisionId } = await begin();
    const writer = await openWriter(store.db, lab.author, revisionId);
    await writer.type("kept");
    const bytes = writer.change((page) => firstLine(page).insert(0, "rolled back "));
    const rolledBack = store.db.transaction(async (tx) => {
      await appendUpdate(tx, lab.author, { revisionId, updateId: newId(), bytes });
      throw new Error("the outer transaction fails");
    });
    await expect(rolledBack).rejects.toThrow("the outer transaction fails");
    expect(textOf((await pageState(store.db, lab.author, revisionId)).state)).toBe("<paragraph>kept</paragraph>");
    expect(await post(lab.author, revisionId, bytes)).toEqual({ seq: 3 });
    expect(textOf((await pageState(store.db, lab.author, revisionId)).state)).toBe(
      "<paragraph>rolled back kept</paragraph>",
    );
  });
});

describe("typed values", () => {
  it("are rows with who set them, and one event each with old and new (REC-01, CAL-01)", async () => {
    const { id, revisionId } = await begin();
    const writer = await openWriter(store.db, lab.author, revisionId);
    const row = await rowOf(store.db, "row1", "reagent:sodium-chloride", "0.100");
    await writer.write((page) => addBlock(page, "blk1", [{ ...row, unit: "mol/L" }]));
    const path = "block.blk1.row.row1.amount";
    expect(await writerOf(store.db, lab.author, { revisionId, path })).toMatchObject({
      value: "0.100",
      personId: lab.author.id,
    });

    const second = await openWriter(store.db, lab.colleague, revisionId);
    await second.write((page) => {
      const block = page.get(page.length - 1);
      const element = block instanceof Y.XmlElement ? block.get(0) : null;
      if (element instanceof Y.XmlElement) element.setAttribute("amount", "0.10");
    });
    expect(await writerOf(store.db, lab.author, { revisionId, path })).toMatchObject({
      value: "0.10",
      personId: lab.colleague.id,
    });
    await writer.catchUp();
    await writer.write((page) => page.delete(page.length - 1, 1));
    expect(await writerOf(store.db, lab.author, { revisionId, path })).toBeNull();

    const about = (await eventsOf(store.db, id)).filter((event) => event.detail.path === path);
    expect(about.map(({ action, personId, detail }) => [action, personId, detail.old, detail.new])).toEqual([
      ["value.set", lab.author.id, null, "0.100"],
      ["value.changed", lab.colleague.id, "0.100", "0.10"],
      ["value.cleared", lab.author.id, "0.10", null],
    ]);
    expect(about[0]?.detail.label).toBe("E1, sodium chloride: amount");
  });

  it("of the head stand on the revision, and running text has no event", async () => {
    const { id, revisionId, label, writer } = await makeDraft(store.db, lab);
    const before = (await eventsOf(store.db, id)).length;
    await writer.type(" and more words");
    expect((await eventsOf(store.db, id)).length).toBe(before);
    expect((await readEntry(store.db, lab.author, label)).head).toMatchObject({
      title: "Descaling bath",
      lateReason: "",
    });
    expect(await writerOf(store.db, lab.author, { revisionId, path: "head.title" })).toMatchObject({
      value: "Descaling bath",
    });
  });
});

describe("who wrote it (REC-12)", () => {
  it("is told for every passage, struck ones too, from the server's record", async () => {
    const { revisionId } = await begin();
    const first = await openWriter(store.db, lab.author, revisionId);
    await first.type("Mixed it. ");
    const second = await openWriter(store.db, lab.colleague, revisionId);
    await second.type("Stirred.");
    await first.catchUp();
    await first.write((page) => firstLine(page).delete(0, 6));
    const [line] = await writersOfText(store.db, lab.witness, revisionId);
    expect(line?.map(({ text, struck, printedName }) => [text, struck, printedName])).toEqual([
      ["Mixed ", true, "A. Author"],
      ["it. ", false, "A. Author"],
      ["Stirred.", false, "C. Colleague"],
    ]);
    expect(line?.every((passage) => passage.at instanceof Date)).toBe(true);
  });
});

describe("an update is refused", () => {
  const cases: [string, (page: Y.XmlFragment, head: Y.Map<string>, doc: Y.Doc) => void][] = [
    ["with an element that a page does not know", (page) => page.push([new Y.XmlElement("script")])],
    [
      "with an attribute that a page does not know",
      (page) => page.push([elementWith("paragraph", "onclick", "alert(1)")]),
    ],
    [
      "with a link that is a script",
      (page) => firstLine(page).insert(0, "x", { link: { href: "javascript:alert(1)" } }),
    ],
    ["with a result in a block", (page) => page.push([elementWith("equilibrium", "pH", "7.00")])],
    ["with text where no text may stand", (page) => page.push([withText("bulletList")])],
    ["with a day that does not exist", (_, head) => head.set("doneOn", "2026-02-30")],
    ["with another root", (_, __, doc) => doc.getMap("signature").set("by", "me")],
    ["with a character that cannot be kept", (page) => firstLine(page).insert(0, "a\u0000b")],
  ];
  it.each(cases)("%s, and nothing of it remains (COL-08)", async (_, edit) => {
    const { id, revisionId } = await begin();
    const writer = await openWriter(store.db, lab.author, revisionId);
    await writer.type("good");
    const before = await eventsOf(store.db, id);
    const bytes = writer.change((page, head) => edit(page, head, writer.doc));
    await expect(post(lab.author, revisionId, bytes)).rejects.toMatchObject({ code: "page.invalid" });
    expect(await countRows(store.db, "updates", revisionId)).toBe(2);
    expect(await eventsOf(store.db, id)).toEqual(before);
    const other = await openWriter(store.db, lab.colleague, revisionId);
    await other.type(" still");
    expect(textOf((await pageState(store.db, lab.author, revisionId)).state)).toBe("<paragraph>good still</paragraph>");
  });

  it("when a text node of an empty list is filled by the short road", async () => {
    const { revisionId } = await begin();
    const writer = await openWriter(store.db, lab.author, revisionId);
    await writer.write((page) => page.push([withText("bulletList", "")]));
    const bytes = writer.change((page) => {
      const list = page.get(page.length - 1);
      const text = list instanceof Y.XmlElement ? list.get(0) : null;
      if (text instanceof Y.XmlText) text.insert(0, "loose");
    });
    await expect(post(lab.author, revisionId, bytes)).rejects.toMatchObject({ code: "page.invalid" });
  });

  it("when it is bytes without sense, or far too many", async () => {
    const { revisionId } = await begin();
    const noise = Uint8Array.from({ length: 300 }, (_, index) => (index * 7919) % 251);
    await expect(post(lab.author, revisionId, noise)).rejects.toMatchObject({ code: "update.invalid" });
    await expect(post(lab.author, revisionId, new Uint8Array())).rejects.toMatchObject({ code: "update.invalid" });
    const large = new Uint8Array(LARGEST_UPDATE_BYTES + 1);
    await expect(post(lab.author, revisionId, large)).rejects.toMatchObject({ code: "update.too-large" });
    expect(await countRows(store.db, "updates", revisionId)).toBe(1);
  });

  it("when it builds on one that has not arrived, and accepted once that one has", async () => {
    const { revisionId } = await begin();
    const writer = await openWriter(store.db, lab.author, revisionId);
    const first = writer.change((page) => firstLine(page).insert(0, "first "));
    const second = writer.change((page) => firstLine(page).insert(6, "second"));
    await expect(post(lab.author, revisionId, second)).rejects.toMatchObject({
      code: "update.invalid",
      detail: { incomplete: true },
    });
    await post(lab.author, revisionId, first);
    expect(await post(lab.author, revisionId, second)).toEqual({ seq: 3 });
    // On a line that the server does not have: no gap in the writer's own clock, but a missing other.
    const other = await openWriter(store.db, lab.colleague, revisionId);
    const unseen = writer.change((page) => page.push([withText("paragraph", "unseen")]));
    Y.applyUpdate(other.doc, unseen);
    const onUnseen = other.change((page) => page.push([withText("paragraph", "after it")]));
    await expect(post(lab.colleague, revisionId, onUnseen)).rejects.toMatchObject({ code: "update.invalid" });
    expect(await post(lab.author, revisionId, unseen)).toEqual({ seq: 4 });
    expect(await post(lab.colleague, revisionId, onUnseen)).toEqual({ seq: 5 });
  });

  it("when it writes in another's name, even of the one who signed in elsewhere (REC-12)", async () => {
    const { id, revisionId } = await begin();
    const writer = await openWriter(store.db, lab.author, revisionId);
    await writer.type("mine");
    const forged = new Y.Doc({ gc: false });
    Y.applyUpdate(forged, (await pageState(store.db, lab.author, revisionId)).state);
    forged.clientID = writer.doc.clientID;
    const before = Y.encodeStateVector(forged);
    firstLine(forged.getXmlFragment("page")).insert(4, " too, says another");
    const bytes = Y.encodeStateAsUpdate(forged, before);
    await expect(post(lab.colleague, revisionId, bytes)).rejects.toMatchObject({ code: "update.forged" });
    expect((await readEntry(store.db, lab.author, await labelOf(id))).contributors.map((person) => person.id)).toEqual([
      lab.author.id,
    ]);
    // The same person in a new session goes on with the same page: typed text outlives a session (ADM-01).
    const again = await signIn(store.db, lab.author.id);
    expect(await post(again, revisionId, bytes)).toEqual({ seq: 3 });
  });

  it("in the name of the server, whose first state belongs to nobody", async () => {
    const { revisionId } = await begin();
    const forged = new Y.Doc({ gc: false });
    Y.applyUpdate(forged, (await pageState(store.db, lab.author, revisionId)).state);
    const [serverId] = [...forged.store.clients.keys()];
    forged.clientID = serverId ?? 0;
    const before = Y.encodeStateVector(forged);
    firstLine(forged.getXmlFragment("page")).insert(0, "the server wrote this");
    await expect(post(lab.author, revisionId, Y.encodeStateAsUpdate(forged, before))).rejects.toMatchObject({
      code: "update.forged",
    });
  });
});

describe("who may write", () => {
  it.each([
    ["author", null],
    ["colleague", null],
    ["witness", "revision.forbidden"],
    ["supervisor", "revision.forbidden"],
    ["outsider", "entry.not-found"],
  ] as const)("%s: %s", async (who, code) => {
    const { revisionId } = await begin();
    const author = await openWriter(store.db, lab.author, revisionId);
    const bytes = author.change((page) => firstLine(page).insert(0, "words"));
    const posted = post(lab[who], revisionId, bytes);
    if (code === null) expect(await posted).toEqual({ seq: 2 });
    else await expect(posted).rejects.toMatchObject({ code });
  });

  it("is asked anew at each update: a member who was taken out meanwhile is one no more", async () => {
    const own = await makeLab(store.db);
    const draft = await beginEntry(store.db, own.author, { notebookId: own.notebookId });
    const writer = await openWriter(store.db, own.colleague, draft.revisionId);
    await writer.type("in");
    const administrator = await theAdministrator(store.db);
    await removeMember(store.db, administrator, {
      notebookId: own.notebookId,
      personId: own.colleague.id,
      reason: "left the group",
    });
    // The actor is the one of a moment ago, as a request in flight has it.
    await expect(writer.type("out")).rejects.toMatchObject({ code: "entry.not-found" });
    await expect(pageState(store.db, own.colleague, draft.revisionId)).rejects.toMatchObject({
      code: "entry.not-found",
    });
  });

  it("finds nothing where there is nothing", async () => {
    await expect(pageState(store.db, lab.author, newId())).rejects.toMatchObject({ code: "entry.not-found" });
  });
});

describe("what arrives for a revision that is no longer a draft (COL-04)", () => {
  it("is refused, kept once for its writer alone, and never merged", async () => {
    const { id, revisionId, writer } = await makeDraft(store.db, lab);
    const offline = await openWriter(store.db, lab.colleague, revisionId);
    const bytes = offline.change((page) => firstLine(page).insert(0, "typed in the cellar "));
    await sign(store.db, lab.author, revisionId);
    const state = await pageState(store.db, lab.author, revisionId);
    const updateId = newId();
    for (let count = 0; count < 2; count += 1) {
      await expect(post(lab.colleague, revisionId, bytes, updateId)).rejects.toMatchObject({
        code: "revision.not-draft",
        detail: { state: "signed", kept: true },
      });
    }
    expect(await pageState(store.db, lab.author, revisionId)).toEqual(state);
    expect((await strayUpdates(store.db, lab.colleague, revisionId)).map((stray) => stray.text)).toEqual([
      "typed in the cellar ",
    ]);
    expect(await strayUpdates(store.db, lab.author, revisionId)).toEqual([]);
    expect((await eventsOf(store.db, id)).filter((event) => event.action === "update.kept-apart")).toHaveLength(1);
    // What was accepted before and only its answer was lost is still answered with its number.
    expect(writer.doc.clientID).not.toBe(offline.doc.clientID);
    await expect(post(lab.outsider, revisionId, bytes)).rejects.toMatchObject({ code: "entry.not-found" });
  });
});

it("answers how often it may be asked (COL-08)", async () => {
  const own = await makeLab(store.db);
  const draft = await beginEntry(store.db, own.author, { notebookId: own.notebookId });
  await store.db.execute(sql`insert into rate_counters (key, window_start, count)
    select ${`updates:${own.author.id}`}, to_timestamp(floor(extract(epoch from now()) / 60) * 60 + delta), 60 from unnest(array[0, 60]) as delta`);
  const writer = await openWriter(store.db, own.author, draft.revisionId);
  await expect(writer.type("flood")).rejects.toMatchObject({ code: "update.too-many" });
});

function elementWith(name: string, attribute: string, value: string): Y.XmlElement {
  const element = new Y.XmlElement(name);
  element.setAttribute(attribute, value);
  return element;
}

function withText(name: string, text = "words"): Y.XmlElement {
  const element = new Y.XmlElement(name);
  element.insert(0, [new Y.XmlText(text)]);
  return element;
}

async function labelOf(entryId: string): Promise<string> {
  const [row] = await readRows(
    store.db,
    z.object({ label: z.string() }),
    sql`select n.code || '-' || lpad(e.number::text, 4, '0') as label from entries e join notebooks n on n.id = e.notebook_id where e.id = ${entryId}`,
  );
  return row?.label ?? "";
}
