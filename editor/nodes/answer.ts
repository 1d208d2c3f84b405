"use client";
// The server's answer to a block as it stands, and what is shown meanwhile.
import { useQuery } from "@tanstack/react-query";
import { useEffect, useState } from "react";
import type { Refusal } from "../../chem/index.ts";
import { ProblemError } from "../../components/query/http.ts";
import { resultQuery, type SolvedAnswer } from "../../components/query/results.ts";
import { usePage } from "../page-context.tsx";
import type { EquilibriumBlock } from "../schema/index.ts";

type Solved = Extract<SolvedAnswer["outcome"], { ok: true }>;

export type Answer = {
  /** the last answer that had a number, of these inputs or of earlier ones */
  shown: Solved | null;
  sweeps: SolvedAnswer["sweeps"];
  /** what is shown belongs to earlier inputs */
  isHeld: boolean;
  isSlow: boolean;
  refusals: readonly Refusal[];
  cautions: SolvedAnswer["cautions"];
  hazards: SolvedAnswer["hazards"];
  /** key and engine of what is shown */
  key: string | null;
  engine: string | null;
  /** why there is no answer to what stands there, beyond refusals at the fields */
  words: string | null;
};

const SLOW_MS = 1_000;

export function useAnswer(block: EquilibriumBlock): Answer {
  const { revisionId, line } = usePage();
  const query = useQuery(resultQuery(revisionId, block));
  const current = query.isPlaceholderData ? undefined : query.data;
  const [latest, setLatest] = useState<SolvedAnswer | null>(null);
  const [solved, setSolved] = useState<SolvedAnswer | null>(null);
  if (current !== undefined && current !== latest) {
    setLatest(current);
    if (current.outcome.ok) setSolved(current);
  }
  // The line is back: what could not be asked is asked again.
  const isReached = line.kind === "saved" || line.kind === "saving";
  const { isError, refetch } = query;
  useEffect(() => {
    if (isReached && isError) void refetch();
  }, [isReached, isError, refetch]);
  const isSlow = useSlow(query.isFetching && query.fetchStatus !== "paused");
  const refusals = current !== undefined && !current.outcome.ok ? current.outcome.refusals : [];
  const told = current ?? latest;
  return {
    shown: solved?.outcome.ok === true ? solved.outcome : null,
    sweeps: solved?.sweeps ?? null,
    isHeld: solved !== null && solved !== current,
    isSlow,
    refusals,
    cautions: told?.cautions ?? [],
    hazards: told?.hazards ?? [],
    key: solved?.key ?? null,
    engine: solved?.engine ?? null,
    words: wordsOf(block, current, query.error, query.fetchStatus === "paused" || line.kind === "offline"),
  };
}

function wordsOf(
  block: EquilibriumBlock,
  current: SolvedAnswer | undefined,
  error: Error | null,
  isOffline: boolean,
): string | null {
  if (block.rows.length === 0) return "Nothing is poured in yet. Add a row.";
  if (current !== undefined) return null;
  if (error instanceof ProblemError) return `Not solved: ${error.message}`;
  if (isOffline || error !== null) return "Not solved: offline. What is shown, if anything, belongs to earlier inputs.";
  return null;
}

/** True once something has gone on for longer than one second. */
function useSlow(isGoingOn: boolean): boolean {
  const [isSlow, setSlow] = useState(false);
  useEffect(() => {
    if (!isGoingOn) return;
    const timer = setTimeout(() => setSlow(true), SLOW_MS);
    return () => {
      clearTimeout(timer);
      setSlow(false);
    };
  }, [isGoingOn]);
  return isSlow && isGoingOn;
}
