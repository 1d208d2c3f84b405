// What an update does to a page: who wrote it, whether it is whole, whether it is mere typing. No database here.
//
// The update is applied to the page itself, not to a copy (copying a page costs as much as loading it); a caller that refuses
// afterwards throws the page away. Mere typing, that is characters put into or taken out of lines of text that were valid
// before, cannot break the schema and cannot touch a typed value, so it is not followed by a validation of the whole page
// until a bounded number of bytes has come in by this road.
import * as Y from "yjs";

export type PageChange =
  | { kind: "nothing" }
  | { kind: "typing" }
  /** anything else: nodes, attributes, marks, the head */
  | { kind: "structure" };

export type UpdateClaim = { ok: true; clients: number[] } | { ok: false; reason: string; incomplete: boolean };

/** Which client ids the update brings something new of, and whether it stands on what the page already has. */
export function readClaim(doc: Y.Doc, bytes: Uint8Array): UpdateClaim {
  let decoded: ReturnType<typeof Y.decodeUpdate>;
  try {
    decoded = Y.decodeUpdate(bytes);
  } catch {
    return { ok: false, reason: "The change cannot be read.", incomplete: false };
  }
  const clients = new Set<number>();
  const reached = new Map<number, number>();
  for (const struct of decoded.structs) {
    const { client, clock } = struct.id;
    const known = reached.get(client) ?? Y.getState(doc.store, client);
    const end = clock + struct.length;
    if (end <= Y.getState(doc.store, client)) continue;
    if (clock > known || !(struct instanceof Y.Item || struct instanceof Y.GC)) {
      return { ok: false, reason: "The change builds on others that have not arrived.", incomplete: true };
    }
    if (struct instanceof Y.GC || struct.content instanceof Y.ContentDeleted) {
      return { ok: false, reason: "The change has lost what was deleted in it.", incomplete: false };
    }
    if (struct.content instanceof Y.ContentDoc) {
      return { ok: false, reason: "The change holds a page within the page.", incomplete: false };
    }
    clients.add(client);
    reached.set(client, end);
  }
  return { ok: true, clients: [...clients] };
}

/** Applies the update and says what it changed. When it answers null, the update waits for others: the page must be thrown away. */
export function applyToPage(doc: Y.Doc, bytes: Uint8Array): PageChange | null {
  const transactions: Y.Transaction[] = [];
  const collect = (transaction: Y.Transaction) => {
    transactions.push(transaction);
  };
  doc.on("afterTransaction", collect);
  try {
    Y.applyUpdate(doc, bytes);
  } finally {
    doc.off("afterTransaction", collect);
  }
  if (doc.store.pendingStructs !== null || doc.store.pendingDs !== null) return null;
  const changing = transactions.filter(changedSomething);
  if (changing.length === 0) return { kind: "nothing" };
  return { kind: changing.every(isTyping) ? "typing" : "structure" };
}

function changedSomething(transaction: Y.Transaction): boolean {
  if (transaction.deleteSet.clients.size > 0) return true;
  for (const [client, clock] of transaction.afterState) {
    if ((transaction.beforeState.get(client) ?? 0) < clock) return true;
  }
  return false;
}

function isTyping(transaction: Y.Transaction): boolean {
  const store = transaction.doc.store;
  for (const [client, clock] of transaction.afterState) {
    const before = transaction.beforeState.get(client) ?? 0;
    if (before >= clock) continue;
    const structs = store.clients.get(client) ?? [];
    for (let index = Y.findIndexSS(structs, before); index < structs.length; index += 1) {
      const struct = structs[index];
      if (struct === undefined || !isCharacters(struct, transaction.beforeState)) return false;
    }
  }
  let onlyCharacters = true;
  Y.iterateDeletedStructs(transaction, transaction.deleteSet, (struct) => {
    if (!isCharacters(struct, transaction.beforeState)) onlyCharacters = false;
  });
  return onlyCharacters;
}

const LINES = new Set(["paragraph", "heading", "codeBlock"]);

/** Characters in a line that stood on the page before: a text node of a paragraph, heading or code block. */
function isCharacters(struct: Y.Item | Y.GC, before: Map<number, number>): boolean {
  if (!(struct instanceof Y.Item) || !(struct.content instanceof Y.ContentString) || struct.parentSub !== null)
    return false;
  // The database cannot keep U+0000 in a text: the validation says so.
  if (struct.content.str.includes("\u0000")) return false;
  const text = struct.parent;
  if (!(text instanceof Y.XmlText)) return false;
  const made = text._item;
  if (made === null || made.id.clock >= (before.get(made.id.client) ?? 0)) return false;
  return text.parent instanceof Y.XmlElement && LINES.has(text.parent.nodeName);
}

/** The words in an update by itself, in the order in which they were typed: for a writer whose change came too late. */
export function wordsOfUpdate(bytes: Uint8Array): string {
  const parts: string[] = [];
  let last: { client: number; end: number } | null = null;
  try {
    for (const struct of Y.decodeUpdate(bytes).structs) {
      if (!(struct instanceof Y.Item)) continue;
      const words = wordsOfContent(struct.content);
      if (words === "") continue;
      const goesOn = last !== null && last.client === struct.id.client && last.end === struct.id.clock;
      if (!goesOn && parts.length > 0) parts.push("\n");
      parts.push(words);
      last = { client: struct.id.client, end: struct.id.clock + struct.length };
    }
  } catch {
    return "";
  }
  return parts.join("");
}

function wordsOfContent(content: Y.Item["content"]): string {
  if (content instanceof Y.ContentString) return content.str;
  if (content instanceof Y.ContentAny) return content.arr.filter((each) => typeof each === "string").join(" ");
  return "";
}
