import { afterAll, beforeAll, expect, it } from "vitest";
import { makeNotebook, makePerson, testDatabase, type TestDatabase } from "../support/database.ts";
let store: TestDatabase;
beforeAll(async () => { store = await testDatabase(); });
afterAll(() => store.close());
it("smoke", async () => {
  const n = await makeNotebook(store.db);
  const p = await makePerson(store.db, { roles: ["researcher"], memberOf: [n.id] });
  expect(p.memberOf).toEqual([n.id]);
});
