// A solved equilibrium block, row by row in the leaf's layout: cautions before the answer, everything behind it after.

import "./chem.css";
import { useMemo } from "react";
import type { Decimal, Refusal, SolvedBlock, Sweeps, Warning } from "../../chem/index.ts";
import { SideRow } from "../leaf/side-row.tsx";
import { capacityPlot, fractionsPlots, residualPlots } from "../plot/block-plots.ts";
import type { PlotModel } from "../plot/model.ts";
import { PlotFigure } from "../plot/plot-figure.tsx";
import { PlotStatic } from "../plot/plot-static.tsx";
import { SweepDownload } from "../plot/sweep-download.tsx";
import { Answer, Refusals } from "./answer.tsx";
import { Balances } from "./balances.tsx";
import { Comparison } from "./comparison.tsx";
import { ConstantsTable, PocketTable, SpeciesTable } from "./tables.tsx";
import { Unfold } from "./unfold.tsx";
import { EstimateNotice, type MixingCaution, MixingCautions, Warnings } from "./warnings.tsx";

export type BlockResultProps = {
  /** null: never solved yet */
  solved: SolvedBlock | null;
  warnings: readonly Warning[];
  sweeps: Sweeps | null;
  cautions: readonly MixingCaution[];
  /** what is shown belongs to earlier inputs */
  held: boolean;
  stillSolving: boolean;
  refusals?: readonly Refusal[];
  /** the reading with the digits as typed */
  measuredText?: Decimal;
  /** names the CSV files */
  name?: string;
  /** for frozen pages: no script needed, nothing folded */
  static?: boolean;
};

export function BlockResult({
  solved,
  warnings,
  sweeps,
  cautions,
  held,
  stillSolving,
  refusals = [],
  measuredText,
  name = "equilibrium-block",
  static: isStatic = false,
}: BlockResultProps) {
  return (
    <div className="block-result">
      <SideRow level={3} label="Mixing">
        <MixingCautions cautions={cautions} />
      </SideRow>
      <SideRow level={3} label="Answer" long>
        {solved === null ? (
          <Unsolved refusals={refusals} stillSolving={stillSolving || held} />
        ) : (
          <Answer solved={solved} held={held} stillSolving={stillSolving} refusals={refusals} isStatic={isStatic} />
        )}
        <div className="told">
          {solved === null ? null : <Warnings warnings={warnings} />}
          {solved === null ? null : <LeftOut names={solved.leftOut} warnings={warnings} />}
          <EstimateNotice />
        </div>
      </SideRow>
      {solved === null ? null : (
        <>
          {solved.comparison === null ? null : (
            <SideRow level={3} label="Meter">
              <Comparison comparison={solved.comparison} measuredText={measuredText} />
            </SideRow>
          )}
          <SideRow level={3} label="Balances" note="numbers at the root" long>
            <Balances solved={solved} isStatic={isStatic} />
          </SideRow>
          <SideRow level={3} label="Solution" long>
            <SpeciesTable solved={solved} />
            <Unfold summary="What a pocket calculator needs" isStatic={isStatic}>
              <PocketTable solved={solved} />
            </Unfold>
          </SideRow>
          <SideRow level={3} label="Constants" long>
            <ConstantsTable constants={solved.constants} />
          </SideRow>
          {sweeps === null ? null : <Plots solved={solved} sweeps={sweeps} name={name} isStatic={isStatic} />}
        </>
      )}
    </div>
  );
}

function Plots({
  solved,
  sweeps,
  name,
  isStatic,
}: {
  solved: SolvedBlock;
  sweeps: Sweeps;
  name: string;
  isStatic: boolean;
}) {
  const [residuals, others] = useMemo(() => {
    const { coarse, refined } = residualPlots(sweeps, solved);
    return [
      [coarse, refined],
      [...fractionsPlots(sweeps, solved), capacityPlot(sweeps, solved)],
    ];
  }, [sweeps, solved]);
  const plot = (model: PlotModel) =>
    isStatic ? <PlotStatic key={model.title} model={model} /> : <PlotFigure key={model.title} model={model} />;
  return (
    <>
      <SideRow level={3} label="Residual" long>
        <div className="plot-pair">{residuals.map(plot)}</div>
        {isStatic ? null : <SweepDownload sweeps={sweeps} name={name} />}
      </SideRow>
      <SideRow level={3} label="Fractions" note="and capacity" long>
        <div className="plot-pair">{others.map(plot)}</div>
      </SideRow>
    </>
  );
}

function Unsolved({ refusals, stillSolving }: { refusals: readonly Refusal[]; stillSolving: boolean }) {
  if (refusals.length > 0) return <Refusals refusals={refusals} />;
  return (
    <p className="held-line" role="status">
      {stillSolving ? "Being solved." : "Not solved yet. Put in what was poured together, and how much of it."}
    </p>
  );
}

/** What the model leaves out is said even when no warning says it already. */
function LeftOut({ names, warnings }: { names: readonly string[]; warnings: readonly Warning[] }) {
  if (names.length === 0 || warnings.some((warning) => warning.code === "left-out")) return null;
  return <p className="note">Left out: {names.join("; ")}.</p>;
}
