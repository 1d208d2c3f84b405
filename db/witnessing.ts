// What a witness does: opens, reads to the end, has everything checked, and countersigns or returns. Opening and reading to the
// end also stand before an author's signature.
import { and, eq, isNull } from "drizzle-orm";
import { z } from "zod";
import { ENGINE_VERSION } from "../chem/index.ts";
import { record } from "./audit.ts";
import { sha256Hex } from "./chain.ts";
import { type BlockFinding, checkContent, type FileFinding, type Progress } from "./checking.ts";
import type { Db } from "./client.ts";
import { buildContent } from "./content.ts";
import { Refused } from "./errors.ts";
import { newId } from "./ids.ts";
import { ringState } from "./live.ts";
import { postMail } from "./mail.ts";
import type { Seal, Signature } from "./manifest.ts";
import { beginNextRevision } from "./next-revision.ts";
import { entryLabel } from "./notebooks.ts";
import { demandWhole, findOpening } from "./openings.ts";
import { type Actor, demand, may } from "./policy.ts";
import { user } from "./schema/people.ts";
import { entries, findings, openings, revisions } from "./schema/records.ts";
import { insertSignature, signaturesOf } from "./signatures.ts";
import { signedContentOf } from "./signed-content.ts";
import { findRevision, lockEntryAndRevision, lockRevision, type Revision } from "./subjects.ts";

export type Opened = { contentSha256: string; openedAt: Date; wholeAt: Date | null };

/**
 * Notes that the actor has the revision open in this session: of a signed one its content, of a draft what its author would
 * sign now. A witness's first opening in a session is an event.
 */
export function openRevision(db: Db, asked: Actor, { revisionId }: { revisionId: string }): Promise<Opened> {
  return db.transaction(async (tx) => {
    const { revision, actor } = await lockRevision(tx, asked, revisionId);
    demand(actor, "entry.open", revision.subject);
    const contentSha256 = await openedContent(tx, actor, revision);
    const key = { revisionId, contentSha256 };
    const known = await findOpening(tx, actor, key);
    if (known !== null) return { contentSha256, openedAt: known.openedAt, wholeAt: known.wholeAt };
    const openedAt = new Date();
    await tx
      .insert(openings)
      .values({ ...key, personId: actor.id, sessionId: actor.sessionId, seq: revision.lastSeq, openedAt });
    if (may(actor, "entry.countersign", revision.subject)) {
      await recordOn(tx, actor, revision, "revision.opened", { contentSha256 });
    }
    return { contentSha256, openedAt, wholeAt: null };
  });
}

async function openedContent(tx: Db, actor: Actor, revision: Revision): Promise<string> {
  if (revision.state !== "draft") return (await signedContentOf(tx, revision.id)).sha256;
  demand(actor, "entry.sign", revision.subject);
  return (await buildContent(tx, revision)).sha256;
}

/** Notes that the whole of what was opened has passed before the actor's eyes. Refuses what is not open in this session. */
export function markWhole(
  db: Db,
  asked: Actor,
  { revisionId, contentSha256 }: { revisionId: string; contentSha256: string },
): Promise<void> {
  return db.transaction(async (tx) => {
    const { revision, actor } = await lockRevision(tx, asked, revisionId);
    demand(actor, "entry.open", revision.subject);
    const opening = await findOpening(tx, actor, { revisionId, contentSha256 });
    if (opening === null) throw new Refused("revision.not-whole", { opened: false });
    if (opening.wholeAt !== null) return;
    await tx
      .update(openings)
      .set({ wholeAt: new Date() })
      .where(
        and(
          eq(openings.revisionId, revisionId),
          eq(openings.sessionId, actor.sessionId),
          eq(openings.contentSha256, contentSha256),
          isNull(openings.wholeAt),
        ),
      );
    await recordOn(tx, actor, revision, "revision.read-whole", { contentSha256 });
  });
}

export type Finding = {
  id: string;
  contentSha256: string;
  engine: string;
  at: Date;
  blocks: BlockFinding[];
  files: FileFinding[];
  /** blocks or files that are not as they were signed: to be acknowledged, or, for a file, a bar */
  differing: { blocks: string[]; files: string[] };
};

/**
 * Solves every block again from its pinned inputs and hashes every file again, in no transaction, and keeps what was found.
 * For whoever may countersign the revision.
 */
