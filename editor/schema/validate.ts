// Is what a Yjs document holds a page? Read by hand and never through the binding, which would delete what does not fit.
import * as Y from "yjs";
import { z } from "zod";
import { blockNodeAttributes, compoundId, rowNodeAttributes } from "./equilibrium.ts";
import { isLinkAllowed } from "./marks.ts";
import { pageSchema } from "./nodes.ts";
import { EMPTY_HEAD, PAGE_LIMITS, type PageHead, type PageJson, type PageMark, type PageNode } from "./page.ts";

export type Validated =
  | {
      ok: true;
      page: PageJson;
      head: PageHead;
      /** ids that more than one block or row carries (two people moved one block at once): to be refused at signing */
      duplicates: string[];
    }
  | { ok: false; reason: string };

/**
 * Reads a document as a page without changing it. Refuses, with a reason in words: other root types than "page" and "head",
 * unknown nodes, marks and attributes, values out of their bounds, nesting that the schema does not allow, addresses that are no
 * links, a page beyond its limits, and a document that still waits for an update which it builds on.
 */
export function validatePage(doc: Y.Doc): Validated {
  try {
    return { ok: true, ...readDocument(doc) };
  } catch (error) {
    if (error instanceof Misfit) return { ok: false, reason: error.message };
    throw error;
  }
}

/** Reads a page from JSON, e.g. from signed content; null when it is none. */
export function parsePage(value: unknown): PageJson | null {
  const shape = pageShape.safeParse(value);
  if (!shape.success) return null;
  try {
    checkAgainstSchema(shape.data);
    return shape.data;
  } catch (error) {
    if (error instanceof Misfit) return null;
    throw error;
  }
}

class Misfit extends Error {}

type Tally = { characters: number; nodes: number; blocks: number; ids: Map<string, number> };

function readDocument(doc: Y.Doc): { page: PageJson; head: PageHead; duplicates: string[] } {
  if (doc.store.pendingStructs !== null || doc.store.pendingDs !== null) {
    throw new Misfit("The change builds on an earlier one that has not arrived.");
  }
  for (const [name, type] of doc.share) {
    // A root type that an update has never written is an empty shell that somebody asked for; it holds nothing.
    const isEmpty = type._start === null && type._map.size === 0;
    if (name !== "page" && name !== "head" && !isEmpty)
      throw new Misfit("The document holds something besides the page.");
  }
  const head = readHead(rootOf("head", () => doc.getMap<unknown>("head")));
  const fragment = rootOf("page", () => doc.getXmlFragment("page"));
  if (fragment._map.size > 0) throw new Misfit("The page itself carries attributes.");
  const tally: Tally = { characters: head.title.length, nodes: 0, blocks: 0, ids: new Map() };
  const page: PageJson = { type: "doc", content: readChildren(fragment, 1, tally) };
  checkAgainstSchema(page);
  return { page, head, duplicates: [...tally.ids].filter(([, count]) => count > 1).map(([id]) => id) };
}

/** A root type that is already bound as another kind cannot be read as this one. */
function rootOf<T>(name: string, get: () => T): T {
  try {
    return get();
  } catch {
    throw new Misfit(`"${name}" is not the kind of type that a page keeps there.`);
  }
}

const headText = z.strictObject({
  title: z.string().max(PAGE_LIMITS.titleCharacters),
  doneOn: z.string().refine(isDateOrBlank),
  lateReason: z.string().max(PAGE_LIMITS.reasonCharacters),
});

/** True for "" and for a day that exists, as "YYYY-MM-DD". */
export function isDateOrBlank(text: string): boolean {
  if (text === "") return true;
  if (!/^\d{4}-\d{2}-\d{2}$/.test(text)) return false;
  const date = new Date(`${text}T00:00:00Z`);
  return !Number.isNaN(date.getTime()) && date.toISOString().startsWith(text);
}

function readHead(map: Y.Map<unknown>): PageHead {
  if (map._start !== null) throw new Misfit("The head of the page is not a map.");
  const head = headText.safeParse({ ...EMPTY_HEAD, ...Object.fromEntries(map.entries()) });
  if (!head.success)
    throw new Misfit("Title, date or reason above the page is not text of the allowed length and form.");
  for (const text of Object.values(head.data)) refuseNul(text);
  return head.data;
}

function readChildren(parent: Y.XmlFragment, depth: number, tally: Tally): PageNode[] {
  if (depth > PAGE_LIMITS.depth) throw new Misfit("The page is nested too deeply.");
  const children: PageNode[] = [];
  for (const child of parent.toArray()) {
    if (child instanceof Y.XmlText) children.push(...readText(child, tally));
    else if (child instanceof Y.XmlElement) children.push(readElement(child, depth, tally));
    else throw new Misfit("The page holds something that is neither text nor a known element.");
  }
  return children;
}

const pieces = z.array(
  z.strictObject({ insert: z.string(), attributes: z.record(z.string(), z.unknown()).optional() }),
);

function readText(text: Y.XmlText, tally: Tally): PageNode[] {
  if (text._map.size > 0) throw new Misfit("Running text carries attributes of its own.");
  const delta = pieces.safeParse(text.toDelta());
  if (!delta.success) throw new Misfit("Something else is embedded in running text.");
  return delta.data
    .filter((piece) => piece.insert !== "")
    .map((piece) => {
      count(tally, piece.insert);
      const marks = Object.entries(piece.attributes ?? {}).map(([type, attrs]) => readMark(type, attrs));
      return { type: "text", text: piece.insert, ...(marks.length > 0 && { marks }) };
    });
}

