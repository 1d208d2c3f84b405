// The author's signature: over a content that was shown, read to its end, and is still what the store holds.
import { and, asc, eq, ne } from "drizzle-orm";
import { lockHeads, record } from "./audit.ts";
import type { Db } from "./client.ts";
import { type BuiltContent, buildContent, CONTENT_VERSION, type Hindrance, type SignedContent } from "./content.ts";
import { changesDetail, changesSince } from "./content-changes.ts";
import { Refused } from "./errors.ts";
import { newId } from "./ids.ts";
import { ringState } from "./live.ts";
import { postMail } from "./mail.ts";
import { MEANINGS, manifestText, roleOf, type Seal, type Signature, type SignatureKind } from "./manifest.ts";
import { demandWhole, findOpening } from "./openings.ts";
import { type Actor, demand } from "./policy.ts";
import { personRoles, user } from "./schema/people.ts";
import { entries, memberships, revisions, signatures, signedContents } from "./schema/records.ts";
import { findRevision, lockEntryAndRevision, type Revision } from "./subjects.ts";

export type ContentToSign = {
  /** the canonical text whose hash is signed */
  content: string;
  sha256: string;
  view: { content: SignedContent /** what must be put right before it can be signed */; hindrances: Hindrance[] };
};

/** The content as it would be signed now, every block solved. For the entry's author only. */
export async function contentToSign(db: Db, asked: Actor, revisionId: string): Promise<ContentToSign> {
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "entry.sign", revision.subject);
  const { content, text, sha256, hindrances } = await buildContent(db, revision);
  return { content: text, sha256, view: { content, hindrances } };
}

export type SignInput = { revisionId: string; shownHash: string; meaning: string; seal: Seal };

/**
 * Signs the revision as its author; one revision a call. Refuses `revision.changed`, with what changed, when the content is no
 * longer the one that was shown; `revision.not-complete` with what is missing; `revision.not-whole` when the whole of exactly
 * this content was not opened in this session.
 */
export async function signAsAuthor(db: Db, asked: Actor, input: SignInput): Promise<Signature> {
  if (input.meaning !== MEANINGS.author) throw new Refused("request.invalid", { field: "meaning" });
  // Solves and keeps what is not solved yet, so that the lock is not held for it.
  await contentToSign(db, asked, input.revisionId);
  return db.transaction(async (tx) => {
    const { revision, actor } = await lockEntryAndRevision(tx, asked, input.revisionId);
    demand(actor, "entry.sign", revision.subject);
    const built = await buildContent(tx, revision);
    if (built.sha256 !== input.shownHash) throw await changedSince(tx, actor, revision, built, input.shownHash);
    if (built.hindrances.length > 0) {
      throw new Refused("revision.not-complete", { missing: built.hindrances.map((hindrance) => ({ ...hindrance })) });
    }
    await demandWhole(tx, actor, { revisionId: revision.id, contentSha256: built.sha256 });

    const at = new Date();
    const { content, text, sha256 } = built;
    await tx
      .insert(signedContents)
      .values({ revisionId: revision.id, version: CONTENT_VERSION, content: text, sha256, at });
    await tx.update(revisions).set({ state: "signed", signedAt: at }).where(eq(revisions.id, revision.id));
    await tx.update(entries).set({ state: "signed" }).where(eq(entries.id, revision.entryId));
    await ringState(tx, revision.id, "signed");
    await tellWitnesses(tx, revision, content);
    const signature = await insertSignature(tx, actor, {
      kind: "author",
      revision,
      at,
      contentSha256: sha256,
      previousSha256: content.previous?.sha256 ?? null,
      label: content.entry.label,
      seal: input.seal,
    });
    await record(tx, actor, "revision.signed", {
      objectKind: "revision",
      objectId: revision.id,
      entryId: revision.entryId,
      detail: {
        revision: revision.number,
        signature: signature.id,
        meaning: signature.meaning,
        contentSha256: sha256,
        kid: signature.kid,
      },
    });
    return signature;
  });
}

