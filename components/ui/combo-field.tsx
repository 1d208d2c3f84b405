"use client";
// One of many, looked up while typing. The caller searches (`onInput`) and hands in what was found; nothing is filtered
// here a second time. An item is shown in columns; the list opens over the page and nothing under it moves.
import { type ReactNode, type Ref, useId, useState } from "react";
import { ComboBox, Input, Label, ListBox, ListBoxItem, Popover } from "react-aria-components";
import { classOf, FieldError } from "./field-parts.tsx";

export type ComboItem = {
  id: string;
  /** What stands in the field once the item is chosen, and what is heard. */
  text: string;
  /** The columns of its row; the first is usually the name. Without them the text is shown. */
  columns?: readonly ReactNode[];
  disabled?: boolean;
};

export type ComboFieldProps = {
  label: ReactNode;
  aside?: ReactNode;
  hint?: ReactNode;
  error?: ReactNode;
  /** The text in the field. */
  input: string;
  onInput: (text: string) => void;
  items: readonly ComboItem[];
  /** The chosen item's id, or "" for none. */
  value: string;
  onPick: (item: ComboItem) => void;
  onBlur?: () => void;
  loading?: boolean;
  /** Said in the list when nothing was found. */
  emptyText?: ReactNode;
  /** Said under the items: how many more there are, or what to do when it is not there. */
  note?: ReactNode;
  /** Grid columns of the rows on a wide screen, such as "minmax(0,1fr) 120px 90px". */
  columns?: string;
  /** A text that is not an item may stay in the field; otherwise leaving brings the chosen item's text back. */
  allowsOwnText?: boolean;
  placeholder?: string;
  required?: boolean;
  disabled?: boolean;
  className?: string;
  ref?: Ref<HTMLInputElement>;
};

export function ComboField({
  label,
  aside,
  hint,
  error,
  input,
  onInput,
  items,
  value,
  onPick,
  onBlur,
  loading = false,
  emptyText = "Nothing found. Try another name, a CAS number or a formula.",
  note,
  columns,
  allowsOwnText = false,
  placeholder,
  required,
  disabled,
  className,
  ref,
}: ComboFieldProps) {
  const id = useId();
  // Leaving or Escape brings the chosen item's text back, also when the item is no longer among those found.
  // For that it stays among the items, at their end.
  const [chosen, setChosen] = useState<ComboItem>({ id: value, text: value === "" ? "" : input });
  if (chosen.id !== value) setChosen({ id: value, text: value === "" ? "" : input });
  const isFound = value === "" || items.some((item) => item.id === value);
  const offered = isFound ? items : [...items, chosen];
  const described = classOf(error ? `${id}-error` : "", hint ? `${id}-hint` : "") || undefined;
  return (
    <ComboBox
      className={classOf("f", className)}
      inputValue={input}
      onInputChange={onInput}
      items={offered}
      value={value === "" ? null : value}
      onChange={(key) => {
        const picked = items.find((item) => item.id === key);
        if (picked && picked.id !== value) {
          setChosen(picked);
          onPick(picked);
        } else if (!allowsOwnText) {
          onInput(chosen.text);
        }
      }}
      onBlur={onBlur}
      allowsEmptyCollection
      allowsCustomValue={allowsOwnText}
      menuTrigger="input"
      isRequired={required}
      isDisabled={disabled}
      isInvalid={Boolean(error)}
      validationBehavior="aria"
    >
      <Label className="l">
        {label}
        {aside ? <small> {aside}</small> : null}
      </Label>
      <Input
        ref={ref}
        className="in"
        placeholder={placeholder}
        aria-describedby={described}
        autoComplete="off"
        spellCheck={false}
      />
      {hint ? (
        <p className="hint" id={`${id}-hint`}>
          {hint}
        </p>
      ) : null}
      {error ? <FieldError id={`${id}-error`}>{error}</FieldError> : null}
      <Popover
        className={classOf("list-sheet", items.some((item) => item.columns) && "wide")}
        offset={4}
        placement="bottom start"
      >
        <ListBox<ComboItem>
          className="choices"
          aria-label={typeof label === "string" ? `${label}: what was found` : "What was found"}
          style={columns ? { "--choice-cols": columns } : undefined}
          renderEmptyState={() => (
            <span className="list-note">
              {loading ? "Looking …" : input.trim() === "" ? "Type to look for it." : emptyText}
            </span>
          )}
        >
          {(item) => (
            <ListBoxItem
              id={item.id}
              className={item.columns ? "choice cols" : "choice"}
              textValue={item.text}
              isDisabled={item.disabled}
            >
              {item.columns
                ? item.columns.map((column, place) => (
                    // biome-ignore lint/suspicious/noArrayIndexKey: a column is told by its place and never moves
                    <span key={place}>{column}</span>
                  ))
                : item.text}
            </ListBoxItem>
          )}
        </ListBox>
        {items.length === 0 && !isFound ? (
          <span className="list-note">{loading ? "Looking …" : emptyText}</span>
        ) : note && items.length > 0 ? (
          <span className="list-note">{note}</span>
        ) : null}
      </Popover>
    </ComboBox>
  );
}
