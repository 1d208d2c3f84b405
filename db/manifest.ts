// What a signature says, as canonical JSON: whose, of what content, in which meaning, when, and where the audit trail stood.
import { canonicalText } from "../editor/schema/index.ts";
import type { Head } from "./chain.ts";
import { CONTENT_VERSION, type ContentPerson } from "./content.ts";
import type { Revision } from "./subjects.ts";

/** The only meanings there are. A witness vouches for having read, not for being right (SGN-11). */
export const MEANINGS = {
  author: "I did this work and wrote this page.",
  witness: "Read and understood by me.",
} as const;

export type SignatureKind = keyof typeof MEANINGS;

/** Seals a manifest's canonical text. It is called inside a transaction, so it must ask the database for nothing. */
export type Seal = (manifest: string) => Promise<{ jws: string; kid: string }>;

export type Signature = {
  id: string;
  kind: SignatureKind;
  printedName: string;
  role: "researcher" | "witness";
  meaning: string;
  at: Date;
  contentSha256: string;
  kid: string;
};

const ROLE_OF = { author: "researcher", witness: "witness" } as const;

export function roleOf(kind: SignatureKind): Signature["role"] {
  return ROLE_OF[kind];
}

/** The manifest's canonical text. `witnessed` only for a witness: what was checked before, and the words for what differs. */
export function manifestText(about: {
  kind: SignatureKind;
  revision: Revision;
  label: string;
  contentSha256: string;
  previousSha256: string | null;
  signer: ContentPerson;
  at: Date;
  heads: { store: Head; entry: Head };
  witnessed?: {
    authorSignatureSha256: string;
    finding: { id: string; blocks: number; reproduced: number; files: number; fitting: number };
    acknowledgement: string | null;
  };
}): string {
  const { kind, revision, signer, heads } = about;
  return canonicalText({
    format: "counterleaf-signature",
    version: 1,
    kind,
    entry: { id: revision.entryId, label: about.label },
    revision: { id: revision.id, number: revision.number },
    content: { sha256: about.contentSha256, version: CONTENT_VERSION },
    previousContentSha256: about.previousSha256,
    signer: { id: signer.id, printedName: signer.printedName, role: roleOf(kind) },
    meaning: MEANINGS[kind],
    at: about.at.toISOString(),
    audit: {
      store: { seq: heads.store.seq, hash: heads.store.hash },
      entry: { seq: heads.entry.seq, hash: heads.entry.hash },
    },
    ...(about.witnessed !== undefined && { witnessed: about.witnessed }),
  });
}
