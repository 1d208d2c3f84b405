"use client";
// What every part of an edited page needs to know, and the count of fields whose text is not entered yet.
import { createContext, type ReactNode, useCallback, useContext, useEffect, useId, useMemo, useState } from "react";
import type { CompoundItem } from "../components/query/compounds.ts";
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

type Fields = { report: (field: string, isPending: boolean) => void };
const FieldsContext = createContext<Fields>({ report: () => undefined });

/** Counts the fields below it that hold text which is not entered. */
export function UnsavedFields({ onCount, children }: { onCount: (count: number) => void; children: ReactNode }) {
  const [pending] = useState(() => new Set<string>());
  const value = useMemo<Fields>(
    () => ({
      report: (field, isPending) => {
        const before = pending.size;
        if (isPending) pending.add(field);
        else pending.delete(field);
        if (pending.size !== before) onCount(pending.size);
      },
    }),
    [pending, onCount],
  );
  return <FieldsContext.Provider value={value}>{children}</FieldsContext.Provider>;
}

/** Reports whether this field's text is entered; a field that goes takes its report with it. */
export function usePending(): (isPending: boolean) => void {
  const { report } = useContext(FieldsContext);
  const field = useId();
  useEffect(() => () => report(field, false), [report, field]);
  return useCallback((isPending) => report(field, isPending), [report, field]);
}
