"use client";
// What every part of an edited page needs to know, and the count of fields whose text is not entered yet.
import { createContext, type ReactNode, useCallback, useContext, useEffect, useId, useMemo, useState } from "react";
import type { CompoundItem } from "../components/query/compounds.ts";
import type { FieldKeep } from "./field-keep.ts";
import type { PageLine } from "./provider.ts";

export type FormulaRequest = { tex: string; display: boolean; onDone: (tex: string) => void };

export type PageContextValue = {
  revisionId: string;
  decimalSign: "." | ",";
  timeZone: string;
  line: PageLine;
  /** compounds on the page, as far as the library has told */
  compounds: ReadonlyMap<string, CompoundItem>;
  /** a compound that was just chosen is known before the library is asked again */
  remember: (item: CompoundItem) => void;
  /** opens the formula's dialog */
  askFormula: (request: FormulaRequest) => void;
};

const PageContext = createContext<PageContextValue | null>(null);

export function PageProvider({ value, children }: { value: PageContextValue; children: ReactNode }) {
  return <PageContext.Provider value={value}>{children}</PageContext.Provider>;
}

export function usePage(): PageContextValue {
  const value = useContext(PageContext);
  if (value === null) throw new Error("This part of a page stands outside of one.");
  return value;
}

type Fields = { report: (field: string, isPending: boolean) => void; keep: FieldKeep | null };
const FieldsContext = createContext<Fields>({ report: () => undefined, keep: null });

type UnsavedFieldsProps = {
  /** where the text of fields is kept; null where the device keeps nothing */
  keep: FieldKeep | null;
  onCount: (count: number) => void;
  children: ReactNode;
};

/** Counts the fields below it that hold text which is not entered, and keeps that text on the device. */
export function UnsavedFields({ keep, onCount, children }: UnsavedFieldsProps) {
  const [pending] = useState(() => new Set<string>());
  const value = useMemo<Fields>(
    () => ({
      report: (field, isPending) => {
        const before = pending.size;
        if (isPending) pending.add(field);
        else pending.delete(field);
        if (pending.size !== before) onCount(pending.size);
      },
      keep,
    }),
    [pending, onCount, keep],
  );
  return <FieldsContext.Provider value={value}>{children}</FieldsContext.Provider>;
}

export type Unentered = {
  /** what was typed here before the page was left, and not entered */
  kept: string | null;
  /** says what stands here and is not entered; null when nothing does */
  report: (text: string | null) => void;
};

/**
 * How a field's text stands that is not entered. `name` is the same each time the page is opened. A field that goes takes its
 * report with it; what it kept stays on the device.
 */
export function useUnentered(name: string): Unentered {
  const { report, keep } = useContext(FieldsContext);
  const field = useId();
  const [kept] = useState(() => keep?.textOf(name) ?? null);
  useEffect(() => () => report(field, false), [report, field]);
  return {
    kept,
    report: useCallback(
      (text) => {
        report(field, text !== null);
        keep?.keep(name, text);
      },
      [report, keep, field, name],
    ),
  };
}
