"use client";
// Fields whose value is entered with Enter or on leaving, not per key, so that the trail has "C-17" and not "C", "C-", "C-1".
import { type ReactNode, useState } from "react";
import { NumberText, type NumberTextProps } from "../components/ui/number-text.tsx";
import { TextArea, TextField } from "../components/ui/text-field.tsx";
import { usePending } from "./page-context.tsx";

type EnteredTextProps = {
  label: ReactNode;
  aside?: ReactNode;
  hint?: ReactNode;
  error?: ReactNode;
  value: string;
  onEnter: (value: string) => void;
  most: number;
  type?: "text" | "date";
  lines?: boolean;
  disabled?: boolean;
  className?: string;
  controlClassName?: string;
};

export function EnteredText({ value, onEnter, most, type = "text", lines = false, ...told }: EnteredTextProps) {
  const [text, setText] = useState(value);
  const [entered, setEntered] = useState(value);
  const report = usePending();
  // Somebody else, or an undo, changed the value: what they entered is shown.
  if (value !== entered) {
    setEntered(value);
    setText(value);
  }
  const enter = () => {
    const tidy = text.trim();
    if (tidy !== text) setText(tidy);
    report(false);
    if (tidy === entered) return;
    setEntered(tidy);
    onEnter(tidy);
  };
  const change = (next: string) => {
    setText(next);
    report(next.trim() !== entered);
  };
  const leave = () => {
    setText(entered);
    report(false);
  };
  if (lines) {
    return (
      <TextArea
        {...told}
        value={text}
        maxLength={most}
        onChange={(event) => change(event.target.value)}
        onBlur={enter}
        onKeyDown={(event) => {
          if (event.key === "Escape" && text !== entered) leave();
        }}
      />
    );
  }
  return (
    <TextField
      {...told}
      type={type}
      value={text}
      maxLength={most}
      autoComplete="off"
      onChange={(event) => change(event.target.value)}
      onBlur={enter}
      onKeyDown={(event) => {
        if (event.key === "Enter") {
          event.preventDefault();
          enter();
        }
        if (event.key === "Escape" && text !== entered) {
          event.stopPropagation();
          leave();
        }
      }}
    />
  );
}

/** A typed number that counts as not entered until it is. */
export function EnteredNumber(props: Omit<NumberTextProps, "onPending">) {
  const report = usePending();
  return <NumberText {...props} onPending={report} />;
}
