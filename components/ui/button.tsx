"use client";
// One button. Its words say what happens. One that is not yet possible stays reachable by keyboard and says why.
import { type ButtonHTMLAttributes, type MouseEvent, type ReactNode, type Ref, useId } from "react";
import { type ButtonKind, buttonClass } from "./button-class.ts";

export type ButtonProps = Omit<ButtonHTMLAttributes<HTMLButtonElement>, "disabled" | "className"> & {
  kind?: ButtonKind;
  /** It has been pressed and the answer is on its way; presses in the meantime do nothing. */
  pending?: boolean;
  /** What is said while pending; otherwise the words stay. */
  pendingWords?: string;
  /** Not yet possible, and why, as a sentence shown under the button. */
  notYet?: ReactNode;
  className?: string;
  ref?: Ref<HTMLButtonElement>;
};

export function Button({
  kind = "plain",
  pending = false,
  pendingWords,
  notYet,
  className,
  children,
  onClick,
  type = "button",
  ref,
  "aria-describedby": describedBy,
  ...rest
}: ButtonProps) {
  const why = useId();
  const held = pending || Boolean(notYet);
  const press = (event: MouseEvent<HTMLButtonElement>) => {
    if (held) {
      event.preventDefault();
      return;
    }
    onClick?.(event);
  };
  const button = (
    <button
      {...rest}
      ref={ref}
      type={type}
      className={className ? `${buttonClass(kind)} ${className}` : buttonClass(kind)}
      onClick={press}
      aria-disabled={held || undefined}
      aria-busy={pending || undefined}
      aria-describedby={[describedBy, notYet ? why : undefined].filter(Boolean).join(" ") || undefined}
    >
      {pending && pendingWords ? pendingWords : children}
      {pending ? (
        <span className="dots" aria-hidden="true">
          <i />
          <i />
          <i />
        </span>
      ) : null}
    </button>
  );
  if (!notYet) return button;
  return (
    <span className="with-why">
      {button}
      <span className="why" id={why} style={{ display: "block" }}>
        {notYet}
      </span>
    </span>
  );
}
