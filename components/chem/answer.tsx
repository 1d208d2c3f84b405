// The answer: pH, and beside it everything that it must not be read without (CAL-05, CAL-06).

import type { Refusal, SolvedBlock } from "../../chem/index.ts";
import { fixed, formatNumber } from "../format.ts";
import { Says } from "../ui/says.tsx";
import { Formula } from "./formula.tsx";
import { NOT_EVALUATED } from "./number-text.ts";
import { PhDigits } from "./ph-digits.tsx";
import { Quantity } from "./quantity.tsx";

type AnswerProps = {
  solved: SolvedBlock;
  /** the value shown belongs to earlier inputs */
  held: boolean;
  /** the solver is taking longer than usual */
  stillSolving: boolean;
  /** why the present inputs have no answer */
  refusals?: readonly Refusal[];
  isStatic?: boolean;
};

export function Answer({ solved, held, stillSolving, refusals = [], isStatic = false }: AnswerProps) {
  const isHeld = held || stillSolving || refusals.length > 0;
  return (
    <div className={isHeld ? "answer-of is-held" : "answer-of"} aria-busy={held || stillSolving}>
      <div className="answer">
        <div>
          <p className="ph">pH {fixed(solved.pH, 2)}</p>
          <p className="ph-under">uncertainty {NOT_EVALUATED}</p>
          <PhDigits pH={solved.pH} isStatic={isStatic} />
        </div>
        <dl className="facts">
          <Fact name="Ionic strength I" unit="mol/L" value={solved.ionicStrength} figures={3} />
          <Fact name="Buffer capacity β" unit="mol/L" value={solved.beta} figures={3} />
          <Fact name="[H⁺]" unit="mol/L" value={solved.H} figures={4} />
          <Fact name="[OH⁻]" unit="mol/L" value={solved.OH} figures={4} />
          <div>
            <dt>Activity model</dt>
            <dd>{solved.activity.label}</dd>
          </div>
          <div>
            <dt>Its stated range</dt>
            <dd className="fact-words">{solved.activity.rangeText}</dd>
          </div>
          <div>
            <dt>Engine</dt>
            <dd>{solved.engine}</dd>
          </div>
        </dl>
      </div>
      <p className="ph-from">
        <Formula tex={phFrom(solved)} />
      </p>
      {isStatic ? null : (
        <p className="held-line" role="status">
          {heldLine(held, stillSolving, refusals.length)}
        </p>
      )}
      {refusals.length === 0 ? null : <Refusals refusals={refusals} />}
    </div>
  );
}

/** Why there is no number, each reason with the field that it belongs to. */
export function Refusals({ refusals }: { refusals: readonly Refusal[] }) {
  return (
    <div className="refusals">
      {refusals.map((refusal) => (
        <Says key={`${refusal.code} ${refusal.field}`} kind="stop" finding="Not solved.">
          {refusal.text} <FieldWords field={refusal.field} />
        </Says>
      ))}
    </div>
  );
}

/** "rows.r2.compound" as the page says it: row 2, compound. Fields that are named nowhere on the page add nothing. */
function FieldWords({ field }: { field: string }) {
  const row = /^rows\.r?(\d+)(?:\.(\w+))?/.exec(field);
  const words = row === null ? (BLOCK_FIELDS.find(([path]) => field.startsWith(path))?.[1] ?? "") : rowWords(row);
  return words === "" ? null : <span className="faint">({words})</span>;
}

const BLOCK_FIELDS = [
  ["rows", "composition"],
  ["madeUpTo", "volume"],
  ["conditions.temperature", "temperature"],
  ["conditions.activity", "activity model"],
  ["measuredPH", "measured pH"],
] as const;

function rowWords([, number = "", name = "compound"]: RegExpExecArray): string {
  const column = ROW_COLUMNS.find(([field]) => field === name)?.[1] ?? "compound";
  return `row\u00a0${number}, ${column}`;
}

const ROW_COLUMNS = [
  ["amount", "amount"],
  ["unit", "unit"],
  ["massFraction", "mass fraction"],
  ["density", "density"],
  ["lot", "lot"],
] as const;

function Fact({ name, unit, value, figures }: { name: string; unit: string; value: number; figures: number }) {
  return (
    <div>
      <dt>{name}</dt>
      <dd>
        <Quantity value={value} figures={figures} /> <small>{unit}</small>
      </dd>
    </div>
  );
}

function heldLine(held: boolean, stillSolving: boolean, refusals: number): string {
  if (refusals > 0)
    return "The figures in faint ink belong to the last inputs that could be solved, not to those that stand there now.";
  if (stillSolving) return "Still solving. The figures in faint ink belong to the inputs before.";
  return held ? "Being solved again. The figures in faint ink belong to the inputs before." : "";
}

/** pH = −lg(γ[H+]) with the numbers at the root. */
function phFrom(solved: SolvedBlock): string {
  const gamma = solved.activityCoefficients.find((each) => Math.abs(each.z) === 1)?.gamma ?? 1;
  const H = latexNumber(solved.H, 6);
  return `\\mathrm{pH}=-\\lg\\!\\left(\\gamma_{1}\\,[\\mathrm{H^{+}}]\\right)=-\\lg\\!\\left(${latexNumber(gamma, 6)}\\times ${H}\\right)`;
}

function latexNumber(value: number, figures: number): string {
  return formatNumber(value, figures)
    .replace("−", "-")
    .replace(/ × 10(.+)$/, (_, raised: string) => `\\times 10^{${lowered(raised)}}`);
}

function lowered(raised: string): string {
  return [...raised].map((character) => (character === "⁻" ? "-" : String("⁰¹²³⁴⁵⁶⁷⁸⁹".indexOf(character)))).join("");
}
