// What can be done to an equilibrium block. Each command finds the block by its id, so it does the same wherever the block has
// moved meanwhile, and changes one attribute a field, so that two people who edit different rows both win.
import type { Node } from "@tiptap/pm/model";
import type { Command } from "@tiptap/pm/state";
import { MOST_ROWS_SOLVED } from "../schema/index.ts";
import { newName } from "../tabs.ts";

export type BlockField = "title" | "volume" | "volumeUnit" | "activity" | "measuredPH";
export type RowField = "compound" | "constants" | "amount" | "unit" | "massFraction" | "density" | "lot";

type Found = { node: Node; pos: number };

function findBlock(doc: Node, blockId: string): Found | null {
  let found: Found | null = null;
  doc.descendants((node, pos) => {
    if (node.type.name === "equilibrium" && node.attrs.id === blockId) found ??= { node, pos };
    return found === null && node.type.name !== "equilibrium";
  });
  return found;
}

function findRow(block: Found, rowId: string): (Found & { index: number }) | null {
  let found: (Found & { index: number }) | null = null;
  block.node.forEach((node, offset, index) => {
    if (node.attrs.id === rowId) found ??= { node, pos: block.pos + 1 + offset, index };
  });
  return found;
}

/** Puts a value that was typed into the block; does nothing when it stands there already. */
export function setBlockField(blockId: string, field: BlockField, value: string): Command {
  return (state, dispatch) => {
    const block = findBlock(state.doc, blockId);
    if (block === null || block.node.attrs[field] === value) return false;
    dispatch?.(state.tr.setNodeAttribute(block.pos, field, value));
    return true;
  };
}

/** Puts values that were typed into one row. */
export function setRowFields(blockId: string, rowId: string, values: Partial<Record<RowField, string>>): Command {
  return (state, dispatch) => {
    const block = findBlock(state.doc, blockId);
    const row = block === null ? null : findRow(block, rowId);
    if (row === null) return false;
    const changed = Object.entries(values).filter(([field, value]) => row.node.attrs[field] !== value);
    if (changed.length === 0) return false;
    const tr = state.tr;
    for (const [field, value] of changed) tr.setNodeAttribute(row.pos, field, value);
    dispatch?.(tr);
    return true;
  };
}

/** Adds an empty row at the end. Refuses beyond what can be solved: a row too many would hide the answer of all. */
export function addRow(blockId: string, rowId = newName()): Command {
  return (state, dispatch) => {
    const block = findBlock(state.doc, blockId);
    const type = state.schema.nodes.compositionRow;
    if (block === null || type === undefined || block.node.childCount >= MOST_ROWS_SOLVED) return false;
    dispatch?.(state.tr.insert(block.pos + block.node.nodeSize - 1, type.create({ id: rowId })));
    return true;
  };
}

export function takeOutRow(blockId: string, rowId: string): Command {
  return (state, dispatch) => {
    const block = findBlock(state.doc, blockId);
    const row = block === null ? null : findRow(block, rowId);
    if (row === null) return false;
    dispatch?.(state.tr.delete(row.pos, row.pos + row.node.nodeSize));
    return true;
  };
}

/** Moves a row one place up (-1) or down (1); refuses at the ends. */
export function moveRow(blockId: string, rowId: string, by: -1 | 1): Command {
  return (state, dispatch) => {
    const block = findBlock(state.doc, blockId);
    const row = block === null ? null : findRow(block, rowId);
    if (block === null || row === null) return false;
    const neighbour = block.node.maybeChild(row.index + by);
    if (neighbour === null) return false;
    const to = by < 0 ? row.pos - neighbour.nodeSize : row.pos + neighbour.nodeSize;
    dispatch?.(state.tr.delete(row.pos, row.pos + row.node.nodeSize).insert(to, row.node));
    return true;
  };
}

export function removeBlock(blockId: string): Command {
  return (state, dispatch) => {
    const block = findBlock(state.doc, blockId);
    if (block === null) return false;
    dispatch?.(state.tr.delete(block.pos, block.pos + block.node.nodeSize));
    return true;
  };
}
