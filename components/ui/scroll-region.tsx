// What scrolls sideways by itself where it does not fit: reached by the keyboard, and named. A group and no landmark, for
// a page with a dozen tables would else have a dozen landmarks, some of the same name.
import type { ReactNode } from "react";
import { classOf } from "./field-parts.tsx";

type ScrollRegionProps = { label: string; children: ReactNode; className?: string };

export function ScrollRegion({ label, children, className }: ScrollRegionProps) {
  return (
    // biome-ignore lint/a11y/useSemanticElements: no form group
    // biome-ignore lint/a11y/noNoninteractiveTabindex: a region that scrolls sideways has to be reached by keyboard
    <div className={classOf("scroll", className)} role="group" tabIndex={0} aria-label={`${label}, scrolls sideways`}>
      {children}
    </div>
  );
}
