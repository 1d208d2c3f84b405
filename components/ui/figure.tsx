// A number that stands on its column's point, whatever the lengths.
import { atPoint, type DecimalSign } from "../format.ts";

/** Characters before and after the point that a column of shown numbers needs. */
export type Room = { before: number; after: number };

export function roomFor(texts: readonly string[], decimalSign: DecimalSign = "."): Room {
  const room = { before: 1, after: 0 };
  for (const text of texts) {
    const { whole, rest } = atPoint(text, decimalSign);
    room.before = Math.max(room.before, [...whole].length);
    room.after = Math.max(room.after, [...rest].length);
  }
  return room;
}

export function Figure({ text, room, decimalSign = "." }: { text: string; room: Room; decimalSign?: DecimalSign }) {
  const { whole, rest } = atPoint(text, decimalSign);
  return (
    <span className="n" style={{ "--i": room.before, "--f": room.after }}>
      <span>{whole}</span>
      <span>{rest}</span>
    </span>
  );
}
