// Keeps a page typeable and its ids single, by changes of whoever types, never in answer to what another browser sent.
import { Extension } from "@tiptap/core";
import { Fragment, type Node, Slice } from "@tiptap/pm/model";
import { type EditorState, Plugin, type Transaction } from "@tiptap/pm/state";
import { Decoration, DecorationSet } from "@tiptap/pm/view";
import { ySyncPluginKey } from "y-prosemirror";
import { PAGE_LIMITS } from "../schema/index.ts";
import { newName } from "../tabs.ts";

const WITH_ID = new Set(["equilibrium", "compositionRow"]);
/** A paste beyond this would not fit into one post. */
const MOST_PASTED = 200_000;

export const Tidy = Extension.create<{ placeholder: string; onRefusedPaste: (words: string) => void }>({
  name: "tidy",
  addOptions: () => ({ placeholder: "", onRefusedPaste: () => undefined }),
  addProseMirrorPlugins() {
    const { placeholder, onRefusedPaste } = this.options;
    return [
      new Plugin({
        appendTransaction: (transactions, _before, state) =>
          transactions.some((tr) => tr.docChanged) && transactions.every((tr) => !isReceived(tr))
            ? tidied(state)
            : null,
        props: {
          transformPasted: (slice) => {
            if (slice.size > MOST_PASTED) {
              onRefusedPaste("That is too much to paste at once. Paste it in parts, or attach it as a file.");
              return Slice.empty;
            }
            return new Slice(withNewIds(slice.content), slice.openStart, slice.openEnd);
          },
          transformPastedText: (text) => text.replace(CONTROL, ""),
          decorations: ({ doc }) => {
            const only = doc.childCount === 1 ? doc.firstChild : null;
            if (only?.type.name !== "paragraph" || only.content.size > 0) return null;
            const attributes = { class: "is-empty", "data-placeholder": placeholder };
            return DecorationSet.create(doc, [Decoration.node(0, only.nodeSize, attributes)]);
          },
          handleClick: (view) => {
            // A page whose last paragraph somebody took out has no place for a caret.
            const tr = view.state.doc.childCount === 0 ? tidied(view.state) : null;
            if (tr !== null) view.dispatch(tr);
            return false;
          },
        },
      }),
    ];
  },
});

// biome-ignore lint/suspicious/noControlCharactersInRegex: these are what is taken out
const CONTROL = /[\u0000-\u0008\u000b\u000c\u000e-\u001f]/g;

function isReceived(tr: Transaction): boolean {
  const meta: unknown = tr.getMeta(ySyncPluginKey);
  return typeof meta === "object" && meta !== null && "isChangeOrigin" in meta && meta.isChangeOrigin === true;
}

/** Gives blocks and rows an id that no other has, and an empty page a paragraph; null when nothing is to do. */
function tidied(state: EditorState): Transaction | null {
  const tr = state.tr;
  const seen = new Set<string>();
  state.doc.descendants((node, pos) => {
    if (!WITH_ID.has(node.type.name)) return !node.isTextblock;
    const id: unknown = node.attrs.id;
    if (typeof id !== "string" || id === "" || seen.has(id)) tr.setNodeAttribute(pos, "id", newName());
    else seen.add(id);
    return true;
  });
  const paragraph = state.schema.nodes.paragraph;
  if (state.doc.childCount === 0 && paragraph !== undefined) tr.insert(0, paragraph.create());
  return tr.docChanged ? tr : null;
}

/** What is pasted is a copy: its blocks and rows are not those that they were copied from. Rows beyond what a page takes are cut. */
function withNewIds(fragment: Fragment): Fragment {
  const nodes: Node[] = [];
  fragment.forEach((node) => {
    const content = node.type.name === "equilibrium" ? firstRows(node.content) : node.content;
    const attrs = WITH_ID.has(node.type.name) ? { ...node.attrs, id: newName() } : node.attrs;
    nodes.push(node.isText ? node : node.type.create(attrs, withNewIds(content), node.marks));
  });
  return Fragment.from(nodes);
}

function firstRows(rows: Fragment): Fragment {
  const kept: Node[] = [];
  rows.forEach((row) => {
    if (kept.length < PAGE_LIMITS.rowsOfBlock) kept.push(row);
  });
  return Fragment.from(kept);
}
