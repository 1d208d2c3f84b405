// What follows from a page: its words, the values that somebody typed, the compounds on it, its blocks and files.
import type * as Y from "yjs";
import { blockOfNode, type EquilibriumBlock } from "./equilibrium.ts";
import { type PageHead, type PageJson, type PageNode, textAttribute } from "./page.ts";
import { validatePage } from "./validate.ts";

export type TypedValue = { path: string; label: string; value: string };
export type Occurrence = { compound: string; line: string; role: "component" | "mentioned"; position: number };
export type Derived = {
  page: PageJson;
  head: PageHead;
  /** for full-text search: the title, then one line a paragraph */
  text: string;
  typedValues: TypedValue[];
  /** in the order of the page: the first is E1 */
  blocks: EquilibriumBlock[];
  mentions: Occurrence[];
  attachments: string[];
};

/** Derives from a document that is a page. Throws when it is none: validate first. */
export function derivePage(doc: Y.Doc, nameOf: (compoundId: string) => string): Derived {
  const found = validatePage(doc);
  if (!found.ok) throw new Error(`Not a page: ${found.reason}`);
  return deriveFrom(found.page, found.head, nameOf);
}

/** The same from a page as JSON, e.g. from signed content. */
export function deriveFrom(page: PageJson, head: PageHead, nameOf: (compoundId: string) => string): Derived {
  const blocks = blocksOf(page);
  const lines = head.title === "" ? [] : [head.title];
  const mentions: Occurrence[] = [];
  const attachments: string[] = [];
  let block = 0;
  const visit = (node: PageNode): void => {
    switch (node.type) {
      case "equilibrium": {
        const found = blocks[block];
        block += 1;
        if (found === undefined) return;
        const name = blockName(found, block);
        lines.push(name);
        for (const row of found.rows) {
          if (row.compound === "") continue;
          const line = `${name}: ${[nameOf(row.compound), row.amount && `${row.amount} ${row.unit}`].filter(Boolean).join(" ")}`;
          lines.push(row.lot === "" ? line : `${line}, lot ${row.lot}`);
          mentions.push({ compound: row.compound, line, role: "component", position: mentions.length });
        }
        return;
      }
      case "attachment": {
        const id = textAttribute(node, "attachment");
        if (id !== "") attachments.push(id);
        const caption = textAttribute(node, "caption");
        if (caption !== "") lines.push(caption);
        return;
      }
      case "formulaBlock":
        lines.push(textAttribute(node, "tex"));
        return;
      default: {
        const inline = (node.content ?? []).some((child) => INLINE.has(child.type));
        if (!inline) {
          node.content?.forEach(visit);
          return;
        }
        const words = (node.content ?? []).map((child) => wordsOf(child, nameOf));
        const line = words.join("");
        if (line.trim() !== "") lines.push(line);
        (node.content ?? []).forEach((child, index) => {
          const compound = child.type === "mention" ? textAttribute(child, "compound") : "";
          if (compound === "") return;
          mentions.push({ compound, line: around(words, index), role: "mentioned", position: mentions.length });
        });
      }
    }
  };
  page.content.forEach(visit);
  return {
    page,
    head,
    text: lines.join("\n"),
    typedValues: typedValuesOf(head, blocks, nameOf),
    blocks,
    mentions,
    attachments: [...new Set(attachments)],
  };
}

/** "E1", or "E1 Bath A" when the block has a title. */
export function blockName(block: EquilibriumBlock, number: number): string {
  return block.title === "" ? `E${number}` : `E${number} ${block.title}`;
}

/** All blocks in the order of the page. Where an id stands twice, the later one is told apart as `id~2`. */
export function blocksOf(page: PageJson): EquilibriumBlock[] {
  const blocks: EquilibriumBlock[] = [];
  const seen = new Map<string, number>();
  const apart = (id: string): string => {
    const times = (seen.get(id) ?? 0) + 1;
    seen.set(id, times);
    return times === 1 ? id : `${id}~${times}`;
  };
  const visit = (node: PageNode): void => {
    if (node.type === "equilibrium") {
      const block = blockOfNode(node);
      blocks.push({
        ...block,
        id: apart(block.id),
        rows: block.rows.map((row) => ({ ...row, id: apart(row.id) })),
      });
      return;
    }
    node.content?.forEach(visit);
  };
  page.content.forEach(visit);
  return blocks;
}

const INLINE = new Set(["text", "mention", "formula", "hardBreak"]);
/** Characters of a line on each side of a mention that a search shows. */
const AROUND = 120;

function wordsOf(node: PageNode, nameOf: (compoundId: string) => string): string {
  switch (node.type) {
    case "text":
      return node.text ?? "";
    case "mention":
      return textAttribute(node, "compound") === "" ? "" : nameOf(textAttribute(node, "compound"));
    case "formula":
      return textAttribute(node, "tex");
    default:
      return " ";
  }
}

function around(words: readonly string[], index: number): string {
  const before = words.slice(0, index).join("");
  const after = words.slice(index + 1).join("");
  const start = before.length > AROUND ? `…${before.slice(-AROUND)}` : before;
  const end = after.length > AROUND ? `${after.slice(0, AROUND)}…` : after;
  return `${start}${words[index] ?? ""}${end}`.trim();
}

const ROW_FIELDS = [
  ["compound", "compound"],
  ["constants", "constants"],
  ["amount", "amount"],
  ["unit", "unit"],
  ["massFraction", "mass fraction"],
  ["density", "density, g/mL"],
  ["lot", "lot"],
] as const;
const BLOCK_FIELDS = [
  ["title", "title"],
  ["volume", "volume"],
  ["volumeUnit", "unit of the volume"],
  ["temperatureC", "temperature, °C"],
  ["activity", "activity model"],
  ["measuredPH", "measured pH"],
] as const;

/** Values that are not blank, each under a path that stays the same while it is edited. */
function typedValuesOf(
  head: PageHead,
  blocks: readonly EquilibriumBlock[],
  nameOf: (compoundId: string) => string,
): TypedValue[] {
  const values: TypedValue[] = [
    { path: "head.title", label: "Title", value: head.title },
    { path: "head.doneOn", label: "Done on", value: head.doneOn },
    { path: "head.lateReason", label: "Recorded late because", value: head.lateReason },
  ];
  blocks.forEach((block, index) => {
    const name = blockName(block, index + 1);
    for (const [field, label] of BLOCK_FIELDS) {
      values.push({ path: `block.${block.id}.${field}`, label: `${name}: ${label}`, value: block[field] });
    }
    block.rows.forEach((row, place) => {
      const substance = row.compound === "" ? `row ${place + 1}` : nameOf(row.compound);
      for (const [field, label] of ROW_FIELDS) {
        const path = `block.${block.id}.row.${row.id}.${field}`;
        values.push({ path, label: `${name}, ${substance}: ${label}`, value: row[field] });
      }
    });
  });
  return values.filter((value) => value.value !== "");
}
