// The content that a signature is given for: one canonical JSON text (RFC 8785), version 1, made from what the store holds.
// A change of this shape is a new version beside this one, never a change of it: signed texts stay as they are.
import { and, asc, eq, inArray, lt } from "drizzle-orm";
import type { BlockInput, Outcome, SolvedBlock } from "../chem/index.ts";
import {
  canonicalText,
  type Derived,
  deriveFrom,
  type EquilibriumBlock,
  type PageHead,
  type PageJson,
  validatePage,
} from "../editor/schema/index.ts";
import type { Caution } from "./cautions.ts";
import { sha256Hex } from "./chain.ts";
import type { Db } from "./client.ts";
import { type HazardEntry, hazardsOf, namesOf } from "./compounds.ts";
import { Refused } from "./errors.ts";
import { entryLabel } from "./notebooks.ts";
import { loadPage } from "./pages.ts";
import { whenRecorded } from "./recorded.ts";
import { answerBlock, blockCautions, libraryOf } from "./results.ts";
import { user } from "./schema/people.ts";
import { attachments, contributors, revisionAttachments, revisions, signedContents } from "./schema/records.ts";
import type { Revision } from "./subjects.ts";

export const CONTENT_FORMAT = "counterleaf-content";
export const CONTENT_VERSION = 1;

export type ContentPerson = { id: string; printedName: string };

export type ContentBlock = {
  id: string;
  /** as it stands on the page, letter for letter */
  inputs: EquilibriumBlock;
  /** the key of the result, or null when the inputs make up no question */
  key: string | null;
  engine: string;
  /** the inputs as solved, with the constants' values and sources */
  canonical: BlockInput | null;
  outcome: Outcome<SolvedBlock>;
  cautions: Caution[];
  hazards: HazardEntry[];
};

export type ContentAttachment = {
  id: string;
  name: string;
  size: number;
  sha256: string;
  announcedType: string;
  sniffedType: string | null;
  by: ContentPerson;
  at: string;
  struck: { at: string; reason: string; by: ContentPerson } | null;
};

export type SignedContent = {
  format: typeof CONTENT_FORMAT;
  version: typeof CONTENT_VERSION;
  entry: {
    id: string;
    label: string;
    number: number;
    notebook: { id: string; code: string; title: string };
    begunAt: string;
  };
  revision: { id: string; number: number; begunAt: string; begunBecause: string | null; lastTypedAt: string | null };
  /** the newest earlier revision that was signed */
  previous: { number: number; sha256: string } | null;
  author: ContentPerson;
  /** everybody whose change was ever accepted on any revision, in the order in which they came */
  contributors: ContentPerson[];
  head: PageHead;
  /** when the work of that day was first written on: the server's clock beside the typed day */
  recorded: { at: string | null; timeZone: string; daysAfterDone: number | null; late: boolean };
  document: PageJson;
  /** names of the compounds on the page, as they were shown */
  names: Record<string, string>;
  blocks: ContentBlock[];
  attachments: ContentAttachment[];
};

/** What stands in the way of a signature, each with the place on the page. */
export type Hindrance = { path: string; text: string };

export type BuiltContent = {
  content: SignedContent;
  text: string;
  sha256: string;
  derived: Derived;
  hindrances: Hindrance[];
};

/**
 * Makes the content of a revision afresh from its stored updates. Answers of blocks come from the store or are solved now.
 * Asks no policy. Refuses `page.invalid` when the stored updates make up no page.
 */
export async function buildContent(db: Db, revision: Revision): Promise<BuiltContent> {
  const { doc } = await loadPage(db, revision.id, revision.lastSeq, revision.pageBytes);
  const found = validatePage(doc);
  doc.destroy();
  if (!found.ok) throw new Refused("page.invalid", { reason: found.reason });
  const named = deriveFrom(found.page, found.head, (id) => id).mentions.map((mention) => mention.compound);
  const names = await namesOf(db, named);
  const derived = deriveFrom(found.page, found.head, (id) => names[id] ?? id);
  const now = new Date();
  const recorded = await whenRecorded(db, {
    entryId: revision.entryId,
    doneOn: found.head.doneOn,
    timeZone: revision.authorTimeZone,
    now,
  });
  const content: SignedContent = {
    format: CONTENT_FORMAT,
    version: CONTENT_VERSION,
    entry: {
      id: revision.entryId,
      label: entryLabel(revision.notebookCode, revision.entryNumber),
      number: revision.entryNumber,
      notebook: { id: revision.notebookId, code: revision.notebookCode, title: revision.notebookTitle },
      begunAt: revision.entryCreatedAt.toISOString(),
    },
    revision: {
      id: revision.id,
      number: revision.number,
      begunAt: revision.createdAt.toISOString(),
      begunBecause: revision.begunBecause,
      lastTypedAt: revision.lastTypedAt?.toISOString() ?? null,
    },
    previous: await previousSigned(db, revision),
    author: { id: revision.authorId, printedName: revision.authorName },
    contributors: await contributorsOf(db, revision.entryId),
    head: found.head,
    recorded: {
      at: recorded.at?.toISOString() ?? null,
      timeZone: revision.authorTimeZone,
      daysAfterDone: recorded.daysAfter,
      late: recorded.isLate,
    },
    document: found.page,
    names,
    blocks: await solvedBlocks(db, derived.blocks),
    attachments: await attachmentsOf(db, revision.id),
  };
  const text = canonicalText(content);
  const hindrances = findHindrances(content, found.duplicates, recorded.isAhead);
  return { content, text, sha256: sha256Hex(text), derived, hindrances };
}

