// KaTeX's only user. Formulas become strings, on the server and in the browser alike, with MathML beside them for
// screen readers; nothing in a formula can run, load or define anything.

import "katex/dist/katex.min.css";
import "./chem.css";
import katex from "katex";
import { useMemo } from "react";
import { formulaObjection } from "./written-formula.ts";

type FormulaProps = {
  tex: string;
  /** on a line of its own */
  display?: boolean;
};

type Setting = { html: string } | { objection: string };

/** A formula that the program made from structure. */
export function Formula({ tex, display = false }: FormulaProps) {
  const set = useMemo(() => setFormula(tex, display), [tex, display]);
  return <Shown tex={tex} display={display} set={set} />;
}

/** A formula that a person wrote: only allowed commands, else the source text stands there with the reason. */
export function WrittenFormula({ tex, display = false }: FormulaProps) {
  const set = useMemo(() => {
    const objection = formulaObjection(tex);
    return objection === null ? setFormula(tex, display) : { objection };
  }, [tex, display]);
  return <Shown tex={tex} display={display} set={set} />;
}

function Shown({ tex, display, set }: Required<FormulaProps> & { set: Setting }) {
  if ("objection" in set) {
    return (
      <span className={display ? "math display formula-refused" : "math formula-refused"}>
        <code>{tex}</code> <span className="formula-objection">{set.objection}</span>
      </span>
    );
  }
  return (
    <span
      className={display ? "math display" : "math"}
      // biome-ignore lint/security/noDangerouslySetInnerHtml: KaTeX's own markup, made with trust off; it escapes the text it is given
      dangerouslySetInnerHTML={{ __html: set.html }}
    />
  );
}

function setFormula(tex: string, displayMode: boolean): Setting {
  try {
    const html = katex.renderToString(tex, {
      displayMode,
      output: "htmlAndMathml",
      trust: false,
      strict: true,
      maxExpand: 200,
      maxSize: 12,
      throwOnError: true,
    });
    return { html };
  } catch (error) {
    // A RangeError is a formula nested too deeply for the stack; both are faults of the formula, told beside its source.
    if (error instanceof katex.ParseError)
      return { objection: error.message.replace(/^KaTeX parse error: /, "Cannot be set: ") };
    if (error instanceof RangeError) return { objection: "Cannot be set: it is nested too deeply." };
    throw error;
  }
}
