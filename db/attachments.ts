// Files of an entry: arriving in rows of 1 MiB, fingerprinted on the way, never changed, never removed.
//
// Chunks are written under the id that the file will have, each in a statement of its own, while a row of `uploads` says that
// the file is not there yet. The last step writes the file's row and takes the upload's away in one transaction; from then on a
// trigger refuses any change of the chunks. A broken upload takes its chunks with it; what a killed process left is swept.
import { createHash } from "node:crypto";
import { and, count, eq, gt, isNull, lt } from "drizzle-orm";
import { inChunks, readChunks } from "./attachment-bytes.ts";
import { record } from "./audit.ts";
import type { Db } from "./client.ts";
import { attachmentsOf, type ContentAttachment } from "./content.ts";
import { becomeContributor } from "./contributors.ts";
import { Refused } from "./errors.ts";
import { judgeFile } from "./file-kinds.ts";
import { newId } from "./ids.ts";
import { type Actor, demand } from "./policy.ts";
import { takeFrom } from "./rate.ts";
import { user } from "./schema/people.ts";
import { attachmentChunks, attachments, entries, revisionAttachments, uploads } from "./schema/records.ts";
import { findRevision, lockRevision } from "./subjects.ts";

export const LARGEST_FILE_BYTES = 32 * 1024 * 1024;
const FILES_A_REVISION = 200;
const UPLOADS_AT_ONCE = 6;
const UPLOADS_AN_HOUR = 300;
const HOUR_MS = 3_600_000;
/** An upload that has brought nothing for so long does not count as one at work. */
const STANDS_STILL_MS = 120_000;
const LONGEST_NAME = 200;
const LONGEST_REASON = 1000;

export type AttachmentInput = {
  revisionId: string;
  name: string;
  announcedType: string;
  announcedSize: number;
  stream: AsyncIterable<Uint8Array>;
};

export type StoredFile = { id: string; name: string; size: number; sha256: string; type: string | null };

/**
 * Stores a file with a draft and answers its length and SHA-256 as received. Refuses what is empty, longer than 32 MiB, not as
 * long as announced, a program, or not what its name says; then nothing of it remains. Not to be called in a transaction.
 */
export async function storeAttachment(db: Db, asked: Actor, input: AttachmentInput): Promise<StoredFile> {
  const name = plainName(input.name);
  if (name === "") throw new Refused("attachment.invalid", { field: "name" });
  if (!Number.isSafeInteger(input.announcedSize) || input.announcedSize < 0) {
    throw new Refused("attachment.invalid", { field: "size" });
  }
  if (input.announcedSize > LARGEST_FILE_BYTES)
    throw new Refused("attachment.too-large", { limit: LARGEST_FILE_BYTES });
  if (input.announcedSize === 0) throw new Refused("attachment.empty", { name });
  const id = await beginUpload(db, asked, input.revisionId);
  try {
    const arrived = await receive(db, id, { ...input, name });
    return await db.transaction((tx) => finishUpload(tx, asked, id, input, { name, ...arrived }));
  } catch (fault) {
    await dropUpload(db, id);
    throw fault;
  }
}

async function beginUpload(db: Db, asked: Actor, revisionId: string): Promise<string> {
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "attachment.store", revision.subject);
  const taken = await takeFrom(db, `uploads:${actor.id}`, UPLOADS_AN_HOUR, HOUR_MS);
  if (!taken.ok) throw new Refused("attachment.too-many", { retryAfterS: taken.retryAfterS });
  const moving = gt(uploads.lastAt, new Date(Date.now() - STANDS_STILL_MS));
  const [open] = await db
    .select({ count: count() })
    .from(uploads)
    .where(and(eq(uploads.personId, actor.id), moving));
  if ((open?.count ?? 0) >= UPLOADS_AT_ONCE) throw new Refused("attachment.too-many", { limit: UPLOADS_AT_ONCE });
  const [files] = await db
    .select({ count: count() })
    .from(revisionAttachments)
    .where(eq(revisionAttachments.revisionId, revisionId));
  if ((files?.count ?? 0) >= FILES_A_REVISION) throw new Refused("attachment.too-many", { limit: FILES_A_REVISION });
  const id = newId();
  const now = new Date();
  await db.insert(uploads).values({ id, revisionId, personId: actor.id, startedAt: now, lastAt: now });
  return id;
}

type Arrived = { size: number; sha256: string; type: string | null };

async function receive(db: Db, id: string, input: AttachmentInput): Promise<Arrived> {
  const { name, announcedType, announcedSize } = input;
  const hash = createHash("sha256");
  let size = 0;
  let index = 0;
  let type: string | null = null;
  for await (const bytes of inChunks(input.stream)) {
    size += bytes.length;
    if (size > LARGEST_FILE_BYTES) throw new Refused("attachment.too-large", { limit: LARGEST_FILE_BYTES });
    if (size > announcedSize)
      throw new Refused("attachment.length-differs", { announced: announcedSize, received: size });
    if (index === 0) {
      const verdict = await judgeFile({ name, announcedType, first: bytes });
      if (!verdict.ok) throw new Refused("attachment.type-refused", { name, why: verdict.why, found: verdict.found });
      type = verdict.type;
    }
    hash.update(bytes);
    await db.insert(attachmentChunks).values({ attachmentId: id, index, bytes });
    await db.update(uploads).set({ lastAt: new Date() }).where(eq(uploads.id, id));
    index += 1;
  }
  if (size !== announcedSize)
    throw new Refused("attachment.length-differs", { announced: announcedSize, received: size });
  return { size, sha256: hash.digest("hex"), type };
}

