"use client";
// One line, or several lines, of text. Everything that an input takes passes through, so `{...register("name")}` of
// react-hook-form fits as it is.
import { type InputHTMLAttributes, type ReactNode, type Ref, type TextareaHTMLAttributes, useId } from "react";
import { classOf, describedBy, FieldFrame, fieldIds } from "./field-parts.tsx";

type Told = {
  label: ReactNode;
  /** In faint ink after the label: "of L. Brandt", "not required". */
  aside?: ReactNode;
  hint?: ReactNode;
  error?: ReactNode;
  /** Class of the frame; the control has `in` and `controlClassName`. */
  className?: string;
  controlClassName?: string;
};

export type TextFieldProps = Told &
  Omit<InputHTMLAttributes<HTMLInputElement>, "className"> & { ref?: Ref<HTMLInputElement> };

export function TextField({
  label,
  aside,
  hint,
  error,
  className,
  controlClassName,
  id,
  type = "text",
  ref,
  "aria-describedby": more,
  ...rest
}: TextFieldProps) {
  const own = useId();
  const ids = fieldIds(id ?? own);
  return (
    <FieldFrame ids={ids} label={label} aside={aside} hint={hint} error={error} className={className}>
      <input
        {...rest}
        ref={ref}
        id={ids.control}
        type={type}
        className={classOf("in", controlClassName)}
        aria-invalid={error ? true : undefined}
        aria-describedby={describedBy(ids, { hint: Boolean(hint), error: Boolean(error) }, more)}
      />
    </FieldFrame>
  );
}

export type TextAreaProps = Told &
  Omit<TextareaHTMLAttributes<HTMLTextAreaElement>, "className"> & { ref?: Ref<HTMLTextAreaElement> };

export function TextArea({
  label,
  aside,
  hint,
  error,
  className,
  controlClassName,
  id,
  rows = 3,
  ref,
  "aria-describedby": more,
  ...rest
}: TextAreaProps) {
  const own = useId();
  const ids = fieldIds(id ?? own);
  return (
    <FieldFrame ids={ids} label={label} aside={aside} hint={hint} error={error} className={className}>
      <textarea
        {...rest}
        ref={ref}
        id={ids.control}
        rows={rows}
        className={classOf("in", controlClassName)}
        aria-invalid={error ? true : undefined}
        aria-describedby={describedBy(ids, { hint: Boolean(hint), error: Boolean(error) }, more)}
      />
    </FieldFrame>
  );
}
