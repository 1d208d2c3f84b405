import type { ReactNode } from "react";

/** The doors: one small leaf in the middle of the desk. */
export default function DoorLayout({ children }: { children: ReactNode }) {
  return <div className="door">{children}</div>;
}
