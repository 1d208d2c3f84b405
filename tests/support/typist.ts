// A server process that types: the tests start it with the address of a fresh store and kill it. It prints the person, session and
// revision, then the number of each word once the word is acknowledged.
import { openDatabase } from "../../db/client.ts";
import { beginEntry } from "../../db/entries.ts";
import { makeNotebook, makePerson } from "./database.ts";
import { openWriter } from "./laboratory.ts";

const [, , url = ""] = process.argv;
const store = await openDatabase(url);
await store.migrate();
const { id: notebookId } = await makeNotebook(store.db);
const author = await makePerson(store.db, { roles: ["researcher"], memberOf: [notebookId] });
const { revisionId } = await beginEntry(store.db, author, { notebookId });
const writer = await openWriter(store.db, author, revisionId);
process.stdout.write(`${JSON.stringify({ personId: author.id, sessionId: author.sessionId, revisionId })}\n`);
for (let word = 1; ; word += 1) {
  await writer.type(`[${word}]`);
  process.stdout.write(`${word}\n`);
}
