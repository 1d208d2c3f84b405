// A laboratory for the tests of the records: a notebook, its people, and writers who change a page as a browser does.
import { generateKeyPairSync, sign as signBytes, verify as verifyBytes } from "node:crypto";
import { sql } from "drizzle-orm";
import * as Y from "yjs";
import { z } from "zod";
import { type Db, readRows } from "../../db/client.ts";
import { compoundItems } from "../../db/compounds.ts";
import { beginEntry } from "../../db/entries.ts";
import { newId } from "../../db/ids.ts";
import { MEANINGS, type Seal } from "../../db/manifest.ts";
import type { Actor } from "../../db/policy.ts";
import { contentToSign, signAsAuthor } from "../../db/signatures.ts";
import { appendUpdate, pageState } from "../../db/updates.ts";
import { checkRevision, countersign, markWhole, openRevision } from "../../db/witnessing.ts";
import { makeNotebook, makePerson } from "./database.ts";

export type Lab = {
  notebookId: string;
  code: string;
  author: Actor;
  colleague: Actor;
  witness: Actor;
  secondWitness: Actor;
  supervisor: Actor;
  /** researcher and witness of another notebook */
  outsider: Actor;
};

/** A notebook with a person of each role, and somebody of another notebook. */
export async function makeLab(db: Db): Promise<Lab> {
  const { id: notebookId, code } = await makeNotebook(db);
  const other = await makeNotebook(db);
  const memberOf = [notebookId];
  return {
    notebookId,
    code,
    author: await makePerson(db, { roles: ["researcher"], memberOf, printedName: "A. Author" }),
    colleague: await makePerson(db, { roles: ["researcher", "witness"], memberOf, printedName: "C. Colleague" }),
    witness: await makePerson(db, { roles: ["witness"], memberOf, printedName: "W. Witness" }),
    secondWitness: await makePerson(db, { roles: ["witness"], memberOf, printedName: "S. Second" }),
    supervisor: await makePerson(db, { roles: ["supervisor"], memberOf, printedName: "V. Visor" }),
    outsider: await makePerson(db, { roles: ["researcher", "witness", "supervisor"], memberOf: [other.id] }),
  };
}

export type Writer = {
  doc: Y.Doc;
  /** the updates that a change made, merged as the browser's provider merges them */
  change(edit: (page: Y.XmlFragment, head: Y.Map<string>) => void): Uint8Array;
  /** the same, posted and accepted */
  write(edit: (page: Y.XmlFragment, head: Y.Map<string>) => void): Promise<number>;
  /** types at the end of the first line */
  type(text: string): Promise<number>;
  /** takes in what the server has */
  catchUp(): Promise<void>;
};

/** A browser of the person that has the page open. */
export async function openWriter(db: Db, actor: Actor, revisionId: string): Promise<Writer> {
  const doc = new Y.Doc({ gc: false });
  const catchUp = async () => Y.applyUpdate(doc, (await pageState(db, actor, revisionId)).state);
  await catchUp();
  const change: Writer["change"] = (edit) => {
    const before = Y.encodeStateVector(doc);
    doc.transact(() => edit(doc.getXmlFragment("page"), doc.getMap<string>("head")));
    return Y.encodeStateAsUpdate(doc, before);
  };
  const write: Writer["write"] = async (edit) => {
    const { seq } = await appendUpdate(db, actor, { revisionId, updateId: newId(), bytes: change(edit) });
    return seq;
  };
  return {
    doc,
    change,
    write,
    catchUp,
    type: (text) => write((page) => firstLine(page).insert(firstLine(page).length, text)),
  };
}

/** The text of the first paragraph, made when the paragraph is empty. */
export function firstLine(page: Y.XmlFragment): Y.XmlText {
  const paragraph = page.get(0);
  if (!(paragraph instanceof Y.XmlElement)) throw new Error("the page has no paragraph");
  const text = paragraph.firstChild;
  if (text instanceof Y.XmlText) return text;
  const made = new Y.XmlText();
  paragraph.insert(0, [made]);
  return made;
}

export function textOf(state: Uint8Array): string {
  const doc = new Y.Doc();
  Y.applyUpdate(doc, state);
  return doc.getXmlFragment("page").toString();
}

export type RowOfBlock = {
  id: string;
  compound: string;
  constants?: string;
  amount: string;
  unit?: string;
  massFraction?: string;
  density?: string;
  lot?: string;
};

/** Puts an equilibrium block at the end of the page. */
export function addBlock(
  page: Y.XmlFragment,
  id: string,
  rows: RowOfBlock[],
  attributes: Record<string, string> = {},
): Y.XmlElement {
  const block = new Y.XmlElement("equilibrium");
  for (const [name, value] of Object.entries({ id, ...attributes })) block.setAttribute(name, value);
  block.insert(
    0,
    rows.map((row) => {
      const element = new Y.XmlElement("compositionRow");
      for (const [name, value] of Object.entries(row)) element.setAttribute(name, value);
      return element;
    }),
  );
  page.push([block]);
  return block;
}