export async function checkRevision(
  db: Db,
  asked: Actor,
  { revisionId, progress }: { revisionId: string; progress?: Progress },
): Promise<Finding> {
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "entry.countersign", revision.subject);
  const signed = await signedContentOf(db, revisionId);
  const { blocks, files } = await checkContent(db, signed.content, progress);
  const finding: Finding = {
    id: newId(),
    contentSha256: signed.sha256,
    engine: ENGINE_VERSION,
    at: new Date(),
    blocks,
    files,
    differing: differing(blocks, files),
  };
  await db.transaction(async (tx) => {
    const { id, contentSha256, engine, at } = finding;
    await tx.insert(findings).values({ id, revisionId, personId: actor.id, contentSha256, engine, blocks, files, at });
    await recordOn(tx, actor, revision, "revision.checked", {
      finding: id,
      blocks: blocks.length,
      reproduced: blocks.length - finding.differing.blocks.length,
      files: files.length,
      fitting: files.length - finding.differing.files.length,
    });
  });
  return finding;
}

function differing(blocks: readonly BlockFinding[], files: readonly FileFinding[]): Finding["differing"] {
  return {
    blocks: blocks.filter((block) => block.verdict === "differs" || !block.constants.same).map((block) => block.name),
    files: files.filter((file) => !file.fits).map((file) => file.name),
  };
}

export type CountersignInput = {
  revisionId: string;
  shownHash: string;
  findingId: string;
  /** words for what differs; blank when nothing does */
  acknowledgement: string;
  seal: Seal;
};

const LONGEST_WORDS = 1000;

/**
 * Countersigns a signed revision. Refuses whoever wrote in the entry, what was not opened to its end in this session, a check
 * that is missing or of another engine or content, a file whose bytes are not those that were signed, and a difference that
 * was not acknowledged in words.
 */
export function countersign(db: Db, asked: Actor, input: CountersignInput): Promise<Signature> {
  return db.transaction(async (tx) => {
    const { revision, actor } = await lockEntryAndRevision(tx, asked, input.revisionId);
    demand(actor, "entry.countersign", revision.subject);
    const signed = await signedContentOf(tx, revision.id);
    if (signed.sha256 !== input.shownHash) throw new Refused("revision.changed", { now: signed.sha256 });
    const opening = await demandWhole(tx, actor, { revisionId: revision.id, contentSha256: signed.sha256 });
    const finding = await findingFor(tx, actor, input.findingId, {
      contentSha256: signed.sha256,
      since: opening.openedAt,
    });
    const { blocks, files } = finding;
    const differ = differing(blocks, files);
    if (differ.files.length > 0) throw new Refused("revision.files-differ", { files: differ.files });
    const words = input.acknowledgement.trim();
    if (words.length > LONGEST_WORDS || (words === "" && differ.blocks.length > 0)) {
      throw new Refused("revision.acknowledgement-missing", { blocks: differ.blocks, field: "acknowledgement" });
    }
    const [author] = await signaturesOf(tx, revision.id);
    if (author === undefined) throw new Error(`signed revision ${revision.id} has no signature`);

    const at = new Date();
    await tx.update(revisions).set({ state: "witnessed", witnessedAt: at }).where(eq(revisions.id, revision.id));
    await tx.update(entries).set({ state: "witnessed" }).where(eq(entries.id, revision.entryId));
    await ringState(tx, revision.id, "witnessed");
    const label = entryLabel(revision.notebookCode, revision.entryNumber);
    await tellAuthor(tx, revision, {
      subject: `${label} is countersigned`,
      text: `${actor.printedName} countersigned ${label}, revision ${revision.number}.`,
    });
    const acknowledgement = words === "" ? null : words;
    const signature = await insertSignature(tx, actor, {
      kind: "witness",
      revision,
      at,
      contentSha256: signed.sha256,
      previousSha256: signed.content.previous?.sha256 ?? null,
      label,
      seal: input.seal,
      witnessed: {
        authorSignatureSha256: sha256Hex(author.jws),
        finding: {
          id: input.findingId,
          blocks: blocks.length,
          reproduced: blocks.length - differ.blocks.length,
          files: files.length,
          fitting: files.length,
        },
        acknowledgement,
      },
    });
    await recordOn(tx, actor, revision, "revision.countersigned", {
      signature: signature.id,
      meaning: signature.meaning,
      contentSha256: signed.sha256,
      finding: input.findingId,
      acknowledgement,
      kid: signature.kid,
    });
    return signature;
  });
}

