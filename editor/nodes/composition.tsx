"use client";
// The composition as it is edited: one grid row a substance, each field entered by itself.
import { useEffect, useRef, useState } from "react";
import type { SolvedBlock } from "../../chem/index.ts";
import { FormulaText } from "../../components/chem/formula-text.tsx";
import { significant } from "../../components/format.ts";
import type { CompoundItem } from "../../components/query/compounds.ts";
import { Button } from "../../components/ui/button.tsx";
import { ChoiceField } from "../choice-field.tsx";
import type { RowField } from "../commands/block.ts";
import { EnteredNumber, EnteredText } from "../entered-text.tsx";
import { usePage } from "../page-context.tsx";
import { AMOUNT_UNITS, type CompositionRow, MOST_ROWS_SOLVED } from "../schema/index.ts";
import { CompoundField } from "./compound-field.tsx";
import type { FieldErrors } from "./refusals.ts";

export type CompositionProps = {
  rows: readonly CompositionRow[];
  errors: FieldErrors;
  /** concentrations of the answer that is shown, by the row's place */
  concentrations: SolvedBlock["composition"];
  isHeld: boolean;
  onSet: (rowId: string, values: Partial<Record<RowField, string>>) => void;
  /** adds a row and answers its id */
  onAdd: () => string;
  onMove: (rowId: string, by: -1 | 1) => void;
  onTakeOut: (rowId: string) => void;
};

const COLUMNS = "minmax(170px, 1fr) 104px 104px 92px 108px 92px 78px 66px";

export function Composition({
  rows,
  errors,
  concentrations,
  isHeld,
  onSet,
  onAdd,
  onMove,
  onTakeOut,
}: CompositionProps) {
  const [added, setAdded] = useState("");
  const isFull = rows.length >= MOST_ROWS_SOLVED;
  return (
    <div className="pour" style={{ "--cols": COLUMNS }}>
      <div className="pour-head" aria-hidden="true">
        <span>Poured in</span>
        <span>Formula</span>
        <span className="r">Amount</span>
        <span>Unit</span>
        <span className="r">Mass fraction</span>
        <span>Lot</span>
        <span className="r">
          <i>c</i> / (mol/L)
        </span>
        <span />
      </div>
      {rows.map((row, index) => (
        <Row
          key={row.id}
          row={row}
          index={index}
          count={rows.length}
          others={rows.filter((each) => each !== row)}
          errors={errors}
          concentration={concentrations[index]?.concentration ?? null}
          isHeld={isHeld}
          takesFocus={row.id === added}
          onSet={onSet}
          onMove={onMove}
          onTakeOut={onTakeOut}
        />
      ))}
      <p className="acts">
        <Button
          kind="quiet"
          onClick={() => setAdded(onAdd())}
          notYet={
            isFull
              ? `A composition has at most ${MOST_ROWS_SOLVED} rows. Put the rest into a block of its own.`
              : undefined
          }
        >
          Add a row
        </Button>
      </p>
    </div>
  );
}

type RowProps = Pick<CompositionProps, "errors" | "isHeld" | "onSet" | "onMove" | "onTakeOut"> & {
  row: CompositionRow;
  index: number;
  count: number;
  others: readonly CompositionRow[];
  concentration: number | null;
  takesFocus: boolean;
};

