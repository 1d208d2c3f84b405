"use client";
// The list under "/" or "@": a listbox that the page's own caret works, so that typing goes on in the page.
import { useQuery } from "@tanstack/react-query";
import type { Editor } from "@tiptap/core";
import { useEditorState } from "@tiptap/react";
import { type ReactNode, useEffect, useId, useLayoutEffect, useRef, useState } from "react";
import { FormulaText } from "../components/chem/formula-text.tsx";
import { type CompoundItem, compoundsQuery } from "../components/query/compounds.ts";
import { insertInline } from "./commands/insert.ts";
import { usePage } from "./page-context.tsx";
import { type Question, type SuggestKeys, suggestKey } from "./plugins/suggest.ts";
import { type Asking, PUT_INS } from "./put-in.ts";

type Choice = { id: string; label: string; aside: ReactNode; pick: () => void };

type SuggestListProps = { editor: Editor; asking: Asking; keys: { current: SuggestKeys | null } };

export function SuggestList({ editor, asking, keys }: SuggestListProps) {
  const question = useEditorState({
    editor,
    selector: ({ editor: current }) => suggestKey.getState(current.state)?.question ?? null,
  });
  if (question === null) return null;
  return question.sign === "/" ? (
    <PutInList editor={editor} asking={asking} keys={keys} question={question} />
  ) : (
    <CompoundList editor={editor} keys={keys} question={question} />
  );
}

function PutInList({ editor, asking, keys, question }: SuggestListProps & { question: Question }) {
  const text = question.text.toLowerCase();
  const choices = PUT_INS.filter(({ label }) => label.includes(text)).map(
    (each): Choice => ({
      id: each.id,
      label: each.label,
      aside: each.aside,
      pick: () => {
        takeQuestion(editor, question);
        each.act(editor, asking);
      },
    }),
  );
  return <Listbox editor={editor} keys={keys} question={question} label="Put in" choices={choices} note={null} />;
}

function CompoundList({ editor, keys, question }: Pick<SuggestListProps, "editor" | "keys"> & { question: Question }) {
  const { remember } = usePage();
  const found = useQuery(compoundsQuery(question.text, 8));
  const items: readonly CompoundItem[] = question.text.trim() === "" ? [] : (found.data?.items ?? []);
  const choices = items.map(
    (item): Choice => ({
      id: item.id,
      label: item.name,
      aside: (
        <>
          <FormulaText formula={item.formula} /> <span className="mono">{item.cas ?? ""}</span>
        </>
      ),
      pick: () => {
        remember(item);
        takeQuestion(editor, question);
        insertInline("mention", { compound: item.id })(editor.state, editor.view.dispatch);
      },
    }),
  );
  const note =
    question.text.trim() === ""
      ? "Type a name, a CAS number or a formula."
      : found.isFetching
        ? "Looking …"
        : "Nothing found.";
  return <Listbox editor={editor} keys={keys} question={question} label="Compounds" choices={choices} note={note} />;
}

type ListboxProps = Pick<SuggestListProps, "editor" | "keys"> & {
  question: Question;
  label: string;
  choices: readonly Choice[];
  /** said when there is nothing to choose; without it the list is not there then */
  note: string | null;
};

function Listbox({ editor, keys, question, label, choices, note }: ListboxProps) {
  const id = useId();
  const box = useRef<HTMLDivElement>(null);
  const [at, setAt] = useState(0);
  const active = Math.min(at, Math.max(0, choices.length - 1));
  const chosen = choices[active];

  useEffect(() => {
    keys.current = (event) => {
      if (choices.length === 0) return false;
      if (event.key === "ArrowDown") setAt((active + 1) % choices.length);
      else if (event.key === "ArrowUp") setAt((active + choices.length - 1) % choices.length);
      else if (event.key === "Enter" || event.key === "Tab") chosen?.pick();
      else return false;
      return true;
    };
    return () => {
      keys.current = null;
    };
  }, [active, choices, chosen, keys]);

  const optionId = chosen === undefined ? null : `${id}-${active}`;
  useEffect(() => {
    const { dom } = editor.view;
    dom.setAttribute("aria-controls", id);
    if (optionId === null) dom.removeAttribute("aria-activedescendant");
    else dom.setAttribute("aria-activedescendant", optionId);
    if (optionId !== null) document.getElementById(optionId)?.scrollIntoView({ block: "nearest" });
    return () => {
      dom.removeAttribute("aria-controls");
      dom.removeAttribute("aria-activedescendant");
    };
  }, [editor, id, optionId]);

  // biome-ignore lint/correctness/useExhaustiveDependencies: measured anew whenever the list changes
  useLayoutEffect(() => {
    const element = box.current;
    if (element === null) return;
    const caret = editor.view.coordsAtPos(question.from);
    const room = window.innerHeight - caret.bottom;
    const top = room < element.offsetHeight + 8 ? Math.max(8, caret.top - element.offsetHeight - 4) : caret.bottom + 4;
    element.style.top = `${top}px`;
    element.style.left = `${Math.max(8, Math.min(caret.left, window.innerWidth - element.offsetWidth - 8))}px`;
  }, [editor, question.from, choices.length, note]);

  if (choices.length === 0 && note === null) return null;
  return (
    <div ref={box} className="list-sheet" style={{ position: "fixed", maxHeight: "min(420px, 60vh)" }}>
      <div className="choices" role="listbox" id={id} aria-label={label} tabIndex={-1}>
        {choices.map((choice, index) => (
          // biome-ignore lint/a11y/useKeyWithClickEvents: the page's caret has the keys, by aria-activedescendant
          <div
            key={choice.id}
            id={`${id}-${index}`}
            className="choice"
            role="option"
            tabIndex={-1}
            aria-selected={index === active}
            data-focused={index === active ? true : undefined}
            // The caret stays in the page.
            onMouseDown={(event) => event.preventDefault()}
            onMouseEnter={() => setAt(index)}
            onClick={() => choice.pick()}
          >
            <span>{choice.label}</span>
            <span className="aside">{choice.aside}</span>
          </div>
        ))}
      </div>
      {choices.length === 0 ? <span className="list-note">{note}</span> : null}
    </div>
  );
}

function takeQuestion(editor: Editor, { from, to }: Question): void {
  editor.view.dispatch(editor.state.tr.delete(from, to));
  editor.commands.focus();
}
