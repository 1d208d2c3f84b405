"use client";
// One of a few. For many, or for what has to be looked up, there is ComboField.
import { type ReactNode, type Ref, useId } from "react";
import { Button, Label, ListBox, ListBoxItem, Popover, Select, SelectValue } from "react-aria-components";
import { classOf, FieldError } from "./field-parts.tsx";

export type Choice<Value extends string = string> = { value: Value; label: string; disabled?: boolean; aside?: string };

export type SelectFieldProps<Value extends string = string> = {
  label: ReactNode;
  aside?: ReactNode;
  hint?: ReactNode;
  error?: ReactNode;
  choices: readonly Choice<Value>[];
  value: Value | "";
  onChange: (value: Value) => void;
  onBlur?: () => void;
  /** What stands in the field while nothing is chosen. */
  unchosen?: string;
  required?: boolean;
  disabled?: boolean;
  name?: string;
  className?: string;
  ref?: Ref<HTMLButtonElement>;
};

export function SelectField<Value extends string = string>({
  label,
  aside,
  hint,
  error,
  choices,
  value,
  onChange,
  onBlur,
  unchosen = "Choose one",
  required,
  disabled,
  name,
  className,
  ref,
}: SelectFieldProps<Value>) {
  const id = useId();
  const described = classOf(error ? `${id}-error` : "", hint ? `${id}-hint` : "") || undefined;
  return (
    <Select
      className={classOf("f", className)}
      value={value === "" ? null : value}
      onChange={(key) => {
        const chosen = choices.find((choice) => choice.value === key);
        if (chosen) onChange(chosen.value);
      }}
      onBlur={onBlur}
      isRequired={required}
      isDisabled={disabled}
      isInvalid={Boolean(error)}
      validationBehavior="aria"
      placeholder={unchosen}
      name={name}
    >
      <Label className="l">
        {label}
        {aside ? <small> {aside}</small> : null}
      </Label>
      <Button ref={ref} className="in picks" aria-describedby={described} data-invalid={error ? true : undefined}>
        <SelectValue className="now">
          {({ selectedText, defaultChildren }) => selectedText || defaultChildren}
        </SelectValue>
      </Button>
      {hint ? (
        <p className="hint" id={`${id}-hint`}>
          {hint}
        </p>
      ) : null}
      {error ? <FieldError id={`${id}-error`}>{error}</FieldError> : null}
      <Popover className="list-sheet" offset={4}>
        <ListBox className="choices" items={choices.map((choice) => ({ ...choice, id: choice.value }))}>
          {(choice) => (
            <ListBoxItem className="choice" id={choice.value} textValue={choice.label} isDisabled={choice.disabled}>
              <span>{choice.label}</span>
              {choice.aside ? <span className="aside">{choice.aside}</span> : null}
            </ListBoxItem>
          )}
        </ListBox>
      </Popover>
    </Select>
  );
}
