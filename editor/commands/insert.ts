// What can be put into a page, after the paragraph that the caret stands in.
import { Fragment, type Node, type Schema } from "@tiptap/pm/model";
import { type Command, type EditorState, TextSelection } from "@tiptap/pm/state";
import { newName } from "../tabs.ts";

/** Puts a node on its own line: in place of an empty paragraph, else after what the caret stands in. */
export function insertBlock(make: (schema: Schema) => Node | null): Command {
  return (state, dispatch) => {
    const node = make(state.schema);
    if (node === null) return false;
    const paragraph = state.schema.nodes.paragraph?.create();
    const { from, to, isReplacing } = placeOf(state);
    const tr = state.tr.replaceWith(from, to, node);
    const after = from + node.nodeSize;
    // Something has to stand after it that one can type into.
    const next = tr.doc.resolve(after).nodeAfter;
    if (paragraph !== undefined && (next === null || !next.isTextblock)) tr.insert(after, paragraph);
    if (node.type.name === "table") tr.setSelection(TextSelection.near(tr.doc.resolve(from + 3)));
    else tr.setSelection(TextSelection.near(tr.doc.resolve(after), 1));
    if (tr.docChanged || isReplacing) dispatch?.(tr.scrollIntoView());
    return true;
  };
}

function placeOf(state: EditorState): { from: number; to: number; isReplacing: boolean } {
  const { $from, $to } = state.selection;
  if ($from.depth === 0) return { from: state.selection.to, to: state.selection.to, isReplacing: false };
  const textblock = $from.parent;
  if (textblock.type.name === "paragraph" && textblock.content.size === 0) {
    return { from: $from.before(), to: $from.after(), isReplacing: true };
  }
  // Outside of table cells and lists the new part stands after the whole of what the caret is in.
  const depth = topOf(state, $to.depth);
  return { from: $to.after(depth), to: $to.after(depth), isReplacing: false };
}

function topOf(state: EditorState, deepest: number): number {
  const { $to } = state.selection;
  for (let depth = deepest; depth > 0; depth--) {
    const parent = $to.node(depth - 1).type.name;
    if (parent === "doc" || parent === "tableCell" || parent === "tableHeader") return depth;
  }
  return 1;
}

/** An empty block with one empty row, under new ids. */
export const insertEquilibrium: Command = insertBlock((schema) => {
  const { equilibrium, compositionRow } = schema.nodes;
  if (equilibrium === undefined || compositionRow === undefined) return null;
  return equilibrium.create({ id: newName() }, compositionRow.create({ id: newName() }));
});

/** A table of three columns: a row of heads and two rows. */
export const insertTable: Command = insertBlock((schema) => {
  const { table, tableRow, tableHeader, tableCell, paragraph } = schema.nodes;
  if (!table || !tableRow || !tableHeader || !tableCell || !paragraph) return null;
  const rowOf = (cell: typeof tableCell) =>
    tableRow.create(null, Fragment.from([1, 2, 3].map(() => cell.create(null, paragraph.create()))));
  return table.create(null, [rowOf(tableHeader), rowOf(tableCell), rowOf(tableCell)]);
});

export function insertAttachment(attachment: string): Command {
  return insertBlock((schema) => schema.nodes.attachment?.create({ attachment }) ?? null);
}

export function insertFormulaBlock(tex: string): Command {
  return insertBlock((schema) => schema.nodes.formulaBlock?.create({ tex }) ?? null);
}

/** Puts a compound's name, or a formula, where the caret stands. */
export function insertInline(name: "mention" | "formula", attrs: Record<string, string>): Command {
  return (state, dispatch) => {
    const node = state.schema.nodes[name]?.create(attrs);
    if (node === undefined || !state.selection.$from.parent.inlineContent) return false;
    if (!state.selection.$from.parent.canReplaceWith(0, 0, node.type)) return false;
    dispatch?.(state.tr.replaceSelectionWith(node, false).scrollIntoView());
    return true;
  };
}
