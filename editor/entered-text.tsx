"use client";
// Fields whose value is entered with Enter or on leaving, not per key, so that the trail has "C-17" and not "C", "C-", "C-1". What
// is typed and not entered is kept on the device, and offered again when the page was left before it was.
import { type ReactNode, useEffect, useState } from "react";
import { NumberText, type NumberTextProps } from "../components/ui/number-text.tsx";
import { TextArea, TextField } from "../components/ui/text-field.tsx";
import { useUnentered } from "./page-context.tsx";

const OFFERED = "Typed before and not entered. Enter takes it, Escape leaves it.";

type EnteredTextProps = {
  /** the same each time the page is opened, and no other field's */
  field: string;
  label: ReactNode;
  aside?: ReactNode;
  hint?: ReactNode;
  error?: ReactNode;
  value: string;
  onEnter: (value: string) => void;
  most: number;
  type?: "text" | "date";
  /** "one": a single line that may need the room of several */
  lines?: boolean | "one";
  disabled?: boolean;
  className?: string;
  controlClassName?: string;
};

export function EnteredText({
  field,
  value,
  onEnter,
  most,
  type = "text",
  lines = false,
  hint,
  ...told
}: EnteredTextProps) {
  const { kept, report } = useUnentered(field);
  const [isOffered, setOffered] = useState(kept !== null && kept.trim() !== value);
  const [text, setText] = useState(isOffered && kept !== null ? kept : value);
  const [entered, setEntered] = useState(value);
  const [seen, setSeen] = useState(value);
  const isPending = text.trim() !== entered;
  if (value !== seen) {
    setSeen(value);
    if (value !== entered) {
      // Somebody else, or an undo, changed the value: it is shown, but not in place of what is being typed here.
      setEntered(value);
      if (!isPending) setText(value);
    }
  }
  useEffect(() => report(isPending ? text : null), [report, isPending, text]);
  const enter = () => {
    const tidy = text.trim();
    if (tidy !== text) setText(tidy);
    setOffered(false);
    if (tidy === entered) return;
    setEntered(tidy);
    onEnter(tidy);
  };
  const control = {
    ...told,
    hint: isOffered ? OFFERED : hint,
    value: text,
    maxLength: most,
    // What was only offered is not entered by passing through.
    onBlur: () => {
      if (!isOffered) enter();
    },
  };
  const change = (next: string) => {
    setText(next);
    setOffered(false);
  };
  const leave = () => {
    setText(entered);
    setOffered(false);
  };
  if (lines) {
    return (
      <TextArea
        {...control}
        {...(lines === "one" ? { rows: 1 } : {})}
        onChange={(event) =>
          change(lines === "one" ? event.target.value.replace(/\s*\n\s*/g, " ") : event.target.value)
        }
        onKeyDown={(event) => {
          if (lines === "one" && event.key === "Enter") {
            event.preventDefault();
            enter();
          }
          if (event.key === "Escape" && isPending) leave();
        }}
      />
    );
  }
  return (
    <TextField
      {...control}
      type={type}
      autoComplete="off"
      onChange={(event) => change(event.target.value)}
      onKeyDown={(event) => {
        if (event.key === "Enter") {
          event.preventDefault();
          enter();
        }
        if (event.key === "Escape" && isPending) {
          event.stopPropagation();
          leave();
        }
      }}
    />
  );
}

/** A typed number that counts as not entered until it is. */
export function EnteredNumber({ field, ...props }: Omit<NumberTextProps, "onText" | "offered"> & { field: string }) {
  const { kept, report } = useUnentered(field);
  return <NumberText {...props} offered={kept} offeredHint={OFFERED} onText={report} />;
}