async function finishUpload(
  tx: Db,
  asked: Actor,
  id: string,
  { revisionId, announcedType }: AttachmentInput,
  { name, size, sha256, type }: Arrived & { name: string },
): Promise<StoredFile> {
  const { revision, actor } = await lockRevision(tx, asked, revisionId);
  demand(actor, "attachment.store", revision.subject);
  const ended = await tx.delete(uploads).where(eq(uploads.id, id)).returning({ id: uploads.id });
  // Swept meanwhile: its chunks are gone.
  if (ended.length === 0) throw new Refused("attachment.length-differs", { announced: size, received: 0 });
  const at = new Date();
  await tx.insert(attachments).values({
    id,
    entryId: revision.entryId,
    name,
    announcedType: announcedType.slice(0, LONGEST_NAME),
    sniffedType: type,
    size,
    sha256,
    personId: actor.id,
    at,
  });
  await tx.insert(revisionAttachments).values({ revisionId, attachmentId: id });
  await becomeContributor(tx, actor, revision, at);
  await record(tx, actor, "attachment.stored", {
    objectKind: "attachment",
    objectId: id,
    entryId: revision.entryId,
    detail: { revision: revision.number, name, size, sha256, type },
  });
  return { id, name, size, sha256, type };
}

async function dropUpload(db: Db, id: string): Promise<void> {
  await db.transaction(async (tx) => {
    const ended = await tx.delete(uploads).where(eq(uploads.id, id)).returning({ id: uploads.id });
    // Without its row the upload has ended in one way or the other: by another's hand, or as a file.
    if (ended.length > 0) await tx.delete(attachmentChunks).where(eq(attachmentChunks.attachmentId, id));
  });
}

/** Takes away what uploads left that stood still for an hour, e.g. of a process that was killed. Answers how many. */
export async function sweepUploads(db: Db, now: Date): Promise<number> {
  const stale = await db
    .select({ id: uploads.id })
    .from(uploads)
    .where(lt(uploads.lastAt, new Date(now.getTime() - HOUR_MS)));
  for (const { id } of stale) await dropUpload(db, id);
  return stale.length;
}

export type FileToRead = {
  id: string;
  name: string;
  size: number;
  sha256: string;
  announcedType: string;
  /** by content: the only type that a header may be made from */
  sniffedType: string | null;
  by: string;
  at: Date;
  chunks: AsyncGenerator<Uint8Array, void, undefined>;
};

/** A file of an entry that the actor may read, its bytes in chunks. Missing and hidden are one answer. */
export async function readAttachment(db: Db, actor: Actor, id: string): Promise<FileToRead> {
  const [file] = await db
    .select({
      id: attachments.id,
      name: attachments.name,
      size: attachments.size,
      sha256: attachments.sha256,
      announcedType: attachments.announcedType,
      sniffedType: attachments.sniffedType,
      by: user.name,
      at: attachments.at,
      notebookId: entries.notebookId,
    })
    .from(attachments)
    .innerJoin(entries, eq(entries.id, attachments.entryId))
    .innerJoin(user, eq(user.id, attachments.personId))
    .where(eq(attachments.id, id));
  if (file === undefined) throw new Refused("attachment.not-found");
  const { notebookId, ...rest } = file;
  demand(actor, "attachment.read", { notebookId });
  return { ...rest, chunks: readChunks(db, id) };
}

/** The files of a revision, struck ones too. */
export async function listAttachments(db: Db, asked: Actor, revisionId: string): Promise<ContentAttachment[]> {
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "entry.read", revision.subject);
  return attachmentsOf(db, revisionId);
}

/** Strikes a file off a draft's page with a reason. It stays readable, and in the store for good. */
export function strikeAttachment(
  db: Db,
  asked: Actor,
  { revisionId, attachmentId, reason }: { revisionId: string; attachmentId: string; reason: string },
): Promise<void> {
  return db.transaction(async (tx) => {
    const { revision, actor } = await lockRevision(tx, asked, revisionId);
    demand(actor, "attachment.strike", revision.subject);
    const because = reason.trim();
    if (because === "" || because.length > LONGEST_REASON)
      throw new Refused("attachment.reason-missing", { field: "reason" });
    const here = and(
      eq(revisionAttachments.revisionId, revisionId),
      eq(revisionAttachments.attachmentId, attachmentId),
    );
    const [file] = await tx
      .select({ name: attachments.name, struckAt: revisionAttachments.struckAt })
      .from(revisionAttachments)
      .innerJoin(attachments, eq(attachments.id, revisionAttachments.attachmentId))
      .where(here);
    if (file === undefined) throw new Refused("attachment.not-found");
    if (file.struckAt !== null) throw new Refused("attachment.struck");
    const at = new Date();
    await tx
      .update(revisionAttachments)
      .set({ struckAt: at, struckReason: because, struckBy: actor.id })
      .where(and(here, isNull(revisionAttachments.struckAt)));
    await becomeContributor(tx, actor, revision, at);
    await record(tx, actor, "attachment.struck", {
      objectKind: "attachment",
      objectId: attachmentId,
      entryId: revision.entryId,
      detail: { revision: revision.number, name: file.name, reason: because },
    });
  });
}

/** The name as data: no path, no control or direction characters, not longer than a line. */
function plainName(name: string): string {
  const last = name.normalize("NFC").split(/[/\\]/).at(-1) ?? "";
  const plain = last.replace(/[\p{Cc}\u061C\u200E\u200F\u202A-\u202E\u2066-\u2069]/gu, "").trim();
  if (plain.length <= LONGEST_NAME) return plain;
  const ending = /\.[a-z0-9]{1,10}$/i.exec(plain)?.[0] ?? "";
  return plain.slice(0, LONGEST_NAME - ending.length) + ending;
}
