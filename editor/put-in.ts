// What can be put into a page: one list for the toolbar and for the menu that "/" opens.
import type { Editor } from "@tiptap/core";
import type { Command } from "@tiptap/pm/state";
import { insertEquilibrium, insertFormulaBlock, insertInline, insertTable } from "./commands/insert.ts";

/** The dialogs that some of them need first. */
export type Asking = {
  formula: (request: { tex: string; display: boolean; onDone: (tex: string) => void }) => void;
  compound: (request: { onDone: (item: { id: string }) => void }) => void;
  file: () => void;
};

export type PutIn = { id: string; label: string; aside: string; act: (editor: Editor, asking: Asking) => void };

const run = (editor: Editor, command: Command) => {
  editor.commands.focus();
  command(editor.state, editor.view.dispatch);
};

export const PUT_INS: readonly PutIn[] = [
  {
    id: "heading",
    label: "heading",
    aside: "## ",
    act: (editor) => editor.chain().focus().toggleHeading({ level: 2 }).run(),
  },
  {
    id: "subheading",
    label: "smaller heading",
    aside: "### ",
    act: (editor) => editor.chain().focus().toggleHeading({ level: 3 }).run(),
  },
  { id: "list", label: "list", aside: "- ", act: (editor) => editor.chain().focus().toggleBulletList().run() },
  {
    id: "numbered",
    label: "numbered list",
    aside: "1. ",
    act: (editor) => editor.chain().focus().toggleOrderedList().run(),
  },
  { id: "table", label: "table", aside: "three columns", act: (editor) => run(editor, insertTable) },
  {
    id: "quotation",
    label: "quotation",
    aside: "> ",
    act: (editor) => editor.chain().focus().toggleBlockquote().run(),
  },
  { id: "code", label: "code", aside: "```", act: (editor) => editor.chain().focus().toggleCodeBlock().run() },
  { id: "rule", label: "line across", aside: "---", act: (editor) => editor.chain().focus().setHorizontalRule().run() },
  {
    id: "formula",
    label: "formula in the line",
    aside: "LaTeX",
    act: (editor, asking) =>
      asking.formula({ tex: "", display: false, onDone: (tex) => run(editor, insertInline("formula", { tex })) }),
  },
  {
    id: "formula-block",
    label: "formula",
    aside: "on its own line",
    act: (editor, asking) =>
      asking.formula({ tex: "", display: true, onDone: (tex) => run(editor, insertFormulaBlock(tex)) }),
  },
  {
    id: "compound",
    label: "compound",
    aside: "@",
    act: (editor, asking) =>
      asking.compound({ onDone: (item) => run(editor, insertInline("mention", { compound: item.id })) }),
  },
  {
    id: "equilibrium",
    label: "equilibrium block",
    aside: "pH and balances",
    act: (editor) => run(editor, insertEquilibrium),
  },
  { id: "file", label: "file", aside: "up to 32 MiB", act: (_editor, asking) => asking.file() },
];
