"use client";
// What vouches for a block, on the counterfoil beside it: how it stands, the key of its inputs, every solve that was kept (CAL-04).
import { useQuery } from "@tanstack/react-query";
import { useEffect, useState } from "react";
import { formatDateTime, formatPh } from "../../components/format.ts";
import { Vouch } from "../../components/leaf/counterfoil.tsx";
import { Fingerprint } from "../../components/leaf/fingerprint.tsx";
import { StateMark } from "../../components/leaf/state-mark.tsx";
import { keptSolvesQuery } from "../../components/query/results.ts";
import { usePage } from "../page-context.tsx";
import type { EquilibriumBlock } from "../schema/index.ts";
import type { Answer } from "./answer.ts";

export function BlockVouch({ block, number, answer }: { block: EquilibriumBlock; number: number; answer: Answer }) {
  return (
    <Vouch title={`Calculation E${number}`} label={`What vouches for E${number}`}>
      <p>
        {answer.shown === null ? (
          <StateMark state="waiting">Not solved</StateMark>
        ) : answer.isHeld ? (
          <StateMark state="waiting">Held: of earlier inputs</StateMark>
        ) : (
          <StateMark state="reproduces">Solved, engine {answer.engine}</StateMark>
        )}
      </p>
      {answer.key === null ? null : (
        <>
          <p className="head">Key of the inputs{answer.isHeld ? ", earlier" : ""}</p>
          <Fingerprint hex={answer.key} label="Key of the inputs" />
          <p className="note">The result is pinned when the page is signed.</p>
        </>
      )}
      <KeptSolves blockId={block.id} shownKey={answer.key} />
    </Vouch>
  );
}

function KeptSolves({ blockId, shownKey }: { blockId: string; shownKey: string | null }) {
  const { revisionId, decimalSign, timeZone } = usePage();
  const [isOpen, setOpen] = useState(false);
  const kept = useQuery({ ...keptSolvesQuery(revisionId, blockId), enabled: isOpen });
  const { refetch } = kept;
  // biome-ignore lint/correctness/useExhaustiveDependencies: a new key means that one more solve was kept
  useEffect(() => {
    if (isOpen) void refetch();
  }, [isOpen, shownKey, refetch]);
  if (shownKey === null) return null;
  return (
    <details onToggle={(event) => setOpen(event.currentTarget.open)}>
      <summary>Every solve that was kept</summary>
      {kept.isError ? <p className="note">The list cannot be read at the moment.</p> : null}
      <ol className="plain">
        {(kept.data ?? []).map((solve) => (
          <li key={solve.key}>
            pH {formatPh(solve.pH, 2, decimalSign)}, {formatDateTime(solve.at, timeZone)}, {solve.by}, engine{" "}
            {solve.engine}
            <br />
            <span className="faint">{solve.rows.map((row) => `${row.name} ${row.amount} ${row.unit}`).join("; ")}</span>
            <Fingerprint hex={solve.key} label="Key" short />
          </li>
        ))}
      </ol>
    </details>
  );
}
