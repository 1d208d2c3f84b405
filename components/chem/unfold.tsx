"use client";

import { type ReactNode, useEffect, useRef } from "react";

/** What may be folded away on the screen, but is printed whole; on a frozen page it is not folded at all. */
export function Unfold({ summary, isStatic, children }: { summary: string; isStatic: boolean; children: ReactNode }) {
  const details = useRef<HTMLDetailsElement>(null);
  useEffect(() => {
    const element = details.current;
    if (element === null) return;
    let wasOpen = element.open;
    const open = () => {
      wasOpen = element.open;
      element.open = true;
    };
    const restore = () => {
      element.open = wasOpen;
    };
    addEventListener("beforeprint", open);
    addEventListener("afterprint", restore);
    return () => {
      removeEventListener("beforeprint", open);
      removeEventListener("afterprint", restore);
    };
  }, []);

  if (isStatic) {
    return (
      <div className="unfold unfold-static">
        <h4>{summary}</h4>
        {children}
      </div>
    );
  }
  return (
    <details ref={details} className="unfold">
      <summary>{summary}</summary>
      {children}
    </details>
  );
}