async function changedSince(
  tx: Db,
  actor: Actor,
  revision: Revision,
  now: BuiltContent,
  shownHash: string,
): Promise<Refused> {
  const shown = await findOpening(tx, actor, { revisionId: revision.id, contentSha256: shownHash });
  if (shown === null) return new Refused("revision.changed", { now: now.sha256 });
  const changes = await changesSince(tx, revision, now, shown);
  return new Refused("revision.changed", { now: now.sha256, changes: changesDetail(changes) });
}

export type SignatureToInsert = {
  kind: SignatureKind;
  revision: Revision;
  at: Date;
  contentSha256: string;
  previousSha256: string | null;
  label: string;
  seal: Seal;
  witnessed?: Parameters<typeof manifestText>[0]["witnessed"];
};

/** Writes manifest and JWS. Locks the head of the audit trail, so it comes last but for the event. */
export async function insertSignature(tx: Db, actor: Actor, input: SignatureToInsert): Promise<Signature> {
  const { kind, revision, at, contentSha256, seal, witnessed } = input;
  const heads = await lockHeads(tx, revision.entryId);
  const manifest = manifestText({ ...input, signer: { id: actor.id, printedName: actor.printedName }, heads });
  const { jws, kid } = await seal(manifest);
  const signature: Signature = {
    id: newId(),
    kind,
    printedName: actor.printedName,
    role: roleOf(kind),
    meaning: MEANINGS[kind],
    at,
    contentSha256,
    kid,
  };
  await tx.insert(signatures).values({
    ...signature,
    revisionId: revision.id,
    personId: actor.id,
    manifest,
    jws,
    acknowledgement: witnessed?.acknowledgement ?? null,
  });
  return signature;
}

export type StoredSignature = Signature & {
  personId: string;
  manifest: string;
  jws: string;
  acknowledgement: string | null;
};

/** The signatures of a revision in the order in which they were given. Asks no policy. */
export async function signaturesOf(db: Db, revisionId: string): Promise<StoredSignature[]> {
  const rows = await db
    .select({
      id: signatures.id,
      kind: signatures.kind,
      personId: signatures.personId,
      printedName: signatures.printedName,
      meaning: signatures.meaning,
      at: signatures.at,
      contentSha256: signatures.contentSha256,
      manifest: signatures.manifest,
      jws: signatures.jws,
      kid: signatures.kid,
      acknowledgement: signatures.acknowledgement,
    })
    .from(signatures)
    .where(eq(signatures.revisionId, revisionId))
    .orderBy(asc(signatures.at));
  return rows.map(({ kind: word, ...row }) => {
    const kind: SignatureKind = word === "author" ? "author" : "witness";
    return { ...row, kind, role: roleOf(kind) };
  });
}

/** A mail to the assigned witness, or to every witness of the notebook who wrote nothing in the entry. */
async function tellWitnesses(tx: Db, revision: Revision, content: SignedContent): Promise<void> {
  const witnesses = await tx
    .selectDistinct({ id: user.id, email: user.email, closedAt: user.closedAt })
    .from(user)
    .innerJoin(memberships, eq(memberships.personId, user.id))
    .innerJoin(personRoles, and(eq(personRoles.personId, user.id), eq(personRoles.role, "witness")))
    .where(and(eq(memberships.notebookId, revision.notebookId), ne(user.id, revision.authorId)));
  const { label } = content.entry;
  for (const { id, email, closedAt } of witnesses) {
    if (closedAt !== null || revision.contributorIds.includes(id)) continue;
    if (revision.witnessId !== null && revision.witnessId !== id) continue;
    await postMail(tx, {
      to: email,
      subject: `${label} waits for a countersignature`,
      text: `${content.author.printedName} signed ${label}, revision ${content.revision.number}. It stands on your desk.`,
    });
  }
}
