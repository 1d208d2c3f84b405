// Answers of an equilibrium block, asked from the server: the browser draws results, it never computes them.
import { keepPreviousData, queryOptions } from "@tanstack/react-query";
import { z } from "zod";
import type { Outcome, SolvedBlock, Sweeps } from "../../chem/index.ts";
import { getJson, ProblemError, postJson } from "./http.ts";

/** The block's inputs as they stand on the page: the shape of `EquilibriumBlock` of the page schema. */
export type BlockInputs = {
  id: string;
  title: string;
  show: string;
  rows: readonly { id: string; lot: string }[];
};

// The core's own answer is taken as it is: only that it is one or the other is looked at.
const isRecord = (value: unknown): value is Record<string, unknown> => typeof value === "object" && value !== null;
const outcomeShape = z.custom<Outcome<SolvedBlock>>(
  (value) =>
    isRecord(value) &&
    ((value.ok === true && isRecord(value.value) && Array.isArray(value.warnings)) ||
      (value.ok === false && Array.isArray(value.refusals))),
);
const sweepsShape = z.custom<Sweeps>((value) => isRecord(value) && isRecord(value.coarse) && isRecord(value.refined));

const cautionShape = z.object({
  id: z.string(),
  severity: z.enum(["danger", "caution", "note"]),
  text: z.string(),
  source: z.string(),
  fromMemory: z.boolean(),
});
const statementShape = z.object({ code: z.string(), text: z.string() });
const hazardShape = z.object({
  compound: z.string(),
  name: z.string(),
  /** null: no hazard data on file */
  record: z
    .discriminatedUnion("classified", [
      z.object({
        classified: z.literal(true),
        pictograms: z.array(z.object({ code: z.string(), name: z.string() })),
        signalWord: z.string().nullable(),
        statements: z.array(statementShape),
        supplemental: z.array(statementShape),
        note: z.string().nullable(),
        source: z.string(),
        fromMemory: z.boolean(),
      }),
      z.object({ classified: z.literal(false), note: z.string(), fromMemory: z.boolean() }),
    ])
    .nullable(),
});

const answerShape = z.object({
  /** SHA-256 of inputs and engine; null when the inputs do not make up a question */
  key: z.string().nullable(),
  engine: z.string(),
  outcome: outcomeShape,
  sweeps: sweepsShape.nullable(),
  cautions: z.array(cautionShape),
  hazards: z.array(hazardShape),
});
export type SolvedAnswer = z.infer<typeof answerShape>;
export type BlockCaution = z.infer<typeof cautionShape>;
export type HazardOfCompound = z.infer<typeof hazardShape>;

/**
 * The answer to a block as it stands on a draft. While a new one is on its way the earlier one stays, as placeholder data. What
 * cannot change the answer (title, lots, what is shown) is not part of the key, so that it is not asked anew for it.
 */
export const resultQuery = <Block extends BlockInputs>(revisionId: string, block: Block, sweeps = true) =>
  queryOptions({
    queryKey: [
      "result",
      revisionId,
      { ...block, title: "", show: "", rows: block.rows.map((row) => ({ ...row, lot: "" })) },
      sweeps,
    ],
    queryFn: ({ signal }) => postJson("/api/results", { revisionId, block, sweeps }, answerShape, signal),
    enabled: block.rows.length > 0,
    staleTime: Number.POSITIVE_INFINITY,
    placeholderData: keepPreviousData,
    retry: (failures, error) => failures < 2 && !(error instanceof ProblemError && error.problem.status < 500),
  });

const keptShape = z.object({
  solves: z.array(
    z.object({
      key: z.string(),
      engine: z.string(),
      at: z.string(),
      by: z.string(),
      pH: z.number(),
      ionicStrength: z.number(),
      rows: z.array(z.object({ name: z.string(), amount: z.string(), unit: z.string() })),
    }),
  ),
});
export type KeptSolve = z.infer<typeof keptShape>["solves"][number];

/** Every solve that was kept for a block of a revision, oldest first. */
export const keptSolvesQuery = (revisionId: string, blockId: string) =>
  queryOptions({
    queryKey: ["result", "kept", revisionId, blockId],
    queryFn: ({ signal }) =>
      getJson(`/api/results/kept?${new URLSearchParams({ revision: revisionId, block: blockId })}`, keptShape, signal),
    select: (answer) => answer.solves,
  });
