"use client";
// A tick, and a switch. A tick is something to be confirmed or chosen, a switch changes what is shown at once.
import { type ReactNode, type Ref, useId } from "react";
import { Checkbox, Switch } from "react-aria-components";
import { classOf, FieldError } from "./field-parts.tsx";

export type CheckFieldProps = {
  children: ReactNode;
  checked: boolean;
  onChange: (checked: boolean) => void;
  onBlur?: () => void;
  error?: ReactNode;
  hint?: ReactNode;
  required?: boolean;
  disabled?: boolean;
  name?: string;
  className?: string;
  ref?: Ref<HTMLLabelElement>;
};

export function CheckField({
  children,
  checked,
  onChange,
  onBlur,
  error,
  hint,
  required,
  disabled,
  name,
  className,
  ref,
}: CheckFieldProps) {
  const id = useId();
  return (
    <div className={classOf("with-tick", className)}>
      <Checkbox
        ref={ref}
        className="tick"
        isSelected={checked}
        onChange={onChange}
        onBlur={onBlur}
        isRequired={required}
        isDisabled={disabled}
        isInvalid={Boolean(error)}
        validationBehavior="aria"
        name={name}
        aria-describedby={classOf(error ? `${id}-error` : "", hint ? `${id}-hint` : "") || undefined}
      >
        <span className="box" aria-hidden="true">
          <svg viewBox="0 0 16 16" aria-hidden="true">
            <path d="M2.5 8.5 6.3 12.3 13.5 4" />
          </svg>
        </span>
        <span>{children}</span>
      </Checkbox>
      {hint ? (
        <p className="note" id={`${id}-hint`}>
          {hint}
        </p>
      ) : null}
      {error ? <FieldError id={`${id}-error`}>{error}</FieldError> : null}
    </div>
  );
}

export type SwitchFieldProps = {
  children: ReactNode;
  on: boolean;
  onChange: (on: boolean) => void;
  disabled?: boolean;
  name?: string;
};

export function SwitchField({ children, on, onChange, disabled, name }: SwitchFieldProps) {
  return (
    <Switch className="switch" isSelected={on} onChange={onChange} isDisabled={disabled} name={name}>
      <span className="rail" aria-hidden="true" />
      <span>{children}</span>
    </Switch>
  );
}
