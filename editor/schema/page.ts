// The plain shapes of a page, as JSON: what is validated, derived, signed and shown.

export type AttributeValue = string | number | null;
export type PageMark = { type: string; attrs?: Record<string, AttributeValue> };
export type PageNode = {
  type: string;
  attrs?: Record<string, AttributeValue>;
  content?: PageNode[];
  marks?: PageMark[];
  text?: string;
};
export type PageJson = { type: "doc"; content: PageNode[] };

/** The fields above the page. `doneOn` is "YYYY-MM-DD" or "". */
export type PageHead = { title: string; doneOn: string; lateReason: string };

export const EMPTY_HEAD: PageHead = { title: "", doneOn: "", lateReason: "" };

/** How much a page may hold. Beyond it an update is refused, so that nobody's page can be made to burst. */
export const PAGE_LIMITS = {
  characters: 1_000_000,
  nodes: 30_000,
  depth: 24,
  blocks: 100,
  rowsOfBlock: 200,
  texCharacters: 4_000,
  hrefCharacters: 2_000,
  titleCharacters: 300,
  reasonCharacters: 1_000,
} as const;

/** A text attribute of a node; "" where it is missing or no text. */
export function textAttribute(node: PageNode, name: string): string {
  const value = node.attrs?.[name];
  return typeof value === "string" ? value : "";
}
