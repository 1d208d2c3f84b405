"use client";
// A compound, looked up by name, synonym, CAS RN or formula.
import { useQuery } from "@tanstack/react-query";
import { type Ref, useDeferredValue, useState } from "react";
import { FormulaText } from "../../components/chem/formula-text.tsx";
import { type CompoundItem, compoundsQuery } from "../../components/query/compounds.ts";
import { ComboField } from "../../components/ui/combo-field.tsx";
import { usePending } from "../page-context.tsx";

type CompoundFieldProps = {
  label: string;
  chosen: CompoundItem | null;
  chosenId: string;
  onPick: (item: CompoundItem) => void;
  error?: string;
  className?: string;
  /** only what can stand in a composition by itself can be chosen */
  isForRow?: boolean;
  ref?: Ref<HTMLInputElement>;
};

export function CompoundField({
  label,
  chosen,
  chosenId,
  onPick,
  error,
  className,
  isForRow = false,
  ref,
}: CompoundFieldProps) {
  const name = chosen?.name ?? chosenId;
  const [typed, setTyped] = useState<string | null>(null);
  const report = usePending();
  const input = typed ?? name;
  const asked = useDeferredValue(typed === null || typed === name ? "" : typed);
  const found = useQuery(compoundsQuery(asked));
  const items = asked === "" ? [] : (found.data?.items ?? []);
  const wrongCas = found.data?.casCheck ?? null;
  return (
    <ComboField
      className={className}
      label={label}
      ref={ref}
      input={input}
      onInput={(text) => {
        setTyped(text);
        report(text.trim() !== name && text.trim() !== "");
      }}
      value={chosenId}
      error={error}
      loading={found.isFetching}
      placeholder="name, CAS number, formula"
      columns="minmax(0, 1fr) 150px 92px 100px"
      items={items.map((item) => ({
        id: item.id,
        text: item.name,
        disabled: isForRow && !canBePoured(item),
        columns: [
          <span key="name">
            {item.name}
            {item.matched === item.name ? null : <span className="aside"> {item.matched}</span>}
          </span>,
          <FormulaText key="formula" formula={item.formula} />,
          <span key="mass" className="mono r">
            {item.molarMass ?? ""}
          </span>,
          <span key="cas" className="mono aside">
            {item.cas ?? ""}
          </span>,
        ],
      }))}
      note={
        isForRow
          ? "Name, formula, molar mass in g/mol, CAS number. Only what is neutral can be poured in."
          : "Name, formula, molar mass in g/mol, CAS number."
      }
      emptyText={
        wrongCas === null
          ? found.isError
            ? "The library cannot be asked at the moment."
            : undefined
          : `The check digit of ${wrongCas.given} does not fit: ${wrongCas.corrected} would.`
      }
      onPick={(picked) => {
        const item = items.find((each) => each.id === picked.id);
        if (item === undefined) return;
        setTyped(null);
        report(false);
        onPick(item);
      }}
      onBlur={() => {
        // What was not chosen from the list names no compound: the field shows again what stands in the row.
        setTyped(null);
        report(false);
      }}
    />
  );
}

/** Shelf reagents, and forms without charge; a family as a whole is no substance. */
function canBePoured(item: CompoundItem): boolean {
  return item.neutral && !item.id.startsWith("family:");
}
