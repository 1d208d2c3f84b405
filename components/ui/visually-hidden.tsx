import type { ReactNode } from "react";

/** Heard, not seen. */
export function VisuallyHidden({ children, id }: { children: ReactNode; id?: string }) {
  return (
    <span className="away" id={id}>
      {children}
    </span>
  );
}
