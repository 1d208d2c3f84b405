// Answers of the equilibrium block, found by content: SHA-256 of the canonical inputs and the engine's version. An answer is
// kept for good under its key. A refusal is not kept: it costs next to nothing to find again, and nothing is pinned to it.
import { and, asc, eq } from "drizzle-orm";
import { z } from "zod";
import { type BlockInput, ENGINE_VERSION, type Outcome, type SolvedBlock, solveBlock } from "../chem/index.ts";
import {
  canonicalInputs,
  canonicalText,
  type EquilibriumBlock,
  equilibriumBlock,
  type LibrarySlice,
} from "../editor/schema/index.ts";
import { type Caution, cautionsFor, mixtureOfBlock, mixtureOfInput } from "./cautions.ts";
import { sha256Hex } from "./chain.ts";
import type { Db } from "./client.ts";
import { type HazardEntry, hazardsOf, slice } from "./compounds.ts";
import { Refused } from "./errors.ts";
import { type Actor, demand, may } from "./policy.ts";
import { user } from "./schema/people.ts";
import { blockSolves, results } from "./schema/records.ts";
import { findRevision } from "./subjects.ts";

export type BlockAnswer = {
  /** null when the page's inputs do not make up a question: a row without a compound and the like */
  key: string | null;
  engine: string;
  /** canonical inputs, constants' values put in; null with the key */
  input: BlockInput | null;
  outcome: Outcome<SolvedBlock>;
};

/**
 * The answer to a block as the actor's page has it: from the store, or solved and stored. Whoever may write on the draft has
 * the solve kept with the block.
 */
export async function resultFor(
  db: Db,
  asked: Actor,
  { revisionId, block: raw }: { revisionId: string; block: unknown },
): Promise<BlockAnswer & { cautions: Caution[]; hazards: HazardEntry[] }> {
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "block.solve", revision.subject);
  const parsed = equilibriumBlock.safeParse(raw);
  if (!parsed.success) throw new Refused("block.invalid", { field: parsed.error.issues[0]?.path.join(".") ?? "" });
  const block = parsed.data;
  const library = await libraryOf(db, block);
  const answer = await answerBlock(db, block, library);
  if (answer.key !== null && answer.outcome.ok && may(actor, "entry.write", revision.subject)) {
    await keepSolve(db, { revisionId, blockId: block.id, key: answer.key, personId: actor.id });
  }
  return {
    ...answer,
    cautions: await blockCautions(db, block, library, answer),
    hazards: await hazardsOf(db, compoundsOf(block)),
  };
}

/** What the library has on the substances of a block, with the versions of the constants that its rows have pinned. */
export function libraryOf(db: Db, block: EquilibriumBlock): Promise<LibrarySlice> {
  const constants = block.rows.flatMap((row) => row.constants.split(" ").filter((id) => id !== ""));
  return slice(db, compoundsOf(block), [...new Set(constants)]);
}

/** The answer to a block with its key, from the store or solved now. Asks no policy. */
export async function answerBlock(db: Db, block: EquilibriumBlock, library: LibrarySlice): Promise<BlockAnswer> {
  const canonical = canonicalInputs(block, library);
  if (canonical.ok) return answerInput(db, canonical.input);
  return { key: null, engine: ENGINE_VERSION, input: null, outcome: canonical };
}

/** The answer to canonical inputs from the store, or solved and stored: two who ask at once get one row. */
export async function answerInput(db: Db, input: BlockInput): Promise<BlockAnswer & { key: string }> {
  const key = resultKey(ENGINE_VERSION, input);
  const kept = await keptOutcome(db, key);
  if (kept !== null) return { key, engine: ENGINE_VERSION, input, outcome: kept };
  const outcome = solveBlock(input);
  if (outcome.ok) {
    await db
      .insert(results)
      .values({
        key,
        engine: ENGINE_VERSION,
        inputs: canonicalText(input),
        outcome: canonicalText(outcome),
        at: new Date(),
      })
      .onConflictDoNothing();
  }
  return { key, engine: ENGINE_VERSION, input, outcome };
}

/** SHA-256 of the canonical text of engine and inputs. */
export function resultKey(engine: string, input: BlockInput): string {
  return sha256Hex(canonicalText({ engine, input }));
}

/** The cautions that a block calls for, whether or not it could be solved. */
export function blockCautions(
  db: Db,
  block: EquilibriumBlock,
  library: LibrarySlice,
  answer: Pick<BlockAnswer, "input" | "outcome">,
): Promise<Caution[]> {
  const solved = answer.outcome.ok ? answer.outcome.value : null;
  const rows = answer.input === null ? mixtureOfBlock(block) : mixtureOfInput(answer.input, solved);
  return cautionsFor(db, library, rows, solved);
}

/** Notes that a block of a revision had this answer. */
export async function keepSolve(
  db: Db,
  solve: { revisionId: string; blockId: string; key: string; personId: string },
): Promise<void> {
  await db
    .insert(blockSolves)
    .values({ ...solve, at: new Date() })
    .onConflictDoNothing();
}

export type KeptSolve = {
  key: string;
  engine: string;
  at: Date;
  by: string;
  pH: number;
  ionicStrength: number;
  /** what the rows held: compound and amount, as they were typed */
  rows: { name: string; amount: string; unit: string }[];
};

/** Every solve that was kept for a block, oldest first (CAL-04). */
export async function keptSolves(
  db: Db,
  asked: Actor,
  { revisionId, blockId }: { revisionId: string; blockId: string },
): Promise<KeptSolve[]> {
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "entry.read", revision.subject);
  const rows = await db
    .select({
      key: blockSolves.key,
      at: blockSolves.at,
      by: user.name,
      engine: results.engine,
      inputs: results.inputs,
      outcome: results.outcome,
    })
    .from(blockSolves)
    .innerJoin(results, eq(results.key, blockSolves.key))
    .innerJoin(user, eq(user.id, blockSolves.personId))
    .where(and(eq(blockSolves.revisionId, revisionId), eq(blockSolves.blockId, blockId)))
    .orderBy(asc(blockSolves.at), asc(blockSolves.key));
  return rows.map(({ inputs, outcome, ...row }) => {
    const { value } = solvedHeadline.parse(JSON.parse(outcome));
    const { rows: lines } = inputLines.parse(JSON.parse(inputs));
    return {
      ...row,
      ...value,
      rows: lines.map(({ name, amount }) => ({ name, amount: amount.value, unit: amount.unit })),
    };
  });
}

const solvedHeadline = z.object({ value: z.object({ pH: z.number(), ionicStrength: z.number() }) });
const inputLines = z.object({
  rows: z.array(z.object({ name: z.string(), amount: z.object({ value: z.string(), unit: z.string() }) })),
});

async function keptOutcome(db: Db, key: string): Promise<Outcome<SolvedBlock> | null> {
  const [row] = await db.select({ outcome: results.outcome }).from(results).where(eq(results.key, key)).limit(1);
  return row === undefined ? null : keptShape.parse(JSON.parse(row.outcome));
}

/** The store holds what solveBlock gave under the same engine version, insert-only: its kind is checked, its body is trusted. */
const keptShape = z.custom<Outcome<SolvedBlock>>(
  (value) => z.object({ ok: z.literal(true), value: z.object({ pH: z.number() }) }).safeParse(value).success,
);

function compoundsOf(block: EquilibriumBlock): string[] {
  return [...new Set(block.rows.map((row) => row.compound).filter((id) => id !== ""))];
}
