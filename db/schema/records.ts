// Notebooks, entries, revisions, the updates that a page is made of, and what vouches for it.
import {
  bigint,
  customType,
  foreignKey,
  index,
  integer,
  jsonb,
  pgTable,
  primaryKey,
  text,
  timestamp,
  uniqueIndex,
} from "drizzle-orm/pg-core";
import { user } from "./people.ts";

const at = (name: string) => timestamp(name, { withTimezone: true, mode: "date" });
const bytes = customType<{ data: Uint8Array; driverData: Uint8Array }>({
  dataType: () => "bytea",
  fromDriver: (value) => new Uint8Array(value),
});

export const notebooks = pgTable("notebooks", {
  id: text("id").primaryKey(),
  /** short code that entry numbers carry, e.g. DSB */
  code: text("code").notNull().unique(),
  title: text("title").notNull(),
  about: text("about").notNull().default(""),
  /** the number that the next entry gets; taken under this row's lock, so numbers have no gap */
  nextNumber: integer("next_number").notNull().default(1),
  createdAt: at("created_at").notNull(),
  createdBy: text("created_by").references(() => user.id),
});

export const memberships = pgTable(
  "memberships",
  {
    notebookId: text("notebook_id")
      .notNull()
      .references(() => notebooks.id),
    personId: text("person_id")
      .notNull()
      .references(() => user.id),
    grantedAt: at("granted_at").notNull(),
    grantedBy: text("granted_by"),
  },
  (t) => [primaryKey({ columns: [t.notebookId, t.personId] }), index("memberships_person").on(t.personId)],
);

export const entries = pgTable(
  "entries",
  {
    id: text("id").primaryKey(),
    notebookId: text("notebook_id")
      .notNull()
      .references(() => notebooks.id),
    number: integer("number").notNull(),
    /** the author: who signs it */
    authorId: text("author_id")
      .notNull()
      .references(() => user.id),
    createdAt: at("created_at").notNull(),
    /** the newest revision's number and state, written with it in one transaction */
    revisionNumber: integer("revision_number").notNull(),
    state: text("state").notNull(),
    /** assigned by a supervisor, or null: any witness of the notebook may */
    witnessId: text("witness_id").references(() => user.id),
  },
  (t) => [uniqueIndex("entries_number").on(t.notebookId, t.number), index("entries_state").on(t.state)],
);

export const revisions = pgTable(
  "revisions",
  {
    id: text("id").primaryKey(),
    entryId: text("entry_id")
      .notNull()
      .references(() => entries.id),
    number: integer("number").notNull(),
    state: text("state").notNull(),
    createdAt: at("created_at").notNull(),
    createdBy: text("created_by")
      .notNull()
      .references(() => user.id),
    /** why this revision was begun: the witness's reason of return, or the reason of an amendment */
    begunBecause: text("begun_because"),
    /** derived from the page's head in the accepting transaction */
    title: text("title").notNull().default(""),
    doneOn: text("done_on"),
    lateReason: text("late_reason"),
    /** number of the last accepted update, and of the one that text and compounds were derived from */
    lastSeq: integer("last_seq").notNull().default(0),
    /** a new random word with every accepted update: a page kept in memory is believed only when it carries the same one */
    pageToken: text("page_token"),
    /** bytes of all accepted updates together, which bounds the page's history */
    pageBytes: integer("page_bytes").notNull().default(0),
    derivedSeq: integer("derived_seq").notNull().default(-1),
    lastTypedAt: at("last_typed_at"),
    signedAt: at("signed_at"),
    witnessedAt: at("witnessed_at"),
    returnedAt: at("returned_at"),
    returnedBy: text("returned_by"),
    returnReason: text("return_reason"),
    voidedAt: at("voided_at"),
    voidReason: text("void_reason"),
  },
  (t) => [uniqueIndex("revisions_number").on(t.entryId, t.number)],
);

/** Append-only: what was typed, by whom, in the order in which it was accepted. */
export const updates = pgTable(
  "updates",
  {
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    seq: integer("seq").notNull(),
    /** the browser's id of the post: a repeat is answered with the first one's number */
    updateId: text("update_id").notNull(),
    bytes: bytes("bytes").notNull(),
    /** null: the server's own first state of the page, which makes nobody a contributor */
    personId: text("person_id").references(() => user.id),
    sessionId: text("session_id"),
    at: at("at").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.revisionId, t.seq] }),
    uniqueIndex("updates_update_id").on(t.revisionId, t.updateId),
  ],
);

/** Only makes loading fast; the rows above stay. */
export const snapshots = pgTable(
  "snapshots",
  {
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    seq: integer("seq").notNull(),
    state: bytes("state").notNull(),
  },
  (t) => [primaryKey({ columns: [t.revisionId, t.seq] })],
);

