// A table that is only read: a server component, its cells handed in ready. Cells of a number column that are plain
// texts stand on their point.
import type { ReactNode } from "react";
import type { DecimalSign } from "../format.ts";
import { classOf } from "./field-parts.tsx";
import { Figure, roomFor } from "./figure.tsx";

export type PlainColumn = {
  id: string;
  head: ReactNode;
  unit?: ReactNode;
  kind?: "text" | "number" | "mono" | "end";
  names?: boolean;
};

export type PlainRow = { key: string; cells: readonly ReactNode[]; className?: string };

export type PlainTableProps = {
  caption: string;
  captionHidden?: boolean;
  columns: readonly PlainColumn[];
  rows: readonly PlainRow[];
  decimalSign?: DecimalSign;
  className?: string;
};

export function PlainTable({ caption, captionHidden, columns, rows, decimalSign = ".", className }: PlainTableProps) {
  const rooms = columns.map((column, place) =>
    column.kind === "number" ? roomFor(rows.map((row) => row.cells[place]).filter(isText), decimalSign) : undefined,
  );
  return (
    // biome-ignore lint/a11y/noNoninteractiveTabindex: a region that scrolls has to be reached by keyboard
    <section className={classOf("scroll", className)} tabIndex={0} aria-label={`${caption}, scrolls sideways`}>
      <table>
        <caption className={captionHidden ? "away" : undefined}>{caption}</caption>
        <thead>
          <tr>
            {columns.map((column) => (
              <th key={column.id} scope="col" className={isEnd(column) ? "r" : undefined}>
                {column.head}
                {column.unit ? <small>{column.unit}</small> : null}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={row.key} className={row.className}>
              {columns.map((column, place) => {
                const cell = row.cells[place];
                const room = rooms[place];
                const name = classOf(isEnd(column) && "r", column.kind === "mono" && "mono") || undefined;
                return column.names ? (
                  <th key={column.id} scope="row" className={name}>
                    {room && isText(cell) && cell !== "" ? (
                      <Figure text={cell} room={room} decimalSign={decimalSign} />
                    ) : (
                      cell
                    )}
                  </th>
                ) : (
                  <td key={column.id} className={name}>
                    {room && isText(cell) && cell !== "" ? (
                      <Figure text={cell} room={room} decimalSign={decimalSign} />
                    ) : (
                      cell
                    )}
                  </td>
                );
              })}
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  );
}

function isText(cell: ReactNode): cell is string {
  return typeof cell === "string";
}

function isEnd(column: PlainColumn): boolean {
  return column.kind === "number" || column.kind === "end";
}
