// What a page may hold. No views here: the editor adds them, the server needs none.
//
// Content is `*`, never `+`: two valid edits can merge into an empty list, and the binding deletes what breaks the schema.
import { type AnyExtension, type Extensions, getSchema, Node } from "@tiptap/core";
import { StarterKit } from "@tiptap/starter-kit";
import { isLinkAllowed, LINK_PROTOCOLS, Subscript, Superscript } from "./marks.ts";
import { PAGE_LIMITS } from "./page.ts";

const PageDocument = Node.create({ name: "doc", topNode: true, content: "block*" });

const TABLE_ROLES = new Map([
  ["table", "table"],
  ["tableRow", "row"],
  ["tableCell", "cell"],
  ["tableHeader", "header_cell"],
]);

export const Table = Node.create({
  name: "table",
  group: "block",
  content: "tableRow*",
  isolating: true,
  extendNodeSchema: (extension) => {
    const tableRole = TABLE_ROLES.get(extension.name);
    return tableRole === undefined ? {} : { tableRole };
  },
  parseHTML: () => [{ tag: "table" }],
  renderHTML: ({ HTMLAttributes }) => ["table", HTMLAttributes, ["tbody", 0]],
});

export const TableRow = Node.create({
  name: "tableRow",
  content: "(tableCell | tableHeader)*",
  parseHTML: () => [{ tag: "tr" }],
  renderHTML: ({ HTMLAttributes }) => ["tr", HTMLAttributes, 0],
});

/** prosemirror-tables reads these three; cells are never merged and columns never dragged, so they keep their defaults. */
const cellAttributes = () => ({
  colspan: { default: 1, rendered: false, parseHTML: () => 1 },
  rowspan: { default: 1, rendered: false, parseHTML: () => 1 },
  colwidth: { default: null, rendered: false, parseHTML: () => null },
});

export const TableCell = Node.create({
  name: "tableCell",
  content: "block*",
  isolating: true,
  addAttributes: cellAttributes,
  parseHTML: () => [{ tag: "td" }],
  renderHTML: ({ HTMLAttributes }) => ["td", HTMLAttributes, 0],
});

export const TableHeader = Node.create({
  name: "tableHeader",
  content: "block*",
  isolating: true,
  addAttributes: cellAttributes,
  parseHTML: () => [{ tag: "th" }],
  renderHTML: ({ HTMLAttributes }) => ["th", HTMLAttributes, 0],
});

export const InlineFormula = Node.create({
  name: "formula",
  group: "inline",
  inline: true,
  atom: true,
  addAttributes: () => ({ tex: kept("tex", "", PAGE_LIMITS.texCharacters) }),
  parseHTML: () => [{ tag: "span[data-formula]" }],
  renderHTML: ({ HTMLAttributes, node }) => ["span", { ...HTMLAttributes, "data-formula": "" }, node.attrs.tex],
});

export const FormulaBlock = Node.create({
  name: "formulaBlock",
  group: "block",
  atom: true,
  addAttributes: () => ({ tex: kept("tex", "", PAGE_LIMITS.texCharacters) }),
  parseHTML: () => [{ tag: "div[data-formula-block]" }],
  renderHTML: ({ HTMLAttributes, node }) => ["div", { ...HTMLAttributes, "data-formula-block": "" }, node.attrs.tex],
});

export const Mention = Node.create({
  name: "mention",
  group: "inline",
  inline: true,
  atom: true,
  addAttributes: () => ({ compound: kept("compound") }),
  parseHTML: () => [{ tag: "span[data-compound]" }],
  renderHTML: ({ HTMLAttributes, node }) => ["span", HTMLAttributes, node.attrs.compound],
});

export const AttachmentNode = Node.create({
  name: "attachment",
  group: "block",
  atom: true,
  addAttributes: () => ({ attachment: kept("attachment"), caption: kept("caption", "", 500) }),
  parseHTML: () => [{ tag: "div[data-attachment]" }],
  renderHTML: ({ HTMLAttributes }) => ["div", HTMLAttributes],
});

