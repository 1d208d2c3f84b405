import type { ReactNode } from "react";

/** An empty screen or list: what is the case, and what to do next. */
export function EmptyState({
  finding,
  children,
  action,
}: {
  finding: string;
  children?: ReactNode;
  action?: ReactNode;
}) {
  return (
    <div className="empty">
      <p className="finding">{finding}</p>
      {children ? <p className="note">{children}</p> : null}
      {action ? <div className="row-of">{action}</div> : null}
    </div>
  );
}
