// What rides on a result and what stands before it. Neither can be hidden (CAL-08, SAF-02, SAF-03, SAF-05).

import type { Warning } from "../../chem/index.ts";
import { Says, type SaysKind } from "../ui/says.tsx";

const KINDS = { danger: "stop", caution: "warn", info: "info" } as const satisfies Record<
  Warning["severity"],
  SaysKind
>;
const WORDS = { danger: "Danger", caution: "Caution", info: "Note" } as const satisfies Record<
  Warning["severity"],
  string
>;
const ORDER = ["danger", "caution", "info"] as const;

/** Warnings of a result, the gravest first. */
export function Warnings({ warnings }: { warnings: readonly Warning[] }) {
  const sorted = ORDER.flatMap((severity) => warnings.filter((warning) => warning.severity === severity));
  return sorted.map((warning) => (
    <Says
      key={`${warning.code} ${warning.title}`}
      kind={KINDS[warning.severity]}
      finding={
        <>
          {WORDS[warning.severity]}: {sentence(warning.title)}
        </>
      }
    >
      {warning.text} {warning.remedy}
    </Says>
  ));
}

export type MixingCaution = { id: string; severity: string; text: string; source: string; fromMemory: boolean };

/** Cautions for what is poured together; an empty list is said, and said to be no statement of safety. */
export function MixingCautions({ cautions }: { cautions: readonly MixingCaution[] }) {
  if (cautions.length === 0) {
    return <Says kind="info">No caution on file for this combination; that is no statement of safety.</Says>;
  }
  const sorted = [...cautions].sort((a, b) => Number(isDanger(b)) - Number(isDanger(a)));
  return sorted.map((caution) => (
    <Says
      key={caution.id}
      kind={isDanger(caution) ? "stop" : "warn"}
      finding={isDanger(caution) ? "Danger when mixed." : "Caution when mixed."}
    >
      {caution.text}{" "}
      <span className="faint">
        {caution.source}
        {caution.fromMemory ? "; from memory, not yet compared with its source" : ""}
      </span>
    </Says>
  ));
}

/** Stands with every calculation (SAF-05). */
export function EstimateNotice() {
  return (
    <Says kind="info" finding="An estimate from a stated model.">
      The safety data sheet, local rules and a licensed professional’s judgement come first.
    </Says>
  );
}

function isDanger(caution: MixingCaution): boolean {
  return caution.severity === "danger";
}

function sentence(title: string): string {
  return /[.!?]$/.test(title) ? title : `${title}.`;
}
