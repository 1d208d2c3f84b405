// Signed content as it was signed: read back from its text, never made anew.
import { eq } from "drizzle-orm";
import { z } from "zod";
import { sha256Hex } from "./chain.ts";
import type { Db } from "./client.ts";
import { CONTENT_FORMAT, CONTENT_VERSION, type SignedContent } from "./content.ts";
import { Refused } from "./errors.ts";
import { signedContents } from "./schema/records.ts";

/** The signed content of a revision, its text compared with its hash. Asks no policy. */
export async function signedContentOf(db: Db, revisionId: string): Promise<{ content: SignedContent; sha256: string }> {
  const [signed] = await db
    .select({ text: signedContents.content, sha256: signedContents.sha256 })
    .from(signedContents)
    .where(eq(signedContents.revisionId, revisionId));
  if (signed === undefined) throw new Refused("revision.not-signed");
  if (sha256Hex(signed.text) !== signed.sha256)
    throw new Error(`signed content of ${revisionId} does not fit its hash`);
  return { content: parseContent(signed.text), sha256: signed.sha256 };
}

/** Reads signed content back. Throws for a version that this program does not know. */
export function parseContent(text: string): SignedContent {
  return contentShape.parse(JSON.parse(text));
}

/** The text is held by its hash, which is compared wherever it counts: the kind is checked here, the body is trusted. */
const contentShape = z.custom<SignedContent>(
  (value) =>
    z.object({ format: z.literal(CONTENT_FORMAT), version: z.literal(CONTENT_VERSION) }).safeParse(value).success,
  { error: "The store holds signed content of an unknown version." },
);
