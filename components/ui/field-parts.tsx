// What every field has round its control: a label above, and below a hint, an error, or both, joined by ids.
import type { ReactNode } from "react";
import { Mark } from "./mark.tsx";

export type FieldIds = { control: string; label: string; hint: string; error: string };

export function fieldIds(id: string): FieldIds {
  return { control: id, label: `${id}-label`, hint: `${id}-hint`, error: `${id}-error` };
}

/** The ids that describe a control, for aria-describedby; the error first, so that it is heard first. */
export function describedBy(ids: FieldIds, has: { hint: boolean; error: boolean }, more?: string): string | undefined {
  return [has.error ? ids.error : "", has.hint ? ids.hint : "", more ?? ""].filter(Boolean).join(" ") || undefined;
}

/**
 * An error at its field: mark and sentence. It is heard when the field is reached (aria-describedby); `heard` has it said
 * at once as well, for what is found after the field was left.
 */
export function FieldError({ id, children, heard }: { id?: string; children: ReactNode; heard?: boolean }) {
  return (
    <p className="err" id={id} role={heard ? "alert" : undefined}>
      <Mark name="stop" />
      <span>{children}</span>
    </p>
  );
}

type FieldFrameProps = {
  ids: FieldIds;
  label: ReactNode;
  aside?: ReactNode;
  hint?: ReactNode;
  error?: ReactNode;
  className?: string;
  children: ReactNode;
  after?: ReactNode;
  heard?: boolean;
};

export function FieldFrame({ ids, label, aside, hint, error, className, children, after, heard }: FieldFrameProps) {
  return (
    <div className={className ? `f ${className}` : "f"}>
      <label className="l" htmlFor={ids.control} id={ids.label}>
        {label}
        {aside ? <small> {aside}</small> : null}
      </label>
      {children}
      {hint ? (
        <p className="hint" id={ids.hint}>
          {hint}
        </p>
      ) : null}
      {after}
      {error ? (
        <FieldError id={ids.error} heard={heard}>
          {error}
        </FieldError>
      ) : null}
    </div>
  );
}

export function classOf(...names: (string | undefined | false)[]): string {
  return names.filter(Boolean).join(" ");
}
