// Chemical formulas as people write them on a shelf: "Na3C6H5O7·2H2O", "HPO4^2-", "NH4+".

import { Fragment } from "react";

export type FormulaPart = { kind: "text" | "sub" | "sup"; text: string };

/** Finds which digits are counts (lowered) and which signs are charges (raised). Digits that begin a formula or follow a dot stay. */
export function formulaParts(formula: string): FormulaPart[] {
  const parts: FormulaPart[] = [];
  const tokens = formula.matchAll(/\^\{?([0-9]*[+\-−])\}?|([+\-−])$|(?<=[A-Za-z)\]])([0-9]+(?:\.[0-9]+)?)|([\s\S])/g);
  for (const [, charge, sign, count, other] of tokens) {
    const raised = charge ?? sign;
    if (raised !== undefined) parts.push({ kind: "sup", text: raised.replace("-", "−") });
    else if (count !== undefined) parts.push({ kind: "sub", text: count });
    else if (other !== undefined) {
      const last = parts.at(-1);
      const text = other === "*" ? "·" : other;
      if (last?.kind === "text") last.text += text;
      else parts.push({ kind: "text", text });
    }
  }
  return parts;
}

/** A chemical formula with lowered counts and raised charges. */
export function FormulaText({ formula }: { formula: string }) {
  return (
    <span className="formula-text">
      {formulaParts(formula).map((part, place) => {
        // biome-ignore lint/suspicious/noArrayIndexKey: parts have no identity but their place
        if (part.kind === "text") return <Fragment key={place}>{part.text}</Fragment>;
        const Tag = part.kind;
        // biome-ignore lint/suspicious/noArrayIndexKey: parts have no identity but their place
        return <Tag key={place}>{part.text}</Tag>;
      })}
    </span>
  );
}
