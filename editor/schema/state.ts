// Pages as Yjs states: the first state of a new page, one made from JSON, and the copy that a next revision begins with.
import * as Y from "yjs";
import { EMPTY_HEAD, type PageHead, type PageJson, type PageNode } from "./page.ts";
import { validatePage } from "./validate.ts";

/** The first state of a new page: one empty paragraph. Made once, by the server; a page that every browser seeds is seeded twice. */
export function seedPage(head: Partial<PageHead> = {}): Uint8Array {
  return stateOfPage({ type: "doc", content: [{ type: "paragraph" }] }, head);
}

/** A page from JSON as a first state. Throws when the JSON is no page. */
export function stateOfPage(page: PageJson, head: Partial<PageHead> = {}): Uint8Array {
  const doc = new Y.Doc({ gc: false });
  doc.transact(() => {
    doc.getXmlFragment("page").insert(0, typesOf(page.content));
    const map = doc.getMap<string>("head");
    for (const [name, value] of Object.entries({ ...EMPTY_HEAD, ...head })) map.set(name, value);
  });
  const found = validatePage(doc);
  if (!found.ok) throw new Error(`Not a page: ${found.reason}`);
  const state = Y.encodeStateAsUpdate(doc);
  doc.destroy();
  return state;
}

/** What a revision says, as the first state of the next: same content and block ids, none of the history. */
export function copyState(state: Uint8Array): Uint8Array {
  const doc = openState(state);
  const found = validatePage(doc);
  doc.destroy();
  if (!found.ok) throw new Error(`Not a page: ${found.reason}`);
  return stateOfPage(found.page, found.head);
}

/** A document that keeps deleted text (garbage collection off), with a state read in. */
export function openState(state: Uint8Array): Y.Doc {
  const doc = new Y.Doc({ gc: false });
  Y.applyUpdate(doc, state);
  return doc;
}

/** As the ProseMirror binding writes them: neighbouring texts in one Y.XmlText, null attributes left out. */
function typesOf(nodes: readonly PageNode[]): (Y.XmlElement | Y.XmlText)[] {
  const types: (Y.XmlElement | Y.XmlText)[] = [];
  let run: PageNode[] = [];
  const flush = () => {
    if (run.length === 0) return;
    const text = new Y.XmlText();
    text.applyDelta(
      run.map((node) => ({
        insert: node.text ?? "",
        attributes: Object.fromEntries((node.marks ?? []).map((mark) => [mark.type, mark.attrs ?? {}])),
      })),
    );
    types.push(text);
    run = [];
  };
  for (const node of nodes) {
    if (node.type === "text") {
      run.push(node);
      continue;
    }
    flush();
    const element = new Y.XmlElement(node.type);
    for (const [name, value] of Object.entries(node.attrs ?? {})) {
      // Yjs keeps numbers as they are; only its types say that attributes are text.
      if (value !== null) Reflect.apply(element.setAttribute, element, [name, value]);
    }
    element.insert(0, typesOf(node.content ?? []));
    types.push(element);
  }
  flush();
  return types;
}
