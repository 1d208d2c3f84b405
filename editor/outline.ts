// What the counterfoil says of a page while it is written, derived in the browser from the page as it stands.
import type { Awareness } from "y-protocols/awareness";
import { deriveFrom, EMPTY_HEAD, parsePage } from "./schema/index.ts";

export type Outline = {
  headings: { level: number; text: string }[];
  /** E1, E2 … in the order of the page */
  blocks: { id: string; number: number; title: string; rows: number }[];
  /** each compound once, with the roles in which it stands on the page */
  compounds: { compound: string; roles: ("component" | "mentioned")[] }[];
  attachments: string[];
  /** who else has the page open, each person once */
  present: { id: string; name: string }[];
};

export const EMPTY_OUTLINE: Outline = { headings: [], blocks: [], compounds: [], attachments: [], present: [] };

/** Reads the outline off the editor's JSON; an empty one for a page that is being put together. */
export function outlineOf(json: unknown, present: Outline["present"]): Outline {
  const page = parsePage(json);
  if (page === null) return { ...EMPTY_OUTLINE, present };
  const derived = deriveFrom(page, EMPTY_HEAD, (id) => id);
  const roles = new Map<string, Set<"component" | "mentioned">>();
  for (const { compound, role } of derived.mentions) {
    const known = roles.get(compound) ?? new Set();
    roles.set(compound, known.add(role));
  }
  return {
    headings: page.content
      .filter((node) => node.type === "heading")
      .map((node) => ({
        level: Number(node.attrs?.level ?? 1),
        text: (node.content ?? []).map((child) => child.text ?? "").join(""),
      })),
    blocks: derived.blocks.map(({ id, title, rows }, index) => ({ id, number: index + 1, title, rows: rows.length })),
    compounds: [...roles].map(([compound, found]) => ({ compound, roles: [...found] })),
    attachments: derived.attachments,
    present,
  };
}

/** The others on the page, each person once, as the server has named them. */
export function othersOn(awareness: Awareness, ownId: string): Outline["present"] {
  const others = new Map<string, string>();
  for (const [, state] of awareness.getStates()) {
    const user: unknown = state.user;
    if (typeof user !== "object" || user === null || !("id" in user) || !("name" in user)) continue;
    if (typeof user.id === "string" && typeof user.name === "string" && user.id !== ownId)
      others.set(user.id, user.name);
  }
  return [...others].map(([id, name]) => ({ id, name })).sort((a, b) => a.name.localeCompare(b.name, "en"));
}
