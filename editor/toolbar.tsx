"use client";
// Words in a row that change what is marked, or put something in. Arrow keys go along it, Escape goes back to the page.
import type { Editor } from "@tiptap/core";
import { addColumnAfter, addRowAfter, deleteColumn, deleteRow, deleteTable, isInTable } from "@tiptap/pm/tables";
import { useEditorState } from "@tiptap/react";
import { type RefObject, useEffect } from "react";
import { Button, Group, ToggleButton, Toolbar } from "react-aria-components";
import { redoCommand, undoCommand } from "y-prosemirror";
import { type Asking, PUT_INS } from "./put-in.ts";

type MarkName = "bold" | "italic" | "underline" | "strike" | "code" | "subscript" | "superscript";
const MARKS: readonly { name: MarkName; label: string }[] = [
  { name: "bold", label: "bold" },
  { name: "italic", label: "italic" },
  { name: "underline", label: "underline" },
  { name: "strike", label: "struck" },
  { name: "subscript", label: "subscript" },
  { name: "superscript", label: "superscript" },
  { name: "code", label: "fixed width" },
];
const TABLE_ACTS = [
  { label: "row below", command: addRowAfter },
  { label: "column to the right", command: addColumnAfter },
  { label: "take the row out", command: deleteRow },
  { label: "take the column out", command: deleteColumn },
  { label: "take the table out", command: deleteTable },
] as const;

type PageToolbarProps = {
  editor: Editor;
  asking: Asking;
  onLink: () => void;
  toolbar: RefObject<HTMLDivElement | null>;
};

export function PageToolbar({ editor, asking, onLink, toolbar }: PageToolbarProps) {
  const now = useEditorState({
    editor,
    selector: ({ editor: current }) => ({
      marks: MARKS.filter(({ name }) => current.isActive(name)).map(({ name }) => name),
      isLink: current.isActive("link"),
      isInTable: isInTable(current.state),
    }),
  });
  // The shortcut is common practice for toolbars of rich text.
  useEffect(() => {
    const dom = editor.view.dom;
    const onKeyDown = (event: KeyboardEvent) => {
      if (!event.altKey || event.key !== "F10") return;
      event.preventDefault();
      toolbar.current?.querySelector("button")?.focus();
    };
    const onToolbarKey = (event: KeyboardEvent) => {
      if (event.key === "Escape") editor.commands.focus();
    };
    const bar = toolbar.current;
    dom.addEventListener("keydown", onKeyDown);
    bar?.addEventListener("keydown", onToolbarKey);
    return () => {
      dom.removeEventListener("keydown", onKeyDown);
      bar?.removeEventListener("keydown", onToolbarKey);
    };
  }, [editor, toolbar]);
  return (
    <Toolbar ref={toolbar} className="put-in sticks" aria-label="Writing; from the page, Alt+F10">
      <Group aria-label="Mark">
        {MARKS.map(({ name, label }) => (
          <ToggleButton
            key={name}
            className={`as-${name}`}
            isSelected={now.marks.includes(name)}
            onChange={() => editor.chain().focus().toggleMark(name).run()}
          >
            {label}
          </ToggleButton>
        ))}
        <ToggleButton isSelected={now.isLink} onChange={onLink}>
          link
        </ToggleButton>
      </Group>
      <Group aria-label="Undo">
        <Button onPress={() => undoCommand(editor.state, editor.view.dispatch)}>undo</Button>
        <Button onPress={() => redoCommand(editor.state, editor.view.dispatch)}>redo</Button>
      </Group>
      <Group aria-label="Put in" className="line">
        <span aria-hidden="true">Put in</span>
        {PUT_INS.map((each) => (
          <Button key={each.id} aria-label={`Put in ${each.label}`} onPress={() => each.act(editor, asking)}>
            {each.label}
          </Button>
        ))}
      </Group>
      {now.isInTable ? (
        <Group aria-label="Table" className="line">
          <span aria-hidden="true">Table</span>
          {TABLE_ACTS.map(({ label, command }) => (
            <Button
              key={label}
              onPress={() => {
                command(editor.state, editor.view.dispatch);
                editor.commands.focus();
              }}
            >
              {label}
            </Button>
          ))}
        </Group>
      ) : null}
    </Toolbar>
  );
}
