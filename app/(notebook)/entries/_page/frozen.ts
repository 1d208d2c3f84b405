// What the static page draws: from signed content its own bytes, from a draft what its blocks are answered now.
import { type Sweeps, sweepBlock } from "../../../../chem/index.ts";
import type { AttachmentMeta } from "../../../../components/query/attachments.ts";
import type { Db } from "../../../../db/client.ts";
import { compoundItems, namesOf } from "../../../../db/compounds.ts";
import { attachmentsOf, type ContentBlock, type SignedContent } from "../../../../db/content.ts";
import type { Actor } from "../../../../db/policy.ts";
import { type BlockAnswer, resultFor } from "../../../../db/results.ts";
import { pageState } from "../../../../db/updates.ts";
import {
  derivePage,
  type EquilibriumBlock,
  openState,
  type PageHead,
  type PageJson,
} from "../../../../editor/schema/index.ts";
import { isPicture } from "../../../_server/download.ts";

export type FrozenBlock = {
  block: EquilibriumBlock;
  answer: Pick<BlockAnswer, "key" | "engine" | "outcome"> &
    Pick<ContentBlock, "cautions" | "hazards"> & { sweeps: Sweeps | null };
};
export type Frozen = {
  page: PageJson;
  head: PageHead;
  names: Record<string, { name: string; formula: string }>;
  blocks: Record<string, FrozenBlock>;
  files: SignedContent["attachments"];
  attachments: Record<string, AttachmentMeta & { struck?: string }>;
};

/** Signed content as it was signed. Its answers are the pinned ones; only the curves are drawn anew from the pinned inputs. */
export async function frozenContent(db: Db, content: SignedContent): Promise<Frozen> {
  const blocks = content.blocks.map(({ id, inputs, canonical, key, engine, outcome, cautions, hazards }) => {
    const sweeps = canonical !== null && outcome.ok ? sweepBlock(canonical, outcome.value) : null;
    return [id, { block: inputs, answer: { key, engine, outcome, cautions, hazards, sweeps } }] as const;
  });
  const { document: page, head, attachments: files } = content;
  return {
    page,
    head,
    files,
    names: await named(db, content.names),
    attachments: filesById(files),
    blocks: Object.fromEntries(blocks),
  };
}

/** A draft as it stands, for somebody who reads it and does not write: not bound, so reading changes nothing. */
export async function frozenDraft(db: Db, actor: Actor, revisionId: string): Promise<Frozen> {
  const { state } = await pageState(db, actor, revisionId);
  const doc = openState(state);
  const bare = derivePage(doc, (id) => id);
  doc.destroy();
  const names = await namesOf(db, [...new Set(bare.mentions.map(({ compound }) => compound))]);
  const files = await attachmentsOf(db, revisionId);
  const blocks: [string, FrozenBlock][] = [];
  for (const block of bare.blocks) {
    const { input, key, engine, outcome, cautions, hazards } = await resultFor(db, actor, { revisionId, block });
    const sweeps = input !== null && outcome.ok ? sweepBlock(input, outcome.value) : null;
    blocks.push([block.id, { block, answer: { key, engine, outcome, cautions, hazards, sweeps } }]);
  }
  const { page, head } = bare;
  return {
    page,
    head,
    files,
    names: await named(db, names),
    attachments: filesById(files),
    blocks: Object.fromEntries(blocks),
  };
}

/** The names as they were shown when it was signed; the formula beside them is the library's. */
async function named(db: Db, names: Record<string, string>): Promise<Frozen["names"]> {
  const items = new Map((await compoundItems(db, Object.keys(names))).map((item) => [item.id, item.formula]));
  return Object.fromEntries(Object.entries(names).map(([id, name]) => [id, { name, formula: items.get(id) ?? "" }]));
}

function filesById(files: SignedContent["attachments"]): Frozen["attachments"] {
  return Object.fromEntries(
    files.map(({ id, name, size, sha256, sniffedType, struck }) => [
      id,
      {
        id,
        name,
        size,
        sha256,
        isPicture: isPicture({ sniffedType }),
        ...(struck === null ? {} : { struck: struck.reason }),
      },
    ]),
  );
}
