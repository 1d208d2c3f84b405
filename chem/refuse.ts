// How readers refuse: they report each fault at its field and go on reading, so that all faults come out at once.

import type { Refusal, RefusalCode } from "./errors.ts";

/** Longest text that is repeated in a refusal. */
const SHOWN_LENGTH = 40;

export type Refuse = (code: RefusalCode, field: string, value: string | number | null, text: string) => void;

/** A reporter that puts what it is told on a list. */
export function refuseInto(refusals: Refusal[]): Refuse {
  return (code, field, value, text) => {
    refusals.push({ code, field, value: typeof value === "string" ? value.slice(0, SHOWN_LENGTH) : value, text });
  };
}

/** What somebody typed, in quotation marks, cut to a length that can be shown. */
export function quoted(text: string): string {
  return text.length > SHOWN_LENGTH ? `“${text.slice(0, SHOWN_LENGTH)}…”` : `“${text}”`;
}

/** A number for a sentence: three significant digits. */
export function shown(value: number): string {
  return value === 0
    ? "0"
    : Number(value.toPrecision(3)).toString().replace("-", "−").replace("e−", "e-").replace("e+", "e");
}