const noAttributes = z.strictObject({});
const linkAttributes = z.strictObject({ href: z.string().refine(isLinkAllowed) });
const MARKS: Readonly<Record<string, z.ZodType<PageMark["attrs"]>>> = {
  bold: noAttributes,
  italic: noAttributes,
  underline: noAttributes,
  strike: noAttributes,
  code: noAttributes,
  subscript: noAttributes,
  superscript: noAttributes,
  link: linkAttributes,
};

function readMark(type: string, attrs: unknown): PageMark {
  const rule = Object.hasOwn(MARKS, type) ? MARKS[type] : undefined;
  if (rule === undefined)
    throw new Misfit(`Text is marked in a way that a page does not know: "${type.slice(0, 40)}".`);
  const parsed = rule.safeParse(attrs);
  if (!parsed.success)
    throw new Misfit(
      type === "link" ? "A link leads to an address that is not allowed." : `The mark "${type}" holds what it may not.`,
    );
  return { type, ...(Object.keys(parsed.data ?? {}).length > 0 && { attrs: parsed.data }) };
}

const cell = z.strictObject({ colspan: z.literal(1), rowspan: z.literal(1), colwidth: z.null() }).partial();
const tex = z.strictObject({ tex: z.string().max(PAGE_LIMITS.texCharacters) }).partial();
const NODES: Readonly<Record<string, z.ZodType<PageNode["attrs"]>>> = {
  paragraph: noAttributes,
  heading: z.strictObject({ level: z.literal([1, 2, 3]) }).partial(),
  bulletList: noAttributes,
  orderedList: z.strictObject({ start: z.int().min(0).max(100_000) }).partial(),
  listItem: noAttributes,
  blockquote: noAttributes,
  codeBlock: noAttributes,
  horizontalRule: noAttributes,
  hardBreak: noAttributes,
  table: noAttributes,
  tableRow: noAttributes,
  tableHeader: cell,
  tableCell: cell,
  formula: tex,
  formulaBlock: tex,
  mention: z.strictObject({ compound: compoundId }).partial(),
  attachment: z
    .strictObject({ attachment: z.string().regex(/^[A-Za-z0-9_-]{0,64}$/), caption: z.string().max(500) })
    .partial(),
  equilibrium: blockNodeAttributes,
  compositionRow: rowNodeAttributes,
};

function readElement(element: Y.XmlElement, depth: number, tally: Tally): PageNode {
  const type = element.nodeName;
  const rule = Object.hasOwn(NODES, type) ? NODES[type] : undefined;
  if (rule === undefined) throw new Misfit(`A page does not know the element "${String(type).slice(0, 40)}".`);
  tally.nodes += 1;
  if (tally.nodes > PAGE_LIMITS.nodes)
    throw new Misfit("The page has too many parts. Begin another entry for the rest.");
  const attrs = rule.safeParse(element.getAttributes());
  if (!attrs.success) {
    const field = attrs.error.issues[0]?.path.join(".") ?? "";
    throw new Misfit(`An attribute of "${type}" is not allowed${field === "" ? "" : `: ${field}`}.`);
  }
  for (const value of Object.values(attrs.data ?? {})) if (typeof value === "string") count(tally, value);
  const id = attrs.data?.id;
  if (typeof id === "string" && id !== "") tally.ids.set(id, (tally.ids.get(id) ?? 0) + 1);
  if (type === "equilibrium") {
    tally.blocks += 1;
    if (tally.blocks > PAGE_LIMITS.blocks) throw new Misfit("The page has too many equilibrium blocks.");
    if (element.length > PAGE_LIMITS.rowsOfBlock) throw new Misfit("An equilibrium block has too many rows.");
  }
  const content = readChildren(element, depth + 1, tally);
  return { type, attrs: withDefaults(type, attrs.data), ...(content.length > 0 && { content }) };
}

/** Every attribute is written out, so that a page's text does not change when a default is added to a later schema's node. */
function withDefaults(type: string, given: PageNode["attrs"]): NonNullable<PageNode["attrs"]> {
  const attrs: NonNullable<PageNode["attrs"]> = {};
  for (const [name, spec] of Object.entries(pageSchema.nodes[type]?.spec.attrs ?? {})) {
    const fallback: unknown = spec.default;
    if (fallback === null || typeof fallback === "string" || typeof fallback === "number") attrs[name] = fallback;
  }
  return Object.assign(attrs, given);
}

function count(tally: Tally, text: string): void {
  refuseNul(text);
  tally.characters += text.length;
  if (tally.characters > PAGE_LIMITS.characters) {
    throw new Misfit("The page has too much text. Begin another entry for the rest.");
  }
}

/** The database cannot keep U+0000 in a text. */
function refuseNul(text: string): void {
  if (text.includes("\u0000")) throw new Misfit("The page holds a character (U+0000) that cannot be kept.");
}

function checkAgainstSchema(page: PageJson): void {
  try {
    pageSchema.nodeFromJSON(page).check();
  } catch (error) {
    throw new Misfit(
      error instanceof Error
        ? `The page's parts do not fit together: ${error.message.slice(0, 200)}`
        : "The page's parts do not fit together.",
    );
  }
}

const attributeValues = z.record(z.string(), z.union([z.string(), z.number(), z.null()]));
const nodeShape: z.ZodType<PageNode> = z.lazy(() =>
  z.strictObject({
    type: z.string(),
    attrs: attributeValues.optional(),
    content: z.array(nodeShape).optional(),
    marks: z.array(z.strictObject({ type: z.string(), attrs: attributeValues.optional() })).optional(),
    text: z.string().optional(),
  }),
);
const pageShape = z.strictObject({ type: z.literal("doc"), content: z.array(nodeShape) });
