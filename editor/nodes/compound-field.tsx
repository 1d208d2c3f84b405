"use client";
// A compound, looked up by name, synonym, CAS RN or formula. A combobox of our own: the library's keeps a hidden template in the
// page, and React cannot find the caret in an editable page that holds one.
import { useQuery } from "@tanstack/react-query";
import { type KeyboardEvent, type Ref, useDeferredValue, useEffect, useId, useState } from "react";
import { FormulaText } from "../../components/chem/formula-text.tsx";
import { type CompoundItem, compoundsQuery } from "../../components/query/compounds.ts";
import { describedBy, FieldFrame, fieldIds } from "../../components/ui/field-parts.tsx";
import { useUnentered } from "../page-context.tsx";

type CompoundFieldProps = {
  /** the same each time the page is opened, and no other field's */
  field: string;
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
  field,
  label,
  chosen,
  chosenId,
  onPick,
  error,
  className,
  isForRow = false,
  ref,
}: CompoundFieldProps) {
  const ids = fieldIds(useId());
  const name = chosen?.name ?? chosenId;
  const { kept, report } = useUnentered(field);
  const [typed, setTyped] = useState(isForRow ? kept : null);
  const [isBeingTyped, setBeingTyped] = useState(false);
  const [at, setAt] = useState(0);
  const asked = useDeferredValue(typed ?? "").trim();
  const found = useQuery(compoundsQuery(asked, isForRow ? 30 : 12));
  const all = asked === "" ? [] : (found.data?.items ?? []);
  // A family as a whole and a charged form cannot be poured in: a row is not offered them.
  const items = isForRow ? all.filter(canBePoured) : all;
  const isUnchosen = typed !== null && typed.trim() !== "" && typed.trim() !== name;
  const isOpen = isBeingTyped && typed !== null && typed.trim() !== "";
  useEffect(() => report(isUnchosen ? typed : null), [report, isUnchosen, typed]);
  const active = Math.min(at, Math.max(0, items.length - 1));
  const optionId = (index: number) => `${ids.control}-option-${index}`;

  const change = (text: string | null) => {
    setTyped(text);
    setAt(0);
    setBeingTyped(text !== null);
  };
  const pick = (item: CompoundItem | undefined) => {
    if (item === undefined) return;
    change(null);
    onPick(item);
  };
  const onKeyDown = (event: KeyboardEvent<HTMLInputElement>) => {
    if (event.key === "Escape" && typed !== null && !isOpen) {
      event.stopPropagation();
      return change(null);
    }
    if (!isOpen) return;
    const by = event.key === "ArrowDown" ? 1 : event.key === "ArrowUp" ? -1 : 0;
    if (by !== 0 && items.length > 0) setAt((active + by + items.length) % items.length);
    else if (event.key === "Enter") pick(items[active]);
    else if (event.key === "Escape") change(null);
    else return;
    event.preventDefault();
    event.stopPropagation();
  };
  const words =
    asked !== (typed ?? "").trim() || found.isFetching
      ? "Looking …"
      : found.isError
        ? "The library cannot be asked at the moment."
        : wordsFor(found.data?.casCheck ?? null, items.length, isForRow);
  const wrong =
    isUnchosen && !isBeingTyped && isForRow
      ? `“${typed.trim()}” is not chosen yet. Choose a substance from the list; Escape leaves it.`
      : error;
  return (
    <div className={className} style={{ position: "relative", minWidth: 0 }}>
      <FieldFrame ids={ids} label={label} error={wrong}>
        <input
          ref={ref}
          id={ids.control}
          className="in"
          type="text"
          role="combobox"
          aria-autocomplete="list"
          aria-expanded={isOpen}
          aria-controls={`${ids.control}-list`}
          aria-activedescendant={isOpen && items.length > 0 ? optionId(active) : undefined}
          aria-invalid={wrong ? true : undefined}
          aria-describedby={describedBy(ids, { hint: false, error: Boolean(wrong) })}
          autoComplete="off"
          spellCheck={false}
          placeholder="name, CAS number, formula"
          value={typed ?? name}
          onChange={(event) => change(event.target.value)}
          onKeyDown={onKeyDown}
          onFocus={() => setBeingTyped(typed !== null)}
          // What was not chosen from the list names no compound. In a row it stays, with words, until it is chosen or left.
          onBlur={() => {
            setBeingTyped(false);
            if (!isForRow || !isUnchosen) change(null);
          }}
        />
      </FieldFrame>
      {isOpen ? (
        <div
          className="list-sheet wide"
          style={{ position: "absolute", left: 0, top: "100%", maxHeight: "min(420px, 60vh)" }}
        >
          <div
            className="choices"
            role="listbox"
            id={`${ids.control}-list`}
            aria-label={`${label}: what was found`}
            style={{ "--choice-cols": "minmax(0, 1fr) 150px 92px 100px" }}
          >
            {items.map((item, index) => (
              // biome-ignore lint/a11y/useKeyWithClickEvents: the field has the keys, by aria-activedescendant
              <div
                key={item.id}
                id={optionId(index)}
                className="choice cols"
                role="option"
                tabIndex={-1}
                aria-selected={index === active}
                data-focused={index === active ? true : undefined}
                onMouseDown={(event) => event.preventDefault()}
                onMouseEnter={() => setAt(index)}
                onClick={() => pick(item)}
              >
                <span>
                  {item.name}
                  {item.matched === item.name ? null : <span className="aside"> {item.matched}</span>}
                </span>
                <FormulaText formula={item.formula} />
                <span className="mono">{item.molarMass ?? ""}</span>
                <span className="mono aside">{item.cas ?? ""}</span>
              </div>
            ))}
          </div>
          <span className="list-note" role="status">
            {words}
          </span>
        </div>
      ) : null}
    </div>
  );
}

function wordsFor(casCheck: { given: string; corrected: string } | null, found: number, isForRow: boolean): string {
  if (casCheck !== null) return `The check digit of ${casCheck.given} does not fit: ${casCheck.corrected} would.`;
  if (found === 0) return "Nothing found. Try another name, a CAS number or a formula.";
  const columns = "Name, formula, molar mass in g/mol, CAS number.";
  return isForRow ? `${columns} Only what is neutral can be poured in.` : columns;
}

/** Shelf reagents, and forms without charge; a family as a whole is no substance. */
function canBePoured(item: CompoundItem): boolean {
  return item.neutral && !item.id.startsWith("family:");
}