/** A row of a compound as the page writes it: with the constants that are approved now. */
export async function rowOf(db: Db, id: string, compound: string, amount: string): Promise<RowOfBlock> {
  const [item] = await compoundItems(db, [compound]);
  if (item === undefined) throw new Error(`the library has no ${compound}`);
  return { id, compound, constants: item.constants.join(" "), amount };
}

export type Draft = { id: string; revisionId: string; label: string };

/** A draft with title and day, and a few words, by its author. */
export async function makeDraft(db: Db, lab: Lab, words = "Mixed the bath."): Promise<Draft & { writer: Writer }> {
  const draft = await beginEntry(db, lab.author, { notebookId: lab.notebookId });
  const writer = await openWriter(db, lab.author, draft.revisionId);
  await writer.write((page, head) => {
    head.set("title", "Descaling bath");
    head.set("doneOn", new Date().toISOString().slice(0, 10));
    firstLine(page).insert(0, words);
  });
  return { ...draft, writer };
}

/** A key pair of the tests, and the seal that signs with it: a compact JWS as the server's. */
const pair = generateKeyPairSync("ed25519");
const part = (value: string) => Buffer.from(value).toString("base64url");
export const seal: Seal = async (manifest) => {
  const input = `${part(JSON.stringify({ alg: "EdDSA", kid: "test-key" }))}.${part(manifest)}`;
  return {
    jws: `${input}.${signBytes(null, Buffer.from(input), pair.privateKey).toString("base64url")}`,
    kid: "test-key",
  };
};

/** The manifest that a JWS holds, once its signature has been verified. */
export function openJws(jws: string): unknown {
  const [header, payload, signature] = jws.split(".");
  const fits = verifyBytes(
    null,
    Buffer.from(`${header}.${payload}`),
    pair.publicKey,
    Buffer.from(signature ?? "", "base64url"),
  );
  if (!fits) throw new Error("the signature does not fit");
  return JSON.parse(Buffer.from(payload ?? "", "base64url").toString());
}

/** Opens, reads to the end, and signs as the author. */
export async function sign(db: Db, author: Actor, revisionId: string): Promise<string> {
  const { sha256 } = await contentToSign(db, author, revisionId);
  await openRevision(db, author, { revisionId });
  await markWhole(db, author, { revisionId, contentSha256: sha256 });
  await signAsAuthor(db, author, { revisionId, shownHash: sha256, meaning: MEANINGS.author, seal });
  return sha256;
}

/** Opens, reads to the end, has everything checked, and countersigns. */
export async function witnessIt(db: Db, witness: Actor, revisionId: string, acknowledgement = ""): Promise<void> {
  const { shownHash, findingId } = await prepareToWitness(db, witness, revisionId);
  await countersign(db, witness, { revisionId, shownHash, findingId, acknowledgement, seal });
}

export async function prepareToWitness(
  db: Db,
  witness: Actor,
  revisionId: string,
): Promise<{ shownHash: string; findingId: string }> {
  const { contentSha256 } = await openRevision(db, witness, { revisionId });
  await markWhole(db, witness, { revisionId, contentSha256 });
  const finding = await checkRevision(db, witness, { revisionId });
  return { shownHash: contentSha256, findingId: finding.id };
}

const eventRow = z.object({
  action: z.string(),
  person_id: z.string().nullable(),
  object_id: z.string(),
  detail: z.string(),
});

/** The entry's events in order, with their details read. */
export async function eventsOf(
  db: Db,
  entryId: string,
): Promise<{ action: string; personId: string | null; objectId: string; detail: Record<string, unknown> }[]> {
  const rows = await readRows(
    db,
    eventRow,
    sql`select action, person_id, object_id, detail from events where entry_id = ${entryId} order by seq`,
  );
  return rows.map((row) => ({
    action: row.action,
    personId: row.person_id,
    objectId: row.object_id,
    detail: z.record(z.string(), z.unknown()).parse(JSON.parse(row.detail)),
  }));
}

/** How many rows a table has, of one revision when it is named. */
export async function countRows(db: Db, table: string, revisionId?: string): Promise<number> {
  const where = revisionId === undefined ? sql`` : sql`where revision_id = ${revisionId}`;
  const [row] = await readRows(
    db,
    z.object({ count: z.number() }),
    sql`select count(*)::int as count from ${sql.identifier(table)} ${where}`,
  );
  return row?.count ?? 0;
}

export { sql } from "drizzle-orm";
