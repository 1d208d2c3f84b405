"use client";
// Whether the whole revision has passed before the reader's eyes (SGN-12): the parts of each section of the page that were
// on the screen add up to the section. The button that leads to what was not seen yet works by keyboard and screen reader.
import { type ReactNode, useCallback, useEffect, useRef, useState } from "react";
import { Button } from "../../../../components/ui/button.tsx";
import { useAnnounce } from "../../../../components/ui/live-region.tsx";
import { Progress } from "../../../../components/ui/progress.tsx";

export type Reading = { seen: number; of: number; isWhole: boolean; showNext: () => void };

type Span = { from: number; to: number };
/** A section counts as seen when all but this much of it was. Rounding and hairlines are not content. */
const SLACK_PX = 4;

/** Follows the sections below `root`. `isWhole` stays true once it was. */
export function useReading(already: boolean): { root: (element: HTMLElement | null) => void; reading: Reading } {
  const element = useRef<HTMLElement | null>(null);
  const spans = useRef(new WeakMap<Element, Span[]>());
  const [{ seen, of }, setCount] = useState({ seen: 0, of: 0 });
  const [isWhole, setWhole] = useState(already);
  const root = useCallback((found: HTMLElement | null) => {
    element.current = found;
  }, []);

  useEffect(() => {
    let asked = 0;
    const look = () => {
      asked = 0;
      const sections = sectionsOf(element.current);
      for (const section of sections) note(section, spans.current);
      const done = sections.filter((section) => isSeen(section, spans.current)).length;
      setCount({ seen: done, of: sections.length });
      if (sections.length > 0 && done === sections.length) setWhole(true);
    };
    const later = () => {
      if (asked === 0) asked = requestAnimationFrame(look);
    };
    later();
    const grown = new ResizeObserver(later);
    if (element.current !== null) grown.observe(element.current);
    window.addEventListener("scroll", later, { passive: true });
    window.addEventListener("resize", later);
    return () => {
      cancelAnimationFrame(asked);
      grown.disconnect();
      window.removeEventListener("scroll", later);
      window.removeEventListener("resize", later);
    };
  }, []);

  const showNext = useCallback(() => {
    const section = sectionsOf(element.current).find((each) => !isSeen(each, spans.current));
    if (section === undefined) return;
    const unseen = firstGap(section, spans.current);
    window.scrollTo({ top: window.scrollY + section.getBoundingClientRect().top + unseen - stripHeight() });
    // The reading position of a screen reader goes where the eyes go.
    section.setAttribute("tabindex", "-1");
    section.focus({ preventScroll: true });
  }, []);
  return { root, reading: { seen, of, isWhole, showNext } };
}

/** How far the reading is, and the way on. */
export function ReadingProgress({ reading, children }: { reading: Reading; children?: ReactNode }) {
  const announce = useAnnounce();
  const { isWhole, seen, of, showNext } = reading;
  useEffect(() => {
    if (isWhole) announce("The whole revision has been opened.");
  }, [isWhole, announce]);
  if (isWhole) return <p className="note">The whole revision has been opened.</p>;
  return (
    <>
      <Progress label="Opened so far" done={seen} of={Math.max(1, of)} words={`${seen} of ${of} parts`} />
      <Button onClick={showNext}>Show the next part not seen</Button>
      {children}
    </>
  );
}

/** The sections are what lies directly in the page; a wrapper round all of them is looked through. */
function sectionsOf(root: HTMLElement | null): HTMLElement[] {
  let holder: Element | null = root;
  while (holder !== null && holder.children.length === 1) holder = holder.children[0] ?? null;
  const found =
    holder === null
      ? []
      : [...holder.children].flatMap((child) => (child.children.length > 12 ? [...child.children] : [child]));
  return found.filter((each): each is HTMLElement => each instanceof HTMLElement && each.offsetHeight > 0);
}

function note(section: HTMLElement, spans: WeakMap<Element, Span[]>): void {
  const { top, height } = section.getBoundingClientRect();
  const from = Math.max(0, -top) / height;
  const to = Math.min(height, window.innerHeight - top) / height;
  if (to > from) spans.set(section, merged([...(spans.get(section) ?? []), { from, to }]));
}

function merged(spans: Span[]): Span[] {
  const sorted = [...spans].sort((a, b) => a.from - b.from);
  const result: Span[] = [];
  for (const span of sorted) {
    const last = result.at(-1);
    if (last !== undefined && span.from <= last.to) last.to = Math.max(last.to, span.to);
    else result.push({ ...span });
  }
  return result;
}

function isSeen(section: HTMLElement, spans: WeakMap<Element, Span[]>): boolean {
  return firstGap(section, spans) >= section.offsetHeight - SLACK_PX;
}

/** Pixels from the section's top to where it was not seen. */
function firstGap(section: HTMLElement, spans: WeakMap<Element, Span[]>): number {
  let reached = 0;
  const slack = SLACK_PX / section.offsetHeight;
  for (const { from, to } of spans.get(section) ?? []) {
    if (from > reached + slack) break;
    reached = Math.max(reached, to);
  }
  return reached * section.offsetHeight;
}

function stripHeight(): number {
  return Math.min(80, window.innerHeight / 8);
}