/**
 * Returns a signed revision to its author with a reason, and begins the next one as a draft with the same content, without a
 * signature. Refuses whoever wrote in the entry or has not opened the revision in this session.
 */
export function returnToAuthor(
  db: Db,
  asked: Actor,
  { revisionId, reason }: { revisionId: string; reason: string },
): Promise<{ revisionId: string; number: number }> {
  return db.transaction(async (tx) => {
    const { revision, actor } = await lockEntryAndRevision(tx, asked, revisionId);
    demand(actor, "entry.return", revision.subject);
    const because = reason.trim();
    if (because === "" || because.length > LONGEST_WORDS)
      throw new Refused("revision.reason-missing", { field: "reason" });
    const { sha256: contentSha256 } = await signedContentOf(tx, revisionId);
    if ((await findOpening(tx, actor, { revisionId, contentSha256 })) === null) {
      throw new Refused("revision.not-whole", { opened: false });
    }
    const at = new Date();
    await tx
      .update(revisions)
      .set({ state: "returned", returnedAt: at, returnedBy: actor.id, returnReason: because })
      .where(eq(revisions.id, revisionId));
    const next = await beginNextRevision(tx, actor, revision, { because, at });
    await ringState(tx, revisionId, "returned");
    const label = entryLabel(revision.notebookCode, revision.entryNumber);
    await tellAuthor(tx, revision, {
      subject: `${label} was returned to you`,
      text: `${actor.printedName} returned ${label}, revision ${revision.number}: ${because}\nRevision ${next.number} is a draft on your desk.`,
    });
    await recordOn(tx, actor, revision, "revision.returned", { reason: because, next: next.number });
    await record(tx, actor, "revision.begun", {
      objectKind: "revision",
      objectId: next.revisionId,
      entryId: revision.entryId,
      detail: { revision: next.number, reason: because },
    });
    return next;
  });
}

const findingShape = z.object({
  blocks: z.array(
    z.custom<BlockFinding>(
      (value) => z.object({ verdict: z.enum(["reproduces", "differs"]) }).safeParse(value).success,
    ),
  ),
  files: z.array(z.custom<FileFinding>((value) => z.object({ fits: z.boolean() }).safeParse(value).success)),
});

async function findingFor(
  tx: Db,
  actor: Actor,
  findingId: string,
  of: { contentSha256: string; since: Date },
): Promise<z.infer<typeof findingShape>> {
  const [finding] = await tx
    .select({
      personId: findings.personId,
      contentSha256: findings.contentSha256,
      engine: findings.engine,
      blocks: findings.blocks,
      files: findings.files,
      at: findings.at,
    })
    .from(findings)
    .where(eq(findings.id, findingId));
  if (finding === undefined || finding.personId !== actor.id || finding.contentSha256 !== of.contentSha256) {
    throw new Refused("revision.finding-missing");
  }
  // A check from before this session's opening, or by another engine, tells nothing of what is before the eyes now.
  if (finding.engine !== ENGINE_VERSION || finding.at < of.since) throw new Refused("revision.finding-stale");
  return findingShape.parse({ blocks: finding.blocks, files: finding.files });
}

async function tellAuthor(tx: Db, revision: Revision, mail: { subject: string; text: string }): Promise<void> {
  const [author] = await tx
    .select({ email: user.email, closedAt: user.closedAt })
    .from(user)
    .where(eq(user.id, revision.authorId));
  if (author !== undefined && author.closedAt === null) await postMail(tx, { to: author.email, ...mail });
}

type OnRevision = Parameters<typeof record>[2] & `revision.${string}`;

function recordOn(
  tx: Db,
  actor: Actor,
  revision: Revision,
  action: OnRevision,
  detail: NonNullable<Parameters<typeof record>[3]["detail"]>,
): Promise<unknown> {
  return record(tx, actor, action, {
    objectKind: "revision",
    objectId: revision.id,
    entryId: revision.entryId,
    detail: { revision: revision.number, ...detail },
  });
}
