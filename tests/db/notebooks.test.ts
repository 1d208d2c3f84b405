import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { listEvents, readHead } from "../../db/audit.ts";
import type { Db } from "../../db/client.ts";
import { newId } from "../../db/ids.ts";
import {
  addMember,
  createNotebook,
  entryLabel,
  listAllNotebooks,
  listNotebooks,
  parseLabel,
  readNotebook,
  removeMember,
} from "../../db/notebooks.ts";
import { type Actor, ROLES } from "../../db/policy.ts";
import {
  again,
  makeNotebook,
  makePerson,
  sql,
  type TestDatabase,
  testDatabase,
  theAdministrator,
} from "../support/database.ts";

let store: TestDatabase;
let db: Db;
let administrator: Actor;
beforeAll(async () => {
  store = await testDatabase();
  db = store.db;
  administrator = await theAdministrator(db);
});
afterAll(() => store.close());

describe("a notebook", () => {
  it("is made by an administrator, with an event", async () => {
    const { id } = await createNotebook(db, administrator, { code: "DSB", title: " Descaling baths ", about: "" });
    expect(await listAllNotebooks(db, administrator)).toContainEqual({
      id,
      code: "DSB",
      title: "Descaling baths",
      about: "",
      entries: 0,
      members: [],
    });
    const { events } = await listEvents(db, administrator, { limit: 1 });
    expect(events[0]).toMatchObject({
      objectId: id,
      sentence: `${administrator.printedName} made the notebook DSB, Descaling baths.`,
    });
  });

  it("is refused with the field that is wrong, and a code is given once", async () => {
    const wrong = (change: object) =>
      createNotebook(db, administrator, { code: "NEW", title: "T", about: "", ...change });
    await expect(wrong({ code: "dsb" })).rejects.toMatchObject({ code: "notebook.invalid", detail: { field: "code" } });
    await expect(wrong({ code: "D-B" })).rejects.toMatchObject({ detail: { field: "code" } });
    await expect(wrong({ title: " " })).rejects.toMatchObject({ detail: { field: "title" } });
    await expect(wrong({ title: "t".repeat(201) })).rejects.toMatchObject({ detail: { field: "title" } });
    await expect(wrong({ about: "a".repeat(4001) })).rejects.toMatchObject({ detail: { field: "about" } });
    await expect(wrong({ code: "DSB" })).rejects.toThrow("notebook.code-taken");
  });

  it.each(ROLES.map((role) => [role] as const))(
    "is made or changed by a %s only if that is the administrator",
    async (role) => {
      const actor = role === "administrator" ? administrator : await makePerson(db, { roles: [role] });
      const { id: personId } = await makePerson(db);
      const { id: notebookId } = await makeNotebook(db);
      const change = { notebookId, personId, reason: "x" };
      const tries = [
        () => createNotebook(db, actor, { code: `R${newId().slice(-6).toUpperCase()}`, title: "T", about: "" }),
        () => addMember(db, actor, change),
        () => removeMember(db, actor, change),
        () => listAllNotebooks(db, actor),
      ];
      const head = await readHead(db);
      for (const attempt of tries) {
        if (role === "administrator") await attempt();
        else await expect(attempt()).rejects.toThrow("administration.forbidden");
      }
      if (role !== "administrator") expect(await readHead(db)).toEqual(head);
    },
  );
});

describe("a membership", () => {
  it("begins and ends with a reason, an event and a bell, and holds from the next request on (ADM-02)", async () => {
    const person = await makePerson(db);
    const { id: notebookId, code } = await makeNotebook(db);
    const heard: string[] = [];
    const stop = await store.listen("leaf", (payload) => heard.push(payload));
    const change = { notebookId, personId: person.id, reason: "new project" };
    await addMember(db, administrator, change);
    expect((await again(db, person)).memberOf).toEqual([notebookId]);
    await expect(addMember(db, administrator, change)).rejects.toThrow("notebook.already-member");
    await removeMember(db, administrator, { ...change, reason: "done" });
    expect((await again(db, person)).memberOf).toEqual([]);
    await expect(removeMember(db, administrator, change)).rejects.toThrow("notebook.not-member");
    await expect(addMember(db, administrator, { ...change, reason: " " })).rejects.toThrow("person.reason-missing");
    await expect(addMember(db, administrator, { ...change, notebookId: newId() })).rejects.toThrow(
      "notebook.not-found",
    );
    await expect(addMember(db, administrator, { ...change, personId: newId() })).rejects.toThrow("person.not-found");
    const { events } = await listEvents(db, administrator, { limit: 2 });
    expect(events.map(({ sentence }) => sentence)).toEqual([
      `${administrator.printedName} ended the membership of ${person.printedName} in the notebook ${code} because: done.`,
      `${administrator.printedName} made ${person.printedName} a member of the notebook ${code} because: new project.`,
    ]);
    await expect.poll(() => heard.length).toBe(2);
    await stop();
  });
});