/** A Yjs client id belongs to one person, whose session first used it; those of the revision before go along with its copy. */
export const yjsClients = pgTable(
  "yjs_clients",
  {
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    clientId: bigint("client_id", { mode: "number" }).notNull(),
    /** null: the server, which wrote the first state */
    personId: text("person_id").references(() => user.id),
    sessionId: text("session_id"),
  },
  (t) => [primaryKey({ columns: [t.revisionId, t.clientId] })],
);

export const contributors = pgTable(
  "contributors",
  {
    entryId: text("entry_id")
      .notNull()
      .references(() => entries.id),
    personId: text("person_id")
      .notNull()
      .references(() => user.id),
    since: at("since").notNull(),
  },
  (t) => [primaryKey({ columns: [t.entryId, t.personId] })],
);

/** The typed values of the page as they stand, with who set each; earlier ones stand in the events. */
export const typedValues = pgTable(
  "typed_values",
  {
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    /** `head.doneOn`, `block.<id>.measuredPH`, `block.<id>.row.<id>.amount` */
    path: text("path").notNull(),
    label: text("label").notNull(),
    value: text("value").notNull(),
    personId: text("person_id")
      .notNull()
      .references(() => user.id),
    at: at("at").notNull(),
  },
  (t) => [primaryKey({ columns: [t.revisionId, t.path] })],
);

/** Refused because the revision was no longer a draft; kept for its writer. */
export const strayUpdates = pgTable(
  "stray_updates",
  {
    id: text("id").primaryKey(),
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    updateId: text("update_id").notNull(),
    bytes: bytes("bytes").notNull(),
    /** the words in it, so that its writer can copy them */
    text: text("text").notNull(),
    personId: text("person_id")
      .notNull()
      .references(() => user.id),
    at: at("at").notNull(),
  },
  (t) => [uniqueIndex("stray_update_id").on(t.revisionId, t.updateId)],
);

/** Insert-only: an answer under the hash of its canonical inputs and the engine's version. */
export const results = pgTable("results", {
  key: text("key").primaryKey(),
  engine: text("engine").notNull(),
  /** canonical JSON (RFC 8785) of the inputs */
  inputs: text("inputs").notNull(),
  /** JSON of the outcome: answer with warnings, or refusals */
  outcome: text("outcome").notNull(),
  at: at("at").notNull(),
});

/** Every solve that was kept for a block of a revision. */
export const blockSolves = pgTable(
  "block_solves",
  {
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    blockId: text("block_id").notNull(),
    key: text("key")
      .notNull()
      .references(() => results.key),
    personId: text("person_id")
      .notNull()
      .references(() => user.id),
    at: at("at").notNull(),
  },
  (t) => [primaryKey({ columns: [t.revisionId, t.blockId, t.key] })],
);

/** Where a compound stands on a page: the lines that a search shows. Derived. */
export const occurrences = pgTable(
  "occurrences",
  {
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    position: integer("position").notNull(),
    entryId: text("entry_id")
      .notNull()
      .references(() => entries.id),
    notebookId: text("notebook_id")
      .notNull()
      .references(() => notebooks.id),
    /** the substance named there */
    compoundId: text("compound_id").notNull(),
    role: text("role").notNull(),
    line: text("line").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.revisionId, t.position, t.compoundId] }),
    index("occurrences_compound").on(t.compoundId, t.entryId),
  ],
);

/** Plain text of a page for full-text search (the index is made by hand in drizzle/). Derived. */
export const pageTexts = pgTable("page_texts", {
  revisionId: text("revision_id")
    .primaryKey()
    .references(() => revisions.id),
  entryId: text("entry_id")
    .notNull()
    .references(() => entries.id),
  text: text("text").notNull(),
  calculatedPH: text("calculated_ph"),
  measuredPH: text("measured_ph"),
});

export const attachments = pgTable(
  "attachments",
  {
    id: text("id").primaryKey(),
    entryId: text("entry_id")
      .notNull()
      .references(() => entries.id),
    name: text("name").notNull(),
    announcedType: text("announced_type").notNull(),
    /** by content; null when the content says nothing (plain text and the like) */
    sniffedType: text("sniffed_type"),
    size: integer("size").notNull(),
    sha256: text("sha256").notNull(),
    personId: text("person_id")
      .notNull()
      .references(() => user.id),
    at: at("at").notNull(),
  },
  (t) => [index("attachments_entry").on(t.entryId)],
);

/** An upload that has not ended: its chunks may still go. The row goes with the file's own row, or with the failure. */
export const uploads = pgTable(
  "uploads",
  {
    /** the id that the file will have */
    id: text("id").primaryKey(),
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    personId: text("person_id")
      .notNull()
      .references(() => user.id),
    startedAt: at("started_at").notNull(),
    /** when the last chunk came: an upload that stands still is swept */
    lastAt: at("last_at").notNull(),
  },
  (t) => [index("uploads_last").on(t.lastAt)],
);

