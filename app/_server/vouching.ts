// Signing: the password every time, then the verb. One password, one revision (SGN-02, SGN-13).
import "server-only";
import type { Db } from "../../db/client.ts";
import { MEANINGS, type Signature } from "../../db/manifest.ts";
import { type Actor, demand } from "../../db/policy.ts";
import { contentToSign, signAsAuthor } from "../../db/signatures.ts";
import { findRevision } from "../../db/subjects.ts";
import { countersign } from "../../db/witnessing.ts";
import { demandPassword } from "./sign-in.ts";
import { signingSeal } from "./signing-key.ts";

export type SignForm = { revisionId: string; shownHash: string; password: string };

/** Signs as the author. Whoever may not sign is refused before the password is asked, so that it is not a guess at a door. */
export async function sign(db: Db, actor: Actor, { revisionId, shownHash, password }: SignForm): Promise<Signature> {
  await contentToSign(db, actor, revisionId);
  await demandPassword(db, actor, password);
  return signAsAuthor(db, actor, { revisionId, shownHash, meaning: MEANINGS.author, seal: await signingSeal() });
}

export type CountersignForm = SignForm & { findingId: string; acknowledgement: string };

/** Countersigns: the same for a witness, with the finding that was shown and what was written about it. */
export async function countersignAs(db: Db, actor: Actor, form: CountersignForm): Promise<Signature> {
  const { revisionId, shownHash, findingId, acknowledgement, password } = form;
  const { revision, actor: now } = await findRevision(db, actor, revisionId);
  demand(now, "entry.countersign", revision.subject);
  await demandPassword(db, actor, password);
  return countersign(db, actor, { revisionId, shownHash, findingId, acknowledgement, seal: await signingSeal() });
}
