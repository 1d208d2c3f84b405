// An equilibrium block as it was pinned: inputs as typed, answer, and everything that it must not be read without.
import type { ReactNode } from "react";
import { BlockResult } from "../../components/chem/block-result.tsx";
import { FormulaText } from "../../components/chem/formula-text.tsx";
import { significant } from "../../components/format.ts";
import { Vouch } from "../../components/leaf/counterfoil.tsx";
import { Fingerprint } from "../../components/leaf/fingerprint.tsx";
import { SideRow } from "../../components/leaf/side-row.tsx";
import type { SolvedAnswer } from "../../components/query/results.ts";
import { PlainTable } from "../../components/ui/plain-table.tsx";
import type { EquilibriumBlock } from "../schema/index.ts";
import { Hazards } from "./hazards.tsx";

type StaticBlockProps = {
  block: EquilibriumBlock;
  /** in the order of the page: 1 is E1 */
  number: number;
  answer: SolvedAnswer | null;
  names: Readonly<Record<string, { name: string; formula: string }>>;
  decimalSign: "." | ",";
};

const MODELS = { davies: "Davies", ideal: "ideal" } as const;

export function StaticBlock({ block, number, answer, names, decimalSign }: StaticBlockProps) {
  const solved = answer?.outcome.ok === true ? answer.outcome : null;
  const shown = (decimal: string) => decimal.replace(".", decimalSign);
  return (
    <section className="eq" aria-label={`Equilibrium block E${number}`}>
      {answer?.key == null ? null : (
        <Vouch title={`Calculation E${number}`} label={`What vouches for E${number}`}>
          <p>Engine {answer.engine}</p>
          <p className="head">Key of the inputs</p>
          <Fingerprint hex={answer.key} label="Key of the inputs" />
        </Vouch>
      )}
      <header className="eq-head">
        <span className="tag-id">E{number}</span>
        <h2>{block.title === "" ? "Equilibrium block" : block.title}</h2>
      </header>
      <SideRow
        label="Composition"
        note={block.rows.length === 1 ? "1 row" : `${block.rows.length} rows`}
        level={3}
        first
        long
      >
        <PlainTable
          caption={`Composition of E${number}`}
          captionHidden
          decimalSign={decimalSign}
          columns={[
            { id: "name", head: "Poured in", names: true },
            { id: "formula", head: "Formula" },
            { id: "amount", head: "Amount", kind: "number" },
            { id: "unit", head: "Unit" },
            { id: "fraction", head: "Mass fraction", kind: "number" },
            { id: "density", head: "Density", unit: "g/mL", kind: "number" },
            { id: "lot", head: "Lot", kind: "mono" },
            { id: "c", head: "c", unit: "mol/L", kind: "number" },
          ]}
          rows={block.rows.map((row, index) => {
            const name = Object.hasOwn(names, row.compound) ? names[row.compound] : undefined;
            const concentration = solved?.value.composition[index]?.concentration;
            return {
              key: row.id,
              cells: [
                name?.name ?? row.compound,
                name === undefined ? "" : <FormulaText key="formula" formula={name.formula} />,
                shown(row.amount),
                row.unit,
                shown(row.massFraction),
                shown(row.density),
                row.lot,
                concentration === undefined ? "" : significant(concentration, 4, decimalSign),
              ],
            };
          })}
        />
      </SideRow>
      <SideRow label="Conditions" level={3}>
        <dl className="facts">
          {block.volume === "" ? null : <Fact name="Made up to">{`${shown(block.volume)} ${block.volumeUnit}`}</Fact>}
          <Fact name="Temperature">{shown(block.temperatureC)} °C</Fact>
          <Fact name="Activity model">{MODELS[block.activity]}</Fact>
          {block.measuredPH === "" ? null : <Fact name="Measured pH, by the meter">{shown(block.measuredPH)}</Fact>}
        </dl>
      </SideRow>
      <BlockResult
        solved={solved?.value ?? null}
        warnings={solved?.warnings ?? []}
        sweeps={answer?.sweeps ?? null}
        cautions={answer?.cautions ?? []}
        held={false}
        stillSolving={false}
        refusals={answer?.outcome.ok === false ? answer.outcome.refusals : []}
        measuredText={block.measuredPH === "" ? undefined : block.measuredPH}
        name={block.title === "" ? `E${number}` : block.title}
        static
      />
      <Hazards hazards={answer?.hazards ?? []} />
    </section>
  );
}

function Fact({ name, children }: { name: string; children: ReactNode }) {
  return (
    <div>
      <dt>{name}</dt>
      <dd>{children}</dd>
    </div>
  );
}
