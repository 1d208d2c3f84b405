// What a pocket calculator needs, what is in the water, and where each constant comes from.

import type { ReactNode } from "react";
import type { ConstantUsed, SolvedBlock } from "../../chem/index.ts";
import { fixed, formatNumber, showDecimal } from "../format.ts";
import { ScrollRegion } from "../ui/scroll-region.tsx";
import { Formula } from "./formula.tsx";
import { FormulaText } from "./formula-text.tsx";
import { NOT_EVALUATED } from "./number-text.ts";
import { ColumnQuantity } from "./quantity.tsx";

/** A, γ of each charge, pKw and the conditional constants at the solution's ionic strength. */
export function PocketTable({ solved }: { solved: SolvedBlock }) {
  const rows = [
    {
      key: "A",
      name: <Formula tex="A" />,
      what: "Debye–Hückel factor, (L/mol)½",
      tabulated: null,
      used: fixed(solved.activity.A, 5),
    },
    ...solved.activityCoefficients.map(({ z, gamma }) => ({
      key: `γ${z}`,
      name: <Formula tex={`\\gamma_{${Math.abs(z)}}`} />,
      what: z === 0 ? "activity coefficient, uncharged" : `activity coefficient, charge ${Math.abs(z)}`,
      tabulated: null,
      used: fixed(gamma, 6),
    })),
    {
      key: "pKw",
      name: <Formula tex="\mathrm{p}K_\mathrm{w}" />,
      what: `water; ${solved.pKw.source}`,
      tabulated: fixed(solved.pKw.thermodynamic, 4),
      used: fixed(solved.pKw.conditional, 6),
    },
    ...solved.constants.map((constant) => ({
      key: constant.id,
      name: <Formula tex={`\\mathrm{p}K_{\\mathrm{a}${constant.step}}`} />,
      what: `${constant.familyName}, step\u00a0${constant.step}`,
      tabulated: showDecimal(constant.pKa),
      used: fixed(constant.conditional, 6),
    })),
  ];
  return (
    <TableRegion
      caption={`At the solution’s ionic strength, I\u00a0=\u00a0${formatNumber(solved.ionicStrength, 4)} mol/L`}
    >
      <thead>
        <tr>
          <th scope="col">Quantity</th>
          <th scope="col">Of what</th>
          <th scope="col" className="r">
            Tabulated
          </th>
          <th scope="col" className="r">
            In this solution
          </th>
        </tr>
      </thead>
      <tbody>
        {rows.map((row) => (
          <tr key={row.key}>
            <td className="symbol">{row.name}</td>
            <th scope="row">{row.what}</th>
            <td className="r">{row.tabulated === null ? null : <AtPoint text={row.tabulated} after={5} />}</td>
            <td className="r">
              <AtPoint text={row.used} after={7} />
            </td>
          </tr>
        ))}
      </tbody>
    </TableRegion>
  );
}

/** Every species at the root. */
export function SpeciesTable({ solved }: { solved: SolvedBlock }) {
  return (
    <TableRegion caption={`Species at the root, pH ${fixed(solved.pH, 2)}`}>
      <thead>
        <tr>
          <th scope="col">Species</th>
          <th scope="col">Name</th>
          <th scope="col" className="r">
            Concentration <small>mol/L</small>
          </th>
          <th scope="col" className="r">
            Fraction of its family
          </th>
        </tr>
      </thead>
      <tbody>
        {solved.species.map((species) => (
          <tr key={`${species.family} ${species.name}`}>
            <td className="symbol">
              <Formula tex={species.latex} />
            </td>
            <th scope="row">{species.name}</th>
            <td className="r">
              <ColumnQuantity value={species.concentration} figures={5} />
            </td>
            <td className="r">
              {species.fraction === null ? null : <ColumnQuantity value={species.fraction} figures={5} />}
            </td>
          </tr>
        ))}
      </tbody>
    </TableRegion>
  );
}

/** Every constant as used, with basis, temperature, uncertainty and source (CAL-03). */
export function ConstantsTable({ constants }: { constants: readonly ConstantUsed[] }) {
  return (
    <TableRegion caption="Constants used, as their sources give them" isWide>
      <thead>
        <tr>
          <th scope="col">Step</th>
          <th scope="col" className="r">
            <span className="nowrap">
              p<i>K</i>
              <sub>a</sub>
            </span>
          </th>
          <th scope="col">Basis</th>
          <th scope="col" className="r">
            Temperature
          </th>
          <th scope="col" className="r">
            Standard uncertainty
          </th>
          <th scope="col">Source</th>
        </tr>
      </thead>
      <tbody>
        {constants.map((constant) => (
          <tr key={constant.id}>
            <th scope="row">
              {constant.familyName}, step{"\u00a0"}
              {constant.step}
            </th>
            <td className="r">
              <AtPoint text={showDecimal(constant.pKa)} after={5} />
            </td>
            <td>{basisText(constant)}</td>
            <td className="r mono">{showDecimal(constant.temperatureC)} °C</td>
            <td className="r">
              {constant.uncertainty === null ? (
                NOT_EVALUATED
              ) : (
                <span className="fig">{showDecimal(constant.uncertainty)}</span>
              )}
            </td>
            <td>
              {constant.source === "" ? "no source" : constant.source}
              {constant.fromMemory ? (
                <span className="constant-mark">from memory, not yet compared with its source</span>
              ) : null}
              {constant.nominal ? (
                <span className="constant-mark">a strong step; the number only stands for “complete”</span>
              ) : null}
              {constant.disputed === null ? null : <span className="constant-mark">disputed: {constant.disputed}</span>}
            </td>
          </tr>
        ))}
      </tbody>
    </TableRegion>
  );
}

/** What was poured in, as amount concentrations. */
export function CompositionTable({ solved }: { solved: SolvedBlock }) {
  return (
    <TableRegion caption="Poured in, as amount concentrations in the final volume">
      <thead>
        <tr>
          <th scope="col">Poured in</th>
          <th scope="col">Formula</th>
          <th scope="col" className="r">
            Concentration <small>mol/L</small>
          </th>
        </tr>
      </thead>
      <tbody>
        {solved.composition.map((row) => (
          <tr key={row.row}>
            <th scope="row">{row.name}</th>
            <td>
              <FormulaText formula={row.formula} />
            </td>
            <td className="r">
              <ColumnQuantity value={row.concentration} figures={5} />
            </td>
          </tr>
        ))}
      </tbody>
    </TableRegion>
  );
}

function basisText(constant: ConstantUsed): string {
  if (constant.basis === "thermodynamic") return "thermodynamic, I\u00a0=\u00a00";
  return `conditional, I\u00a0=\u00a0${constant.ionicStrength === null ? "not stated" : `${showDecimal(constant.ionicStrength)}\u00a0mol/L`}`;
}

/** A number in a right-aligned column that stands on its point; it stays one piece of text, to be read and copied whole. */
function AtPoint({ text, after }: { text: string; after: number }) {
  const point = text.indexOf(".");
  const missing = after - (point < 0 ? 0 : text.length - point);
  return (
    <span className="fig" style={{ paddingInlineEnd: `${Math.max(0, missing)}ch` }}>
      {text}
    </span>
  );
}

function TableRegion({
  caption,
  isWide = false,
  children,
}: {
  caption: string;
  isWide?: boolean;
  children: ReactNode;
}) {
  return (
    <ScrollRegion label={caption}>
      <table className={isWide ? "columns wide" : "columns"}>
        <caption>{caption}</caption>
        {children}
      </table>
    </ScrollRegion>
  );
}
