// What changed on a draft between the moment somebody opened it to sign and now, in words that a person can read (SGN-01).
import { and, eq, gt } from "drizzle-orm";
import { type Derived, deriveFrom, validatePage } from "../editor/schema/index.ts";
import type { Db } from "./client.ts";
import { type BuiltContent, namesOfPeople } from "./content.ts";
import type { Detail } from "./errors.ts";
import { loadPage } from "./pages.ts";
import { updates } from "./schema/records.ts";
import type { Revision } from "./subjects.ts";

export type ContentChanges = {
  /** lines of text that are new, and lines that are gone */
  added: string[];
  gone: string[];
  values: { label: string; was: string | null; now: string | null }[];
  files: { name: string; change: "attached" | "struck" }[];
  /** printed names of those who wrote meanwhile */
  by: string[];
};

const MOST_LISTED = 20;
const LONGEST_SHOWN = 300;

/** Compares the page at update `since.seq` with what it is now. */
export async function changesSince(
  db: Db,
  revision: Revision,
  now: BuiltContent,
  since: { seq: number; openedAt: Date },
): Promise<ContentChanges> {
  const { doc } = await loadPage(db, revision.id, since.seq, 0);
  const then = validatePage(doc);
  doc.destroy();
  const nameOf = (id: string) => now.content.names[id] ?? id;
  const before = then.ok ? deriveFrom(then.page, then.head, nameOf) : null;
  const lines = changedLines(linesOf(before), linesOf(now.derived));
  return {
    ...lines,
    values: changedValues(before, now.derived),
    files: now.content.attachments.flatMap(({ name, at, struck }): ContentChanges["files"] => {
      if (struck !== null && Date.parse(struck.at) > since.openedAt.getTime()) return [{ name, change: "struck" }];
      return Date.parse(at) > since.openedAt.getTime() ? [{ name, change: "attached" }] : [];
    }),
    by: await writersAfter(db, revision.id, since.seq),
  };
}

/** The same as plain values for a refusal's detail. */
export function changesDetail(changes: ContentChanges): Detail {
  return {
    added: changes.added,
    gone: changes.gone,
    values: changes.values.map((value) => ({ ...value })),
    files: changes.files.map((file) => ({ ...file })),
    by: changes.by,
  };
}

function linesOf(derived: Derived | null): string[] {
  return derived === null ? [] : derived.text.split("\n");
}

/** Lines of the one that the other lacks, after what both begin and end with is taken off. */
function changedLines(before: readonly string[], now: readonly string[]): { added: string[]; gone: string[] } {
  let start = 0;
  while (start < before.length && start < now.length && before[start] === now[start]) start += 1;
  let end = 0;
  while (
    end < before.length - start &&
    end < now.length - start &&
    before[before.length - 1 - end] === now[now.length - 1 - end]
  ) {
    end += 1;
  }
  const was = before.slice(start, before.length - end);
  const is = now.slice(start, now.length - end);
  return { added: lacking(is, was), gone: lacking(was, is) };
}

function lacking(lines: readonly string[], others: readonly string[]): string[] {
  const left = new Map<string, number>();
  for (const line of others) left.set(line, (left.get(line) ?? 0) + 1);
  const lacked = lines.filter((line) => {
    const count = left.get(line) ?? 0;
    if (count > 0) left.set(line, count - 1);
    return count === 0;
  });
  return lacked.slice(0, MOST_LISTED).map((line) => line.slice(0, LONGEST_SHOWN));
}

function changedValues(before: Derived | null, now: Derived): ContentChanges["values"] {
  const was = new Map((before?.typedValues ?? []).map((value) => [value.path, value]));
  const is = new Map(now.typedValues.map((value) => [value.path, value]));
  const changes: ContentChanges["values"] = [];
  for (const { path, label, value } of now.typedValues) {
    const earlier = was.get(path)?.value ?? null;
    if (earlier !== value) changes.push({ label, was: earlier, now: value });
  }
  for (const { path, label, value } of was.values()) if (!is.has(path)) changes.push({ label, was: value, now: null });
  return changes.slice(0, MOST_LISTED);
}

async function writersAfter(db: Db, revisionId: string, seq: number): Promise<string[]> {
  const rows = await db
    .selectDistinct({ personId: updates.personId })
    .from(updates)
    .where(and(eq(updates.revisionId, revisionId), gt(updates.seq, seq)));
  const ids = rows.flatMap((row) => (row.personId === null ? [] : [row.personId]));
  return [...(await namesOfPeople(db, ids)).values()].sort();
}