function Row({
  row,
  index,
  count,
  others,
  errors,
  concentration,
  isHeld,
  takesFocus,
  onSet,
  onMove,
  onTakeOut,
}: RowProps) {
  const { compounds, decimalSign, remember } = usePage();
  const item = compounds.get(row.compound);
  const field = useRef<HTMLInputElement>(null);
  useEffect(() => {
    if (takesFocus) field.current?.focus();
  }, [takesFocus]);
  const set = (values: Partial<Record<RowField, string>>) => onSet(row.id, values);
  const place = `row ${index + 1}`;
  const error = (name: Parameters<FieldErrors["row"]>[1]) => errors.row(index, name);
  const isWeighed = row.unit === "g" || row.unit === "mg" || row.unit === "kg";
  const isPoured = row.unit === "mL" || row.unit === "L";
  const isBad = (["compound", "amount", "unit", "massFraction", "density"] as const).some((name) => error(name));
  return (
    <fieldset className={isBad ? "pour-row bad" : "pour-row"} aria-label={`Row ${index + 1}`}>
      <CompoundField
        className="name"
        field={`row ${row.id} compound`}
        label={`Poured in, ${place}`}
        chosen={item ?? null}
        chosenId={row.compound}
        error={error("compound")}
        ref={field}
        isForRow
        onPick={(picked) => {
          remember(picked);
          set({ compound: picked.id, constants: pinsFor(picked, others).join(" ") });
        }}
      />
      <span className="fixed-cell">{item === undefined ? null : <FormulaText formula={item.formula} />}</span>
      <EnteredNumber
        field={`row ${row.id} amount`}
        label={`Amount, ${place}`}
        value={row.amount}
        decimalSign={decimalSign}
        unit={row.unit}
        error={error("amount")}
        refuse={(decimal) => (decimal.startsWith("-") ? "An amount is not below zero. Write what went in." : undefined)}
        onCommit={(amount) => set({ amount })}
      />
      <ChoiceField
        label={`Unit, ${place}`}
        choices={AMOUNT_UNITS.map((unit) => ({ value: unit, label: unit }))}
        value={row.unit}
        error={error("unit")}
        onChange={(unit) => set({ unit })}
      />
      {isWeighed || isPoured ? (
        <div>
          <EnteredNumber
            field={`row ${row.id} massFraction`}
            label={`Mass fraction, ${place}`}
            value={row.massFraction}
            decimalSign={decimalSign}
            error={error("massFraction")}
            onCommit={(massFraction) => set({ massFraction })}
          />
          <FromLabel
            item={item}
            field="massFraction"
            value={row.massFraction}
            onTake={(massFraction) => set({ massFraction })}
          />
          {isPoured ? (
            <>
              <EnteredNumber
                field={`row ${row.id} density`}
                label={`Density, ${place}`}
                hint="density, g/mL"
                value={row.density}
                decimalSign={decimalSign}
                unit="g/mL"
                error={error("density")}
                onCommit={(density) => set({ density })}
              />
              <FromLabel item={item} field="density" value={row.density} onTake={(density) => set({ density })} />
            </>
          ) : null}
        </div>
      ) : (
        <span className="fixed-cell r faint">not needed</span>
      )}
      <EnteredText
        field={`row ${row.id} lot`}
        label={`Lot, ${place}`}
        value={row.lot}
        most={120}
        controlClassName="mono"
        onEnter={(lot) => set({ lot })}
      />
      <span className={isHeld ? "fixed-cell r mono is-held" : "fixed-cell r mono"}>
        <span className="away">Concentration in mol/L: </span>
        {concentration === null ? <span className="faint">waits</span> : significant(concentration, 4, decimalSign)}
      </span>
      <span className="row-of">
        {index === 0 ? null : (
          <Button kind="quiet" aria-label={`Move row ${index + 1} up`} onClick={() => onMove(row.id, -1)}>
            up
          </Button>
        )}
        {index === count - 1 ? null : (
          <Button kind="quiet" aria-label={`Move row ${index + 1} down`} onClick={() => onMove(row.id, 1)}>
            down
          </Button>
        )}
        <Button kind="quiet-stop" aria-label={`Take out row ${index + 1}`} onClick={() => onTakeOut(row.id)}>
          take out
        </Button>
      </span>
    </fieldset>
  );
}

/** What a usual label says, offered and never filled in by itself (CAL-12). */
function FromLabel({
  item,
  field,
  value,
  onTake,
}: {
  item: CompoundItem | undefined;
  field: "massFraction" | "density";
  value: string;
  onTake: (value: string) => void;
}) {
  const { decimalSign } = usePage();
  const label = item === undefined ? null : item[field];
  const usual = field === "massFraction" && label === null ? (item?.typicalPurity ?? null) : null;
  const offered = label ?? usual;
  if (offered === null || offered === value) return null;
  return (
    <Button kind="quiet" onClick={() => onTake(offered)}>
      {label === null ? "usual grade" : "as on the label"}: {offered.replace(".", decimalSign)}
    </Button>
  );
}

/** The constants of a newly chosen compound: those that the block's other rows have pinned already, else the current ones. */
export function pinsFor(item: Pick<CompoundItem, "constants">, others: readonly CompositionRow[]): string[] {
  const pinned = others.flatMap((row) => row.constants.split(" ")).filter((id) => id !== "");
  return item.constants.map((current) => pinned.find((id) => stepOf(id) === stepOf(current)) ?? current);
}

/** "citric-acid.1" of "citric-acid.1.v3". */
function stepOf(constantId: string): string {
  return constantId.replace(/\.v\d+$/, "");
}