async function solvedBlocks(db: Db, blocks: readonly EquilibriumBlock[]): Promise<ContentBlock[]> {
  const solved: ContentBlock[] = [];
  for (const block of blocks) {
    const library = await libraryOf(db, block);
    const { key, engine, input, outcome } = await answerBlock(db, block, library);
    solved.push({
      id: block.id,
      inputs: block,
      key,
      engine,
      canonical: input,
      outcome,
      cautions: await blockCautions(db, block, library, { input, outcome }),
      hazards: await hazardsOf(
        db,
        block.rows.map((row) => row.compound).filter((id) => id !== ""),
      ),
    });
  }
  return solved;
}

async function previousSigned(db: Db, revision: Revision): Promise<SignedContent["previous"]> {
  const rows = await db
    .select({ number: revisions.number, sha256: signedContents.sha256 })
    .from(signedContents)
    .innerJoin(revisions, eq(revisions.id, signedContents.revisionId))
    .where(and(eq(revisions.entryId, revision.entryId), lt(revisions.number, revision.number)))
    .orderBy(asc(revisions.number));
  return rows.at(-1) ?? null;
}

/** Everybody who ever contributed to the entry, in the order in which they came. */
export function contributorsOf(db: Db, entryId: string): Promise<ContentPerson[]> {
  return db
    .select({ id: user.id, printedName: user.name })
    .from(contributors)
    .innerJoin(user, eq(user.id, contributors.personId))
    .where(eq(contributors.entryId, entryId))
    .orderBy(asc(contributors.since), asc(user.id));
}

/** The files of a revision, struck ones too, in the order in which they came. */
export async function attachmentsOf(db: Db, revisionId: string): Promise<ContentAttachment[]> {
  const rows = await db
    .select({
      id: attachments.id,
      name: attachments.name,
      size: attachments.size,
      sha256: attachments.sha256,
      announcedType: attachments.announcedType,
      sniffedType: attachments.sniffedType,
      at: attachments.at,
      byId: user.id,
      byName: user.name,
      struckAt: revisionAttachments.struckAt,
      struckReason: revisionAttachments.struckReason,
      struckBy: revisionAttachments.struckBy,
    })
    .from(revisionAttachments)
    .innerJoin(attachments, eq(attachments.id, revisionAttachments.attachmentId))
    .innerJoin(user, eq(user.id, attachments.personId))
    .where(eq(revisionAttachments.revisionId, revisionId))
    .orderBy(asc(attachments.at), asc(attachments.id));
  const strikers = await namesOfPeople(
    db,
    rows.flatMap((row) => (row.struckBy === null ? [] : [row.struckBy])),
  );
  return rows.map(({ byId, byName, at, struckAt, struckReason, struckBy, ...file }) => ({
    ...file,
    by: { id: byId, printedName: byName },
    at: at.toISOString(),
    struck:
      struckAt === null || struckBy === null
        ? null
        : {
            at: struckAt.toISOString(),
            reason: struckReason ?? "",
            by: { id: struckBy, printedName: strikers.get(struckBy) ?? "" },
          },
  }));
}

/** Printed names of people by id. */
export async function namesOfPeople(db: Db, ids: readonly string[]): Promise<Map<string, string>> {
  if (ids.length === 0) return new Map();
  const rows = await db
    .select({ id: user.id, name: user.name })
    .from(user)
    .where(inArray(user.id, [...new Set(ids)]));
  return new Map(rows.map((row) => [row.id, row.name]));
}

function findHindrances(content: SignedContent, duplicates: readonly string[], isAhead: boolean): Hindrance[] {
  const { head, recorded } = content;
  const hindrances: Hindrance[] = [];
  const add = (path: string, text: string) => hindrances.push({ path, text });
  if (head.title.trim() === "") add("head.title", "The entry has no title.");
  if (head.doneOn === "") add("head.doneOn", "The day on which the work was done is not stated.");
  if (isAhead) add("head.doneOn", "The day on which the work was done lies ahead.");
  if (recorded.late && head.lateReason.trim() === "") {
    add("head.lateReason", `Recorded ${recorded.daysAfterDone} days after the work was done: say why.`);
  }
  for (const id of duplicates) {
    add(
      `block.${id}`,
      "A block or row stands on the page twice under one name. Take one of them out and put it in anew.",
    );
  }
  return hindrances;
}
