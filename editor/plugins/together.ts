// y-prosemirror's own plug-ins, as one Tiptap extension: the shared page, the carets of others, and an undo of one's own changes.
import { Extension } from "@tiptap/core";
import {
  initProseMirrorDoc,
  redoCommand,
  undoCommand,
  yCursorPlugin,
  ySyncPlugin,
  ySyncPluginKey,
  yUndoPlugin,
} from "y-prosemirror";
import type { Awareness } from "y-protocols/awareness";
import * as Y from "yjs";
import { colourOf } from "../colours.ts";

/** Changes of the fields above the page carry this origin, so that they are undone like typing. */
export const HEAD_ORIGIN = Symbol("head");

type Mapping = ReturnType<typeof initProseMirrorDoc>["mapping"];

export const Together = Extension.create<
  { doc: Y.Doc | null; awareness: Awareness | null },
  { mapping: Mapping | undefined }
>({
  name: "together",
  // Before everything else: the page has to be there when other plug-ins look at it.
  priority: 1000,
  addOptions: () => ({ doc: null, awareness: null }),
  addStorage: () => ({ mapping: undefined }),
  onBeforeCreate() {
    if (this.options.doc === null) return;
    // The editor begins with the page as it stands, so that nothing is drawn twice and the caret has a place from the start.
    const { doc, mapping } = initProseMirrorDoc(this.options.doc.getXmlFragment("page"), this.editor.schema);
    // Tiptap takes a node as content; only the type of the option does not say so.
    Reflect.set(this.editor.options, "content", doc);
    this.storage.mapping = mapping;
  },
  addProseMirrorPlugins() {
    const { doc, awareness } = this.options;
    if (doc === null || awareness === null) return [];
    const page = doc.getXmlFragment("page");
    const undoManager = new Y.UndoManager([page, doc.getMap("head")], {
      trackedOrigins: new Set([ySyncPluginKey, HEAD_ORIGIN]),
      captureTransaction: (transaction) => transaction.meta.get("addToHistory") !== false,
    });
    return [
      ySyncPlugin(page, { mapping: this.storage.mapping }),
      yCursorPlugin(awareness, { cursorBuilder: buildCaret, selectionBuilder: buildChoice }),
      yUndoPlugin({ undoManager }),
    ];
  },
  addKeyboardShortcuts() {
    const undo = () => undoCommand(this.editor.state, this.editor.view.dispatch);
    const redo = () => redoCommand(this.editor.state, this.editor.view.dispatch);
    return { "Mod-z": undo, "Mod-y": redo, "Shift-Mod-z": redo };
  },
});

/** The name comes from the server, which puts it in by the session; the ink follows from the person, not from what was sent. */
function buildCaret(user: unknown): HTMLElement {
  const caret = document.createElement("span");
  caret.className = "other-caret";
  caret.style.setProperty("--by", colourOf(textOf(user, "id")));
  const name = document.createElement("span");
  name.textContent = textOf(user, "name").slice(0, 60);
  // Zero-width joiners keep the browser's own caret from jumping over it.
  caret.append("\u2060", name, "\u2060");
  return caret;
}

function buildChoice(user: unknown): { class: string; style: string } {
  return { class: "other-choice", style: `--by: ${colourOf(textOf(user, "id"))}` };
}

function textOf(user: unknown, field: string): string {
  if (typeof user !== "object" || user === null) return "";
  const value: unknown = Reflect.get(user, field);
  return typeof value === "string" ? value : "";
}
