// Written balances with the numbers put in at the root: enough for a second person with a pocket calculator (CAL-17), and
// readable without seeing, from the same structure (ACC-02).

import type { Balance, FractionFormulas, SolvedBlock } from "../../chem/index.ts";
import { fixed, formatNumber } from "../format.ts";
import { ScrollRegion } from "../ui/scroll-region.tsx";
import { Formula } from "./formula.tsx";
import { ZERO_WITHIN_ROUNDING } from "./number-text.ts";
import { ColumnQuantity } from "./quantity.tsx";
import { Unfold } from "./unfold.tsx";

const FIGURES = 6;

/** All balances of a solved block: the proton condition open, the rest to unfold. */
export function Balances({ solved, isStatic = false }: { solved: SolvedBlock; isStatic?: boolean }) {
  const { components, sum } = solved.protonCondition;
  return (
    <div className="balances">
      <BalanceView balance={sum} solved={solved} isOpen={isStatic} isStatic={isStatic} />
      <p className="note">{enclosureText(solved)}</p>
      {components.length < 2 ? null : (
        <Unfold
          summary={`Proton condition, one line for each of the ${components.length} things poured in`}
          isStatic={isStatic}
        >
          {components.map((balance) => (
            <LineView key={balance.title} balance={balance} />
          ))}
        </Unfold>
      )}
      {solved.massBalances.length === 0 ? null : (
        <Unfold
          summary={solved.massBalances.length === 1 ? "Mass balance" : `Mass balances (${solved.massBalances.length})`}
          isStatic={isStatic}
        >
          {solved.massBalances.map((balance) => (
            <BalanceView key={balance.title} balance={balance} solved={solved} isOpen isStatic={isStatic} />
          ))}
        </Unfold>
      )}
      <Unfold summary="Charge balance" isStatic={isStatic}>
        <BalanceView balance={solved.chargeBalance} solved={solved} isOpen isStatic={isStatic} />
      </Unfold>
      {solved.fractions.length === 0 ? null : (
        <Unfold summary="Fractions of each form and their shared denominator" isStatic={isStatic}>
          {solved.fractions.map((family) => (
            <FractionsView key={family.family} family={family} solved={solved} />
          ))}
        </Unfold>
      )}
      {solved.activityDefinitions.length === 0 ? null : (
        <Unfold summary="How activities and conditional constants are defined" isStatic={isStatic}>
          {solved.activityDefinitions.map((definition) => (
            <FormulaRow key={definition.latex} tex={definition.latex} plain={definition.plain} />
          ))}
        </Unfold>
      )}
    </div>
  );
}

/** One balance: in symbols, in numbers, and term by term. */
export function BalanceView({
  balance,
  solved,
  isOpen,
  isStatic,
}: {
  balance: Balance;
  solved: SolvedBlock;
  isOpen: boolean;
  isStatic: boolean;
}) {
  return (
    <div className="balance">
      <p className="away">{balance.plain}</p>
      <FormulaRow what={balance.title} tex={balance.latex} />
      {isOpen ? (
        <FormulaRow what="with the numbers put in, mol/L" tex={balance.latexNumbers} />
      ) : (
        <Unfold summary="With the numbers put in" isStatic={isStatic}>
          <FormulaRow what="mol/L" tex={balance.latexNumbers} />
        </Unfold>
      )}
      <TermsTable balance={balance} pH={solved.pH} />
    </div>
  );
}

/** The terms of a balance as a table: what happens, left, right, both sums, their difference. */
export function TermsTable({ balance, pH }: { balance: Balance; pH: number }) {
  const caption = `${balance.title}: both sides at the root, pH ${fixed(pH, 6)}`;
  return (
    <ScrollRegion label={caption}>
      <table className="terms">
        <caption>{caption}</caption>
        <thead>
          <tr>
            <th scope="col">
              <span className="term">
                <span>Term</span> <span>What happens</span>
              </span>
            </th>
            <th scope="col" className="r">
              Left <small>mol/L</small>
            </th>
            <th scope="col" className="r">
              Right <small>mol/L</small>
            </th>
          </tr>
        </thead>
        <tbody>
          {balance.terms.map((term, place) => (
            // biome-ignore lint/suspicious/noArrayIndexKey: two rows of the page may give equal terms; their place tells them apart
            <tr key={place}>
              <th scope="row">
                <span className="term">
                  <Formula tex={term.latex} /> <span>{term.reaction}</span>
                </span>
              </th>
              <td className="r">
                {term.side === "left" ? <ColumnQuantity value={term.value} figures={FIGURES} /> : null}
              </td>
              <td className="r">
                {term.side === "right" ? <ColumnQuantity value={term.value} figures={FIGURES} /> : null}
              </td>
            </tr>
          ))}
          <tr className="sum">
            <th scope="row">Sum</th>
            <td className="r">
              <ColumnQuantity value={balance.left} figures={FIGURES} />
            </td>
            <td className="r">
              <ColumnQuantity value={balance.right} figures={FIGURES} />
            </td>
          </tr>
          <tr className="difference">
            <th scope="row">Difference</th>
            <td className="r" colSpan={2}>
              {differenceText(balance)}
            </td>
          </tr>
        </tbody>
      </table>
    </ScrollRegion>
  );
}

/** Between which ends the root was caught. */
function enclosureText({ enclosure, pH }: SolvedBlock): string {
  const half = Math.max(enclosure.highPH - pH, pH - enclosure.lowPH);
  return `Solved by bracketing: the two sides change places within ${formatNumber(half, 2)} of pH ${fixed(pH, 6)}, beyond their rounding error.`;
}

/** A difference in words: what cannot be told from zero is not printed as a number. */
export function differenceText(balance: Pick<Balance, "difference" | "roundingBound">): string {
  return Math.abs(balance.difference) <= balance.roundingBound
    ? `${ZERO_WITHIN_ROUNDING} (bound ${formatNumber(balance.roundingBound, 2)} mol/L)`
    : `${formatNumber(balance.difference, 3)} mol/L`;
}

/** One component's line of the proton condition: no equation, for only the sum of all lines is balanced. */
function LineView({ balance }: { balance: Balance }) {
  return (
    <div className="balance">
      <p className="away">{balance.plain}</p>
      <FormulaRow what={balance.title} tex={balance.latex} />
      <FormulaRow tex={balance.latexNumbers} />
    </div>
  );
}

function FractionsView({ family, solved }: { family: FractionFormulas; solved: SolvedBlock }) {
  const species = solved.species.filter((each) => each.family === family.family);
  return (
    <div className="balance">
      <p className="away">{family.plain}</p>
      <p className="formula">
        <span className="what">Fractions of {family.name}</span>
        {family.latex.map((tex) => (
          <Formula key={tex} tex={tex} display />
        ))}
      </p>
      <p className="fraction-values">
        At the root:{" "}
        {family.values.map((value, lost) => (
          // biome-ignore lint/suspicious/noArrayIndexKey: the place is the number of protons lost
          <span key={lost} className="nowrap">
            <Formula tex={`\\alpha_{${species[lost]?.latex ?? lost}}=`} /> {formatNumber(value, FIGURES)}
            {species[lost] === undefined ? null : <span className="faint"> {species[lost].name}</span>}
          </span>
        ))}
      </p>
    </div>
  );
}

function FormulaRow({ what, tex, plain }: { what?: string; tex: string; plain?: string }) {
  return (
    <div className="formula">
      {plain === undefined ? null : <p className="away">{plain}</p>}
      {what === undefined ? null : <span className="what">{what}</span>}
      <Formula tex={tex} display />
    </div>
  );
}
