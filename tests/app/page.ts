// What a browser's editor does to a page, in a few lines: the same document, the same updates.
import * as Y from "yjs";

/** A page as a browser holds it, and the update of its next change. */
export function openPage(state: Uint8Array): { doc: Y.Doc; change(write: (doc: Y.Doc) => void): Uint8Array } {
  const doc = new Y.Doc({ gc: false });
  Y.applyUpdate(doc, state);
  return {
    doc,
    change(write) {
      const before = Y.encodeStateVector(doc);
      doc.transact(() => write(doc));
      return Y.encodeStateAsUpdate(doc, before);
    },
  };
}

/** Puts a paragraph with these words at the end. */
export function addParagraph(doc: Y.Doc, words: string): void {
  const paragraph = new Y.XmlElement("paragraph");
  paragraph.insert(0, [new Y.XmlText(words)]);
  const page = doc.getXmlFragment("page");
  page.insert(page.length, [paragraph]);
}

export function wordsOf(doc: Y.Doc): string {
  return doc.getXmlFragment("page").toString();
}