/**
 * Bytes in rows of 1 MiB. Insert-only once the file has its row in `attachments`; until then the chunks belong to a row of
 * `uploads` and may be deleted with it, so that a broken upload leaves nothing behind.
 */
export const attachmentChunks = pgTable(
  "attachment_chunks",
  {
    attachmentId: text("attachment_id").notNull(),
    index: integer("index").notNull(),
    bytes: bytes("bytes").notNull(),
  },
  (t) => [primaryKey({ columns: [t.attachmentId, t.index] })],
);

/** Which files a revision has; a next revision begins with those of the one before. */
export const revisionAttachments = pgTable(
  "revision_attachments",
  {
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    attachmentId: text("attachment_id")
      .notNull()
      .references(() => attachments.id),
    /** taken off the page with a reason; never removed from the store */
    struckAt: at("struck_at"),
    struckReason: text("struck_reason"),
    struckBy: text("struck_by"),
  },
  (t) => [primaryKey({ columns: [t.revisionId, t.attachmentId] })],
);

/** Insert-only: the canonical text that was signed. */
export const signedContents = pgTable("signed_contents", {
  revisionId: text("revision_id")
    .primaryKey()
    .references(() => revisions.id),
  version: integer("version").notNull(),
  content: text("content").notNull(),
  sha256: text("sha256").notNull(),
  at: at("at").notNull(),
});

/** Insert-only. */
export const signatures = pgTable(
  "signatures",
  {
    id: text("id").primaryKey(),
    revisionId: text("revision_id").notNull(),
    kind: text("kind").notNull(),
    personId: text("person_id")
      .notNull()
      .references(() => user.id),
    printedName: text("printed_name").notNull(),
    role: text("role").notNull(),
    meaning: text("meaning").notNull(),
    at: at("at").notNull(),
    contentSha256: text("content_sha256").notNull(),
    manifest: text("manifest").notNull(),
    jws: text("jws").notNull(),
    kid: text("kid").notNull(),
    /** what the witness wrote about differences, or null */
    acknowledgement: text("acknowledgement"),
  },
  (t) => [
    uniqueIndex("signatures_kind").on(t.revisionId, t.kind),
    foreignKey({ columns: [t.revisionId], foreignColumns: [signedContents.revisionId] }),
  ],
);

/** Who opened which revision in which session, and when the whole of it had been passed. */
export const openings = pgTable(
  "openings",
  {
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    personId: text("person_id")
      .notNull()
      .references(() => user.id),
    sessionId: text("session_id").notNull(),
    contentSha256: text("content_sha256").notNull(),
    /** the page's last update when it was opened: what came after it can be told */
    seq: integer("seq").notNull(),
    openedAt: at("opened_at").notNull(),
    wholeAt: at("whole_at"),
  },
  (t) => [primaryKey({ columns: [t.revisionId, t.sessionId, t.contentSha256] })],
);

/** What the server found when it re-solved every block and re-hashed every file for a witness. */
export const findings = pgTable(
  "findings",
  {
    id: text("id").primaryKey(),
    revisionId: text("revision_id")
      .notNull()
      .references(() => revisions.id),
    personId: text("person_id")
      .notNull()
      .references(() => user.id),
    contentSha256: text("content_sha256").notNull(),
    engine: text("engine").notNull(),
    blocks: jsonb("blocks").notNull(),
    files: jsonb("files").notNull(),
    at: at("at").notNull(),
  },
  (t) => [index("findings_revision").on(t.revisionId, t.personId)],
);

/** Insert-only, hash-chained twice: in the chain of the store and in the chain of its entry. */
export const events = pgTable(
  "events",
  {
    seq: bigint("seq", { mode: "number" }).primaryKey(),
    at: at("at").notNull(),
    personId: text("person_id"),
    printedName: text("printed_name"),
    action: text("action").notNull(),
    objectKind: text("object_kind").notNull(),
    objectId: text("object_id").notNull(),
    entryId: text("entry_id"),
    entrySeq: integer("entry_seq"),
    /** canonical JSON: old, new, reason and whatever the action needs */
    detail: text("detail").notNull(),
    previousHash: text("previous_hash").notNull(),
    hash: text("hash").notNull(),
    entryPreviousHash: text("entry_previous_hash"),
    entryHash: text("entry_hash"),
  },
  (t) => [
    index("events_entry").on(t.entryId, t.entrySeq),
    index("events_person").on(t.personId, t.seq),
    index("events_action").on(t.action, t.seq),
  ],
);

/** One row, "store": the head of the chain, locked last. */
export const auditHeads = pgTable("audit_heads", {
  /** "store" or an entry's id */
  id: text("id").primaryKey(),
  seq: bigint("seq", { mode: "number" }).notNull(),
  hash: text("hash").notNull(),
});
