import type { Comparison as Compared, Decimal } from "../../chem/index.ts";
import { fixed, showDecimal } from "../format.ts";
import { Mark } from "../ui/mark.tsx";
import { NOT_EVALUATED } from "./number-text.ts";

/** Measured beside calculated: separate rows, words and marks; neither fills the other (CAL-09). */
export function Comparison({ comparison, measuredText }: { comparison: Compared; measuredText?: Decimal }) {
  const { measured, calculated, difference, jointUncertainty } = comparison;
  return (
    <table className="comparison">
      <caption className="away">Measured and calculated pH</caption>
      <thead>
        <tr>
          <th scope="col">pH</th>
          <th scope="col" className="r">
            Value
          </th>
        </tr>
      </thead>
      <tbody>
        <tr>
          <th scope="row">
            <Mark name="away" /> Measured, by the meter
          </th>
          <td className="r mono">{measuredText === undefined ? shortest(measured) : showDecimal(measuredText)}</td>
        </tr>
        <tr>
          <th scope="row">
            <Mark name="here" /> Calculated, from the model
          </th>
          <td className="r mono">{fixed(calculated, 2)}</td>
        </tr>
        <tr className="sum">
          <th scope="row">Measured − calculated</th>
          <td className="r mono">{fixed(difference, 2)}</td>
        </tr>
        <tr>
          <th scope="row">Joint expanded uncertainty</th>
          <td className="r mono">{jointUncertainty === null ? NOT_EVALUATED : fixed(jointUncertainty, 2)}</td>
        </tr>
      </tbody>
    </table>
  );
}

/** The reading with its own digits, and never fewer than two decimals. */
function shortest(value: number): string {
  const decimals = String(value).split(".")[1]?.length ?? 0;
  return fixed(value, Math.max(2, decimals));
}