describe("reading notebooks", () => {
  it("shows a member theirs and nothing of the others; what is hidden and what is missing look alike (ADM-03, ADM-04, FND-03)", async () => {
    const mine = await makeNotebook(db);
    const hidden = await makeNotebook(db);
    const reader = await makePerson(db, { roles: ["witness"], memberOf: [mine.id] });
    const outsider = await makePerson(db, { roles: ["researcher", "witness", "supervisor"] });
    const administratorAsMember = await makePerson(db, { roles: ["administrator"], memberOf: [mine.id] });
    expect((await listNotebooks(db, reader)).map(({ code }) => code)).toEqual([mine.code]);
    expect(await listNotebooks(db, outsider)).toEqual([]);
    expect(await listNotebooks(db, administratorAsMember)).toEqual([]);
    const read = await readNotebook(db, reader, { code: mine.code });
    expect(read.notebook.members.map(({ personId }) => personId)).toContain(reader.id);
    expect(read.mayBegin).toBe(false);
    const missing = await readNotebook(db, reader, { code: "NONE" }).catch((fault: unknown) => fault);
    const unseen = await readNotebook(db, reader, { code: hidden.code }).catch((fault: unknown) => fault);
    expect(unseen).toEqual(missing);
    expect(missing).toMatchObject({ code: "notebook.not-found", detail: {} });
    await expect(readNotebook(db, administratorAsMember, { code: mine.code })).rejects.toThrow("notebook.not-found");
  });

  it("pages its entries by number, newest first", async () => {
    const { id, code } = await makeNotebook(db);
    const author = await makePerson(db, { roles: ["researcher"], memberOf: [id] });
    for (let number = 1; number <= 7; number++) {
      const entryId = newId();
      await db.execute(sql`insert into entries (id, notebook_id, number, author_id, created_at, revision_number, state)
        values (${entryId}, ${id}, ${number}, ${author.id}, now(), 1, 'draft')`);
      await db.execute(sql`insert into revisions (id, entry_id, number, state, created_at, created_by, title)
        values (${newId()}, ${entryId}, 1, 'draft', now(), ${author.id}, ${`Bath ${number}`})`);
    }
    const first = await readNotebook(db, author, { code, limit: 4 });
    expect(first.entries.map(({ label, title }) => `${label} ${title}`)).toEqual(
      [7, 6, 5, 4].map((n) => `${entryLabel(code, n)} Bath ${n}`),
    );
    expect(first.notebook.entries).toBe(7);
    expect(first.mayBegin).toBe(true);
    const second = await readNotebook(db, author, {
      code,
      limit: 4,
      ...(first.next === null ? {} : { after: first.next }),
    });
    expect(second.entries.map(({ number }) => number)).toEqual([3, 2, 1]);
    expect(second.next).toBeNull();
  });
});

describe("a label", () => {
  it("has one spelling, and is read back", () => {
    expect(entryLabel("DSB", 42)).toBe("DSB-0042");
    expect(entryLabel("DSB", 12345)).toBe("DSB-12345");
    expect(parseLabel("DSB-0042")).toEqual({ code: "DSB", number: 42 });
    expect(parseLabel("DSB-12345")).toEqual({ code: "DSB", number: 12345 });
    for (const other of ["DSB-42", "DSB-00042", "dsb-0042", "DSB-0000", "DSB0042", "", "DSB-0042/1"]) {
      expect(parseLabel(other)).toBeNull();
    }
  });
});