export const Equilibrium = Node.create({
  name: "equilibrium",
  group: "block",
  content: "compositionRow*",
  isolating: true,
  defining: true,
  addAttributes: () => ({
    id: kept("id"),
    title: kept("title"),
    volume: kept("volume"),
    volumeUnit: kept("volumeUnit", "L"),
    temperatureC: kept("temperatureC", "25"),
    activity: kept("activity", "davies"),
    measuredPH: kept("measuredPH"),
    show: kept("show"),
  }),
  parseHTML: () => [{ tag: "section[data-equilibrium]" }],
  renderHTML: ({ HTMLAttributes }) => ["section", { ...HTMLAttributes, "data-equilibrium": "" }, 0],
});

export const CompositionRow = Node.create({
  name: "compositionRow",
  atom: true,
  selectable: false,
  addAttributes: () => ({
    id: kept("id"),
    compound: kept("compound"),
    constants: kept("constants", "", 2000),
    amount: kept("amount"),
    unit: kept("unit", "mol/L"),
    massFraction: kept("massFraction"),
    density: kept("density"),
    lot: kept("lot"),
  }),
  parseHTML: () => [{ tag: "div[data-composition-row]" }],
  renderHTML: ({ HTMLAttributes }) => ["div", { ...HTMLAttributes, "data-composition-row": "" }],
});

/** Headless extensions of a page, in the order of precedence; `views` replaces those of the same name by ones with a view. */
export function extensionsOfPage(views: readonly AnyExtension[] = []): Extensions {
  const own: AnyExtension[] = [
    PageDocument,
    Table,
    TableRow,
    TableCell,
    TableHeader,
    InlineFormula,
    FormulaBlock,
    Mention,
    AttachmentNode,
    Equilibrium,
    CompositionRow,
    Subscript,
    Superscript,
  ];
  return [standardNodes, ...own.map((extension) => views.find((view) => view.name === extension.name) ?? extension)];
}

const STARRED = new Map([
  ["blockquote", "block*"],
  ["listItem", "block*"],
  ["bulletList", "listItem*"],
  ["orderedList", "listItem*"],
]);

const listStart = {
  default: 1,
  parseHTML: (element: HTMLElement) => {
    const start = Number.parseInt(element.getAttribute("start") ?? "", 10);
    return start >= 0 && start <= 100_000 ? start : 1;
  },
};

/** StarterKit, with `+` made `*`, no history of its own (Yjs undoes), and links that hold an address and nothing else. */
const standardNodes = StarterKit.extend({
  addExtensions() {
    const standard = this.parent?.() ?? [];
    return standard.map((extension) => {
      const content = STARRED.get(extension.name);
      if (extension.name === "orderedList")
        return extension.extend({ content, addAttributes: () => ({ start: listStart }) });
      if (content !== undefined) return extension.extend({ content });
      if (extension.name === "link") return extension.extend({ addAttributes: () => ({ href: { default: "" } }) });
      if (extension.name === "codeBlock") return extension.extend({ addAttributes: () => ({}) });
      return extension;
    });
  },
}).configure({
  document: false,
  undoRedo: false,
  trailingNode: false,
  heading: { levels: [1, 2, 3] },
  link: {
    openOnClick: false,
    // It would write links into the page from whichever browser hears of a change.
    autolink: false,
    linkOnPaste: true,
    defaultProtocol: "https",
    protocols: [...LINK_PROTOCOLS],
    isAllowedUri: (href) => isLinkAllowed(href),
    HTMLAttributes: { target: "_blank", rel: "noopener noreferrer nofollow" },
  },
});

/** An attribute that holds text: its default, and how it travels through the clipboard, cut to what a page accepts. */
function kept(name: string, fallback = "", most = 200) {
  const attribute = `data-${name.replace(/[A-Z]/g, (letter) => `-${letter.toLowerCase()}`)}`;
  return {
    default: fallback,
    parseHTML: (element: HTMLElement) => (element.getAttribute(attribute) ?? fallback).slice(0, most),
    renderHTML: (attributes: Record<string, unknown>) => ({ [attribute]: attributes[name] }),
  };
}

export const pageExtensions: Extensions = extensionsOfPage();
export const pageSchema = getSchema(pageExtensions);
