// Signed content against today: every block solved again from its pinned inputs, every file hashed again. No policy, no lock.
import { inArray } from "drizzle-orm";
import { type BlockInput, ENGINE_VERSION, type Outcome, type SolvedBlock, solveBlock } from "../chem/index.ts";
import { blockName } from "../editor/schema/index.ts";
import { fileSha256 } from "./attachment-bytes.ts";
import type { Db } from "./client.ts";
import type { ContentAttachment, ContentBlock, SignedContent } from "./content.ts";
import { resultKey } from "./results.ts";
import { constants } from "./schema/library.ts";

export type Headline = { pH: number; ionicStrength: number } | null;

export type BlockFinding = {
  id: string;
  /** "E1 Bath A" */
  name: string;
  verdict: "reproduces" | "differs";
  /** what was signed: engine, key and result, null where it was refused */
  pinned: { engine: string; key: string | null; result: Headline };
  /** what today's engine makes of the pinned inputs */
  today: { engine: string; key: string | null; result: Headline };
  /** the pinned inputs do not have the pinned key: the record itself does not fit together */
  keyFits: boolean;
  /** today's approved constants against the pinned ones */
  constants: { same: boolean; changed: { pinned: string; pinnedPKa: string; now: string; nowPKa: string }[] };
};

export type FileFinding = { id: string; name: string; sha256: string; found: string | null; fits: boolean };

export type Progress = (step: { done: number; total: number; what: string }) => void;

/** Checks blocks and files of signed content one after another; tells how far it is before each. */
export async function checkContent(
  db: Db,
  content: SignedContent,
  progress: Progress = () => {},
): Promise<{ blocks: BlockFinding[]; files: FileFinding[] }> {
  const total = content.blocks.length + content.attachments.length;
  const blocks: BlockFinding[] = [];
  for (const [index, block] of content.blocks.entries()) {
    const name = blockName(block.inputs, index + 1);
    progress({ done: index, total, what: name });
    blocks.push(await checkBlock(db, block, name));
  }
  const files: FileFinding[] = [];
  for (const [index, file] of content.attachments.entries()) {
    progress({ done: blocks.length + index, total, what: file.name });
    files.push(await checkFile(db, file));
  }
  progress({ done: total, total, what: "" });
  return { blocks, files };
}

async function checkBlock(db: Db, block: ContentBlock, name: string): Promise<BlockFinding> {
  const { canonical, outcome: pinned } = block;
  const today = canonical === null ? null : solveBlock(canonical);
  const keyFits = canonical === null ? block.key === null : block.key === resultKey(block.engine, canonical);
  // Inputs that made up no question then make up none now: there is nothing to solve again.
  const isSame = today === null || isSameOutcome(pinned, today);
  return {
    id: block.id,
    name,
    verdict: isSame && keyFits ? "reproduces" : "differs",
    pinned: { engine: block.engine, key: block.key, result: headline(pinned) },
    today: {
      engine: ENGINE_VERSION,
      key: canonical === null ? null : resultKey(ENGINE_VERSION, canonical),
      result: headline(today),
    },
    keyFits,
    constants: await compareConstants(db, canonical),
  };
}

/** Of pH, absolute: the engine's own stated tolerance. */
const PH_TOLERANCE = 1e-9;
/** Of ionic strength and capacity, relative; they follow from the root. */
const RELATIVE_TOLERANCE = 1e-8;

function isSameOutcome(pinned: Outcome<SolvedBlock>, today: Outcome<SolvedBlock>): boolean {
  if (!pinned.ok || !today.ok) {
    if (pinned.ok || today.ok) return false;
    const codes = (outcome: typeof pinned) => outcome.refusals.map(({ code, field }) => `${field} ${code}`).sort();
    return codes(pinned).join("\n") === codes(today).join("\n");
  }
  const isClose = (a: number, b: number) => Math.abs(a - b) <= RELATIVE_TOLERANCE * Math.max(Math.abs(a), Math.abs(b));
  return (
    Math.abs(pinned.value.pH - today.value.pH) <= PH_TOLERANCE &&
    isClose(pinned.value.ionicStrength, today.value.ionicStrength) &&
    isClose(pinned.value.beta, today.value.beta)
  );
}

function headline(outcome: Outcome<SolvedBlock> | null): Headline {
  if (outcome === null || !outcome.ok) return null;
  return { pH: outcome.value.pH, ionicStrength: outcome.value.ionicStrength };
}

async function compareConstants(db: Db, input: BlockInput | null): Promise<BlockFinding["constants"]> {
  const pinned = input?.families.flatMap((family) =>
    family.constants.map(({ id, pKa }) => ({ family: family.id, id, pKa })),
  );
  if (pinned === undefined || pinned.length === 0) return { same: true, changed: [] };
  const families = [...new Set(pinned.map((constant) => constant.family))];
  const rows = await db
    .select({
      id: constants.id,
      familyId: constants.familyId,
      step: constants.step,
      pKa: constants.pKa,
      current: constants.current,
    })
    .from(constants)
    .where(inArray(constants.familyId, families));
  const byId = new Map(rows.map((row) => [row.id, row]));
  const changed = pinned.flatMap(({ family, id, pKa }) => {
    const step = byId.get(id)?.step;
    const now = rows.find((row) => row.familyId === family && row.step === step && row.current);
    return now === undefined || now.id === id ? [] : [{ pinned: id, pinnedPKa: pKa, now: now.id, nowPKa: now.pKa }];
  });
  return { same: changed.length === 0, changed };
}

async function checkFile(db: Db, file: ContentAttachment): Promise<FileFinding> {
  const { id, name, sha256, size } = file;
  const found = await fileSha256(db, id);
  return { id, name, sha256, found: found?.sha256 ?? null, fits: found?.sha256 === sha256 && found.size === size };
}
