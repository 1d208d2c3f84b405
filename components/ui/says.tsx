// A message: mark, bold finding, then what it means and what to do. The kind is said by mark and words, not by colour.
import type { ReactNode } from "react";
import { Mark } from "./mark.tsx";

export type SaysKind = "warn" | "stop" | "info" | "good";

type SaysProps = {
  kind: SaysKind;
  /** What is the case, as a sentence. */
  finding?: ReactNode;
  /** What it means and what to do. */
  children?: ReactNode;
  actions?: ReactNode;
  id?: string;
  /** Only for what appears after an act and must be heard at once, such as a refused signature. */
  urgent?: boolean;
};

export function Says({ kind, finding, children, actions, id, urgent }: SaysProps) {
  return (
    <div className={`says ${kind}`} id={id} role={urgent ? "alert" : undefined}>
      <Mark name={kind} />
      <div>
        {finding ? <b>{finding}</b> : null}
        {finding && children ? " " : null}
        {children}
      </div>
      {actions ? <div className="acts row-of">{actions}</div> : null}
    </div>
  );
}

/** A message about the whole leaf, between two rules under the title. */
export function Notice(props: SaysProps) {
  return (
    <div className="notice">
      <Says {...props} />
    </div>
  );
}
