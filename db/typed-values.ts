// The values that somebody typed on a page: derived in the transaction that accepts them, with who set each, and an event for
// each that differs.
import { and, eq, inArray, sql } from "drizzle-orm";
import {
  blocksOf,
  deriveFrom,
  PAGE_LIMITS,
  type PageHead,
  type PageNode,
  validatePage,
} from "../editor/schema/index.ts";
import { recordAll } from "./audit.ts";
import type { Db } from "./client.ts";
import { namesOf } from "./compounds.ts";
import { Refused } from "./errors.ts";
import { type Page, standingValues } from "./pages.ts";
import type { Actor } from "./policy.ts";
import { revisions, typedValues } from "./schema/records.ts";
import type { RevisionFacts } from "./subjects.ts";

/** Validates the page and derives its typed values; answers which of them differ from those that stand. */
export async function checkWhole(tx: Db, revisionId: string, page: Page): Promise<ValueChanges> {
  const found = validatePage(page.doc);
  if (!found.ok) throw new Refused("page.invalid", { reason: found.reason });
  page.room = PAGE_LIMITS.characters - charactersOf(found.page, found.head);
  const standing = await standingValues(tx, revisionId, page);
  const compounds = blocksOf(found.page).flatMap((block) => block.rows.map((row) => row.compound));
  const names = await namesFor(tx, page, compounds);
  const now = deriveFrom(found.page, found.head, (id) => names.get(id) ?? id).typedValues;
  const paths = new Set(now.map((value) => value.path));
  return {
    head: found.head,
    set: now.flatMap(({ path, label, value }) => {
      const was = standing.get(path)?.value ?? null;
      return was === value ? [] : [{ path, label, was, value }];
    }),
    gone: [...standing].flatMap(([path, { label, value }]) => (paths.has(path) ? [] : [{ path, label, was: value }])),
  };
}

export type ValueChanges = {
  head: PageHead;
  set: { path: string; label: string; was: string | null; value: string }[];
  gone: { path: string; label: string; was: string }[];
};

/** Writes typed values with who set them, one event for each that differs (REC-01). */
export async function writeValues(
  tx: Db,
  actor: Actor,
  revision: RevisionFacts,
  changes: ValueChanges,
  at: Date,
): Promise<void> {
  const revisionId = revision.id;
  const { title, doneOn, lateReason } = changes.head;
  if ([...changes.set, ...changes.gone].some(({ path }) => path.startsWith("head."))) {
    await tx
      .update(revisions)
      .set({ title, doneOn: doneOn === "" ? null : doneOn, lateReason: lateReason === "" ? null : lateReason })
      .where(eq(revisions.id, revisionId));
  }
  if (changes.set.length > 0) {
    await tx
      .insert(typedValues)
      .values(changes.set.map(({ path, label, value }) => ({ revisionId, path, label, value, personId: actor.id, at })))
      .onConflictDoUpdate({
        target: [typedValues.revisionId, typedValues.path],
        set: {
          label: sql`excluded.label`,
          value: sql`excluded.value`,
          personId: sql`excluded.person_id`,
          at: sql`excluded.at`,
        },
      });
  }
  if (changes.gone.length > 0) {
    await tx.delete(typedValues).where(
      and(
        eq(typedValues.revisionId, revisionId),
        inArray(
          typedValues.path,
          changes.gone.map(({ path }) => path),
        ),
      ),
    );
  }
}

/** One event for each typed value that differs, with what it was and what it is (REC-01). */
export async function recordValues(
  tx: Db,
  actor: Actor,
  revision: RevisionFacts,
  changes: ValueChanges,
): Promise<void> {
  const on = (path: string) => ({
    objectKind: "value",
    objectId: `${revision.id}:${path}`,
    entryId: revision.entryId,
  });
  await recordAll(tx, actor, [
    ...changes.set.map(({ path, label, was, value }) => ({
      ...on(path),
      action: was === null ? ("value.set" as const) : ("value.changed" as const),
      detail: { revision: revision.number, path, label, old: was, new: value },
    })),
    ...changes.gone.map(({ path, label, was }) => ({
      ...on(path),
      action: "value.cleared" as const,
      detail: { revision: revision.number, path, label, old: was, new: null },
    })),
  ]);
}

export function standingAfter(standing: Page["values"], changes: ValueChanges): Page["values"] {
  if (standing === null) return null;
  const after = new Map(standing);
  for (const { path } of changes.gone) after.delete(path);
  for (const { path, label, value } of changes.set) after.set(path, { label, value });
  return after;
}

async function namesFor(tx: Db, page: Page, compounds: readonly string[]): Promise<ReadonlyMap<string, string>> {
  const unknown = compounds.filter((id) => id !== "" && !page.names.has(id));
  if (unknown.length > 0) {
    for (const [id, name] of Object.entries(await namesOf(tx, unknown))) page.names.set(id, name);
  }
  return page.names;
}

function charactersOf(page: { content: PageNode[] }, head: PageHead): number {
  let characters = head.title.length;
  const visit = (node: PageNode): void => {
    characters += node.text?.length ?? 0;
    for (const value of Object.values(node.attrs ?? {})) if (typeof value === "string") characters += value.length;
    node.content?.forEach(visit);
  };
  page.content.forEach(visit);
  return characters;
}
