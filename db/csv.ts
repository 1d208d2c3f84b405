// CSV text (RFC 4180) that a spreadsheet opens without running any of it.
import { stringify } from "csv-stringify/sync";

export type CsvCell = string | number | null;

/**
 * Rows as CSV with a header line, CRLF at line ends, and a byte order mark, without which spreadsheets misread "µ" and "°".
 * A cell that a spreadsheet would take for a formula gets an apostrophe in front; plain numbers, signs included, stay numbers.
 */
export function csvText(header: readonly string[], rows: readonly (readonly CsvCell[])[]): string {
  const cells = [header, ...rows].map((row) => row.map((cell) => (typeof cell === "string" ? inert(cell) : cell)));
  return stringify(cells, { record_delimiter: "\r\n", bom: true, quoted_match: /[\r\n]/ });
}

const PLAIN_NUMBER = /^[+-]?(\d+(\.\d*)?|\.\d+)(e[+-]?\d+)?$/i;
/** What starts a formula in common spreadsheets, wide forms of the same characters included. */
// biome-ignore lint/suspicious/noControlCharactersInRegex: NUL, tab and return in front are what is looked for.
const STARTS_FORMULA = /^[\u0000\t\r\n=+\-@\uFF1D\uFF0B\uFF0D\uFF20]/;

/** The text with an apostrophe in front when a spreadsheet would run it. */
export function inert(text: string): string {
  return STARTS_FORMULA.test(text) && !PLAIN_NUMBER.test(text) ? `'${text}` : text;
}
