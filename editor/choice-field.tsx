"use client";
// One of a few, as the browser's own select: it works in an editable page, by keyboard and on a tablet.
import { type ReactNode, useId } from "react";
import { describedBy, FieldFrame, fieldIds } from "../components/ui/field-parts.tsx";

type ChoiceFieldProps<Value extends string> = {
  label: ReactNode;
  choices: readonly { value: Value; label: string }[];
  value: Value;
  onChange: (value: Value) => void;
  error?: ReactNode;
};

export function ChoiceField<Value extends string>({ label, choices, value, onChange, error }: ChoiceFieldProps<Value>) {
  const ids = fieldIds(useId());
  return (
    <FieldFrame ids={ids} label={label} error={error}>
      <select
        id={ids.control}
        className="in"
        value={value}
        aria-invalid={error ? true : undefined}
        aria-describedby={describedBy(ids, { hint: false, error: Boolean(error) })}
        onChange={(event) => {
          const chosen = choices.find((choice) => choice.value === event.target.value);
          if (chosen !== undefined) onChange(chosen.value);
        }}
      >
        {choices.map((choice) => (
          <option key={choice.value} value={choice.value}>
            {choice.label}
          </option>
        ))}
      </select>
    </FieldFrame>
  );
}
