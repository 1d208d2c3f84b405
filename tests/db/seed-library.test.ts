import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { slice } from "../../db/compounds.ts";
import { citation, importLibrary } from "../../db/seed/library.ts";
import { type TestDatabase, testDatabase } from "../support/database.ts";
import { countLibrary, forgeConstant } from "../support/library.ts";

let store: TestDatabase;
beforeAll(async () => {
  store = await testDatabase();
});
afterAll(() => store.close());

describe("importing the library", () => {
  it("fills the tables once; a second start finds them the same and changes nothing", async () => {
    const first = await importLibrary(store.db);
    expect(first).toMatchObject({ outcome: "imported", families: 277, reagents: 376, constants: 465 });
    const counted = await countLibrary(store.db);
    expect(counted).toMatchObject({ families: 277, reagents: 376, constants: 465, ions: 65, mixing: 47 });
    expect((await importLibrary(store.db)).outcome).toBe("same");
    expect(await countLibrary(store.db)).toEqual(counted);
  });

  it("keeps an old version of a constant beside the new one, pinned pages keep theirs (CAL-15)", async () => {
    // As if an earlier version of the program had been shipped with another value.
    await forgeConstant(store.db, { family: "acetic-acid", step: 1, pKa: "4.70" });
    expect((await importLibrary(store.db)).outcome).toBe("imported");
    const now = await slice(store.db, ["reagent:acetic-acid-glacial"], []);
    expect(now.families["acetic-acid"]?.constants.map((each) => [each.id, each.pKa])).toEqual([
      ["acetic-acid.1.v3", "4.756"],
    ]);
    const pinned = await slice(store.db, ["reagent:acetic-acid-glacial"], ["acetic-acid.1.v2"]);
    expect(pinned.families["acetic-acid"]?.constants.map((each) => [each.id, each.pKa])).toEqual([
      ["acetic-acid.1.v2", "4.70"],
    ]);
    const first = await slice(store.db, ["reagent:acetic-acid-glacial"], ["acetic-acid.1.v1"]);
    expect(first.families["acetic-acid"]?.constants[0]?.pKa).toBe("4.756");
  });

  it("refuses to change or remove a constant in place", async () => {
    await expect(
      forgeConstant(store.db, { family: "acetic-acid", step: 1, pKa: "4.70", inPlace: true }),
    ).rejects.toThrow();
  });
});

describe("a citation", () => {
  it("says how the number was reached, and drops web addresses", () => {
    expect(
      citation(
        "A. Author, J. Some 1 (1990) 2. Reached: first page read at https://a.example/x/1 and https://b.example ; rest from memory.",
      ),
    ).toBe("A. Author, J. Some 1 (1990) 2. Obtained: first page read; rest from memory.");
    expect(citation("Some table. Reached: from memory.")).toBe("Some table. Obtained: from memory.");
  });
});
