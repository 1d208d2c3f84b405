"use client";
// A table of rows that the browser may sort. Wide ones scroll by themselves; numbers stand on their point.
import {
  createColumnHelper,
  createSortedRowModel,
  rowSortingFeature,
  type SortingState,
  tableFeatures,
  useTable,
} from "@tanstack/react-table";
import { type ReactNode, useMemo, useState } from "react";
import type { DecimalSign } from "../format.ts";
import { classOf } from "./field-parts.tsx";
import { Figure, type Room, roomFor } from "./figure.tsx";

export type Column<Row> = {
  id: string;
  head: ReactNode;
  /** Under the head, small: "mol/L". */
  unit?: ReactNode;
  /** "number" stands on the point, "mono" is for identifiers; "end" puts words at the right. */
  kind?: "text" | "number" | "mono" | "end";
  /** The shown text; of a number, as it is to be read ("0.0320"), "" for none. */
  text: (row: Row) => string;
  /** Drawn instead of the text. */
  cell?: (row: Row) => ReactNode;
  /** What it is sorted by; a column without it is not sorted. */
  by?: (row: Row) => number | string;
  /** The cell names its row. */
  names?: boolean;
};

export type DataTableProps<Row> = {
  /** Names the table for those who hear it, and is shown over it unless `captionHidden`. */
  caption: string;
  captionHidden?: boolean;
  columns: readonly Column<Row>[];
  rows: readonly Row[];
  keyOf: (row: Row) => string;
  /** Said in place of rows when there are none. */
  emptyText?: ReactNode;
  decimalSign?: DecimalSign;
  className?: string;
};

const features = tableFeatures({ rowSortingFeature, sortedRowModel: createSortedRowModel() });

export function DataTable<Row extends object>({
  caption,
  captionHidden = false,
  columns,
  rows,
  keyOf,
  emptyText,
  decimalSign = ".",
  className,
}: DataTableProps<Row>) {
  const [sorting, setSorting] = useState<SortingState>([]);
  const rooms = useMemo(() => roomsOf(columns, rows, decimalSign), [columns, rows, decimalSign]);
  const byId = useMemo(() => new Map(columns.map((column) => [column.id, column])), [columns]);
  const tableColumns = useMemo(() => {
    const helper = createColumnHelper<typeof features, Row>();
    return helper.columns(
      columns.map((column) =>
        helper.accessor((row) => column.by?.(row) ?? column.text(row), {
          id: column.id,
          enableSorting: column.by !== undefined,
          sortFn: (a, b, id) => inOrder(a.getValue(id), b.getValue(id)),
        }),
      ),
    );
  }, [columns]);
  const data = useMemo(() => [...rows], [rows]);
  const table = useTable({
    features,
    columns: tableColumns,
    data,
    getRowId: (row) => keyOf(row),
    state: { sorting },
    onSortingChange: setSorting,
  });

  return (
    // biome-ignore lint/a11y/noNoninteractiveTabindex: a region that scrolls has to be reached by keyboard
    <section className={classOf("scroll", className)} tabIndex={0} aria-label={`${caption}, scrolls sideways`}>
      <table>
        <caption className={captionHidden ? "away" : undefined}>{caption}</caption>
        <thead>
          {table.getHeaderGroups().map((group) => (
            <tr key={group.id}>
              {group.headers.map((header) => {
                const column = byId.get(header.column.id);
                const sorted = header.column.getIsSorted();
                const words = (
                  <>
                    {column?.head}
                    {column?.unit ? <small>{column.unit}</small> : null}
                  </>
                );
                return (
                  <th
                    key={header.id}
                    scope="col"
                    className={isEnd(column) ? "r" : undefined}
                    aria-sort={sorted === "asc" ? "ascending" : sorted === "desc" ? "descending" : undefined}
                  >
                    {header.column.getCanSort() ? (
                      <button type="button" className="sort" onClick={() => header.column.toggleSorting()}>
                        <span>{words}</span>
                      </button>
                    ) : (
                      words
                    )}
                  </th>
                );
              })}
            </tr>
          ))}
        </thead>
        <tbody>
          {table.getRowModel().rows.map((row) => (
            <tr key={row.id}>
              {columns.map((column) => (
                <Cell
                  key={column.id}
                  column={column}
                  row={row.original}
                  room={rooms.get(column.id)}
                  decimalSign={decimalSign}
                />
              ))}
            </tr>
          ))}
          {rows.length === 0 && emptyText ? (
            <tr>
              <td colSpan={columns.length} className="faint">
                {emptyText}
              </td>
            </tr>
          ) : null}
        </tbody>
      </table>
    </section>
  );
}

function Cell<Row>({
  column,
  row,
  room,
  decimalSign,
}: {
  column: Column<Row>;
  row: Row;
  room?: Room;
  decimalSign: DecimalSign;
}) {
  const text = column.text(row);
  const shown = column.cell ? (
    column.cell(row)
  ) : room && text !== "" ? (
    <Figure text={text} room={room} decimalSign={decimalSign} />
  ) : (
    text
  );
  const className = classOf(isEnd(column) && "r", column.kind === "mono" && "mono") || undefined;
  return column.names ? (
    <th scope="row" className={className}>
      {shown}
    </th>
  ) : (
    <td className={className}>{shown}</td>
  );
}

function isEnd(column: { kind?: string } | undefined): boolean {
  return column?.kind === "number" || column?.kind === "end";
}

function roomsOf<Row>(
  columns: readonly Column<Row>[],
  rows: readonly Row[],
  decimalSign: DecimalSign,
): Map<string, Room> {
  const numbers = columns.filter((column) => column.kind === "number" && !column.cell);
  return new Map(numbers.map((column) => [column.id, roomFor(rows.map(column.text), decimalSign)]));
}

function inOrder(a: unknown, b: unknown): number {
  return typeof a === "number" && typeof b === "number"
    ? a - b
    : String(a).localeCompare(String(b), "en", { numeric: true });
}
