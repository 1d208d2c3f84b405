// What a search finds a page by: its words and files' names, the compounds on it and in which line, calculated and measured pH.
// Derived within two seconds of the last keystroke by whoever calls `deriveRevision`; signing never trusts it and derives afresh.
import { asc, desc, eq, lt } from "drizzle-orm";
import { type Derived, deriveFrom, type Occurrence, validatePage } from "../editor/schema/index.ts";
import type { Db } from "./client.ts";
import { namesOf } from "./compounds.ts";
import { Refused } from "./errors.ts";
import { readPage } from "./pages.ts";
import { answerBlock, keepSolve, libraryOf } from "./results.ts";
import {
  attachments,
  entries,
  occurrences,
  pageTexts,
  revisionAttachments,
  revisions,
  updates,
} from "./schema/records.ts";

export type DerivedRevision = {
  /** the update that this was derived from; false when somebody typed meanwhile and nothing was written */
  seq: number;
  isCurrent: boolean;
  text: string;
  occurrences: Occurrence[];
  blocks: { id: string; key: string | null; pH: number | null; measuredPH: string }[];
};

/**
 * Derives a revision's words, occurrences and pH and writes them, unless somebody typed meanwhile. Solves, in no transaction,
 * what is not solved yet. Asks no policy: it is the program's own work and answers nobody who asked.
 */
export async function deriveRevision(db: Db, revisionId: string): Promise<DerivedRevision> {
  const mark = await readMark(db, revisionId);
  const found = await readPage(db, mark, validatePage);
  if (!found.ok) throw new Refused("page.invalid", { reason: found.reason });
  const named = deriveFrom(found.page, found.head, (id) => id).mentions.map((mention) => mention.compound);
  const names = await namesOf(db, named);
  const derived = deriveFrom(found.page, found.head, (id) => names[id] ?? id);
  const files = await fileNames(db, revisionId);
  const blocks = await solveBlocks(db, derived);
  const text = [derived.text, ...files].join("\n");
  const isCurrent = await db.transaction(async (tx) => {
    const [now] = await tx
      .select({ lastSeq: revisions.lastSeq, derivedSeq: revisions.derivedSeq })
      .from(revisions)
      .where(eq(revisions.id, revisionId))
      .for("no key update");
    if (now?.lastSeq !== mark.lastSeq) return false;
    await writeOccurrences(tx, mark, derived.mentions);
    await writeText(tx, mark, text, blocks);
    await tx.update(revisions).set({ derivedSeq: mark.lastSeq }).where(eq(revisions.id, revisionId));
    await keepSolves(tx, mark, blocks);
    return true;
  });
  return { seq: mark.lastSeq, isCurrent, text, occurrences: derived.mentions, blocks };
}

/** Revisions that were typed on since they were last derived, those that wait longest first. For the job that derives them. */
export async function listUnderived(db: Db, limit: number): Promise<string[]> {
  const rows = await db
    .select({ id: revisions.id })
    .from(revisions)
    .where(lt(revisions.derivedSeq, revisions.lastSeq))
    .orderBy(asc(revisions.lastTypedAt))
    .limit(limit);
  return rows.map((row) => row.id);
}

type Mark = Awaited<ReturnType<typeof readMark>>;

async function readMark(db: Db, revisionId: string) {
  const [mark] = await db
    .select({
      id: revisions.id,
      lastSeq: revisions.lastSeq,
      pageToken: revisions.pageToken,
      pageBytes: revisions.pageBytes,
      entryId: entries.id,
      notebookId: entries.notebookId,
    })
    .from(revisions)
    .innerJoin(entries, eq(entries.id, revisions.entryId))
    .where(eq(revisions.id, revisionId));
  if (mark === undefined) throw new Refused("entry.not-found");
  return mark;
}

async function fileNames(db: Db, revisionId: string): Promise<string[]> {
  const rows = await db
    .select({ name: attachments.name })
    .from(revisionAttachments)
    .innerJoin(attachments, eq(attachments.id, revisionAttachments.attachmentId))
    .where(eq(revisionAttachments.revisionId, revisionId))
    .orderBy(asc(attachments.at));
  return rows.map((row) => row.name);
}

async function solveBlocks(db: Db, derived: Derived): Promise<DerivedRevision["blocks"]> {
  const solved: DerivedRevision["blocks"] = [];
  for (const block of derived.blocks) {
    const { key, outcome } = await answerBlock(db, block, await libraryOf(db, block));
    solved.push({
      id: block.id,
      key: outcome.ok ? key : null,
      pH: outcome.ok ? outcome.value.pH : null,
      measuredPH: block.measuredPH,
    });
  }
  return solved;
}

const ROWS_A_STATEMENT = 500;

async function writeOccurrences(tx: Db, mark: Mark, mentions: readonly Occurrence[]): Promise<void> {
  await tx.delete(occurrences).where(eq(occurrences.revisionId, mark.id));
  const of = { revisionId: mark.id, entryId: mark.entryId, notebookId: mark.notebookId };
  for (let from = 0; from < mentions.length; from += ROWS_A_STATEMENT) {
    const rows = mentions.slice(from, from + ROWS_A_STATEMENT);
    await tx
      .insert(occurrences)
      .values(
        rows.map(({ compound, role, line, position }) => ({ ...of, compoundId: compound, role, line, position })),
      );
  }
}

async function writeText(tx: Db, mark: Mark, text: string, blocks: DerivedRevision["blocks"]): Promise<void> {
  // Numbers parted by spaces; what somebody typed that is no number is nothing to search between two values by.
  const calculated = blocks.flatMap(({ pH }) => (pH === null ? [] : [String(pH)]));
  const measured = blocks.map(({ measuredPH }) => measuredPH.trim()).filter((value) => /^-?\d+([.]\d+)?$/.test(value));
  const texts = {
    text,
    calculatedPH: calculated.length === 0 ? null : calculated.join(" "),
    measuredPH: measured.length === 0 ? null : measured.join(" "),
  };
  await tx
    .insert(pageTexts)
    .values({ revisionId: mark.id, entryId: mark.entryId, ...texts })
    .onConflictDoUpdate({ target: pageTexts.revisionId, set: texts });
}

/** The solves of a page are kept with its blocks, under whoever wrote last. */
async function keepSolves(tx: Db, mark: Mark, blocks: DerivedRevision["blocks"]): Promise<void> {
  const keys = blocks.flatMap(({ id, key }) => (key === null ? [] : [{ blockId: id, key }]));
  if (keys.length === 0) return;
  const [last] = await tx
    .select({ personId: updates.personId })
    .from(updates)
    .where(eq(updates.revisionId, mark.id))
    .orderBy(desc(updates.seq))
    .limit(1);
  const personId = last?.personId ?? null;
  if (personId === null) return;
  for (const { blockId, key } of keys) await keepSolve(tx, { revisionId: mark.id, blockId, key, personId });
}
