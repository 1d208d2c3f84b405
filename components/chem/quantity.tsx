// Numbers in tables and facts. In a column points stand under points; a power of ten is also said in words.

import { fixed, numberParts, scientificParts } from "../format.ts";
import { spoken } from "./number-text.ts";

/** A number where it stands alone: plain figures, or a power of ten where that is shorter. */
export function Quantity({ value, figures }: { value: number; figures: number }) {
  const { text, exponent, raised } = numberParts(value, figures);
  if (exponent === undefined) return <span className="fig">{text}</span>;
  return <PowerOfTen mantissa={text} exponent={exponent} raised={raised ?? ""} />;
}

/** A concentration in a column of concentrations: all as mantissa and power of ten, so that the points align. */
export function ColumnQuantity({ value, figures }: { value: number; figures: number }) {
  if (value === 0) return <span className="fig">0{"\u2007".repeat(figures)} </span>;
  const { mantissa, exponent } = scientificParts(value, figures);
  return <PowerOfTen mantissa={mantissa} exponent={exponent} raised={String(exponent).replace("-", "−")} inColumn />;
}

/** A number with fixed decimals. */
export function Decimals({ value, decimals }: { value: number; decimals: number }) {
  return <span className="fig">{fixed(value, decimals)}</span>;
}

function PowerOfTen(props: { mantissa: string; exponent: number; raised: string; inColumn?: boolean }) {
  return (
    <span className="fig" role="img" aria-label={spoken(props)}>
      {props.mantissa} × 10<sup className={props.inColumn ? "fig-exponent" : undefined}>{props.raised}</sup>
    </span>
  );
}
