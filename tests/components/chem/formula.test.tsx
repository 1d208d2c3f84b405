import { renderToString } from "react-dom/server";
import { describe, expect, it } from "vitest";
import { Formula, WrittenFormula } from "../../../components/chem/formula.tsx";
import { FormulaText, formulaParts } from "../../../components/chem/formula-text.tsx";
import { formulaObjection } from "../../../components/chem/written-formula.ts";
import { citrateBlock } from "./citrate-block.ts";

const HOSTILE = [
  "\\href{javascript:alert(1)}{x}",
  "\\url{https://example.org}",
  "\\includegraphics{x.png}",
  "\\htmlClass{a}{x}",
  "\\htmlId{a}{x}",
  "\\htmlStyle{position:fixed}{x}",
  "\\htmlData{a=b}{x}",
  "\\def\\a{\\a\\a}\\a",
  "\\newcommand{\\a}{x}\\a",
  "\\renewcommand{\\frac}{x}",
  "\\let\\a\\b",
  "\\gdef\\a{x}",
  "\\global\\long\\def\\a{x}",
  "\\char`\\<",
  "\\csname href\\endcsname",
  "\\@ifnextchar x",
  "\\verb|x|",
  "\\color{red}x",
  "\\hspace{100000em}",
  "\\rule{9999em}{9999em}",
  "\\begin{CD}x\\end{CD}",
  "x^^41",
  "\\",
];

describe("a formula that a person wrote", () => {
  it.each(HOSTILE)("is shown as source with the reason, and not set: %s (ADM-08)", (tex) => {
    expect(formulaObjection(tex)).toMatch(/not taken/);
    const html = renderToString(<WrittenFormula tex={tex} />);
    expect(html).toContain("formula-refused");
    expect(html).toContain("not taken in a formula");
    expect(html).not.toContain('class="katex');
    expect(html).not.toMatch(/<a |<img|<script|style="position/);
  });

  it("escapes markup in what it shows and in what it sets (ADM-08)", () => {
    for (const tex of ["<script>alert(1)</script>", "\\text{<img src=x onerror=alert(1)>}", "\\foo<b onclick=x>"]) {
      const html = renderToString(<WrittenFormula tex={tex} display />);
      expect(html).not.toMatch(/<script|<img|<b /);
    }
  });

  it("refuses what is nested too deeply or too long, without a stack overflow (ADM-08)", () => {
    const deep = `${"{".repeat(5000)}x${"}".repeat(5000)}`;
    expect(formulaObjection(deep)).toMatch(/longer than 2000/);
    expect(formulaObjection(`${"\\sqrt{".repeat(40)}x${"}".repeat(40)}`)).toMatch(/more than 24 deep/);
    expect(renderToString(<WrittenFormula tex={deep} />)).toContain("formula-refused");
  });

  it("shows the source and the message of one that cannot be set", () => {
    const html = renderToString(<WrittenFormula tex={"\\frac{a}{"} />);
    expect(html).toContain("\\frac{a}{");
    expect(html).toContain("Cannot be set");
  });

  it("sets what the trade writes, with MathML beside it", () => {
    for (const tex of [
      "K_\\mathrm{a}=\\frac{a(\\mathrm{H^+})\\,a(\\mathrm{A^-})}{a(\\mathrm{HA})}",
      "\\begin{aligned}a&=b\\\\c&=d\\end{aligned}",
      "\\mathrm{HA}\\rightleftharpoons\\mathrm{H^+}+\\mathrm{A^-}",
    ]) {
      const html = renderToString(<WrittenFormula tex={tex} display />);
      expect(html).not.toContain("formula-refused");
      expect(html).toContain("<math");
    }
  });
});

describe("a formula that the program made", () => {
  it("is set strictly: every formula of a solved block, without an error", () => {
    const { solved } = citrateBlock();
    const balances = [
      solved.protonCondition.sum,
      ...solved.protonCondition.components,
      ...solved.massBalances,
      solved.chargeBalance,
    ];
    const formulas = [
      ...balances.flatMap((balance) => [
        balance.latex,
        balance.latexNumbers,
        ...balance.terms.map((term) => term.latex),
      ]),
      ...solved.fractions.flatMap((family) => family.latex),
      ...solved.species.map((species) => species.latex),
    ];
    expect(formulas.length).toBeGreaterThan(30);
    for (const tex of formulas) expect(renderToString(<Formula tex={tex} />)).not.toContain("formula-refused");
  });
});

describe("a chemical formula", () => {
  it.each([
    ["Na3C6H5O7·2H2O", "Na<sub>3</sub>C<sub>6</sub>H<sub>5</sub>O<sub>7</sub>·2H<sub>2</sub>O"],
    ["Na2HC6H5O7·1.5H2O", "Na<sub>2</sub>HC<sub>6</sub>H<sub>5</sub>O<sub>7</sub>·1.5H<sub>2</sub>O"],
    ["(NH4)2SO4", "(NH<sub>4</sub>)<sub>2</sub>SO<sub>4</sub>"],
    ["HPO4^2-", "HPO<sub>4</sub><sup>2−</sup>"],
    ["NH4+", "NH<sub>4</sub><sup>+</sup>"],
    ["H2O", "H<sub>2</sub>O"],
  ])("lowers the counts and raises the charge of %s", (formula, html) => {
    expect(renderToString(<FormulaText formula={formula} />).replaceAll("<!-- -->", "")).toBe(
      `<span class="formula-text">${html}</span>`,
    );
  });

  it("loses no character", () => {
    for (const formula of ["K4[Fe(CN)6]·3H2O", "C8H5KO4", "x", ""]) {
      expect(
        formulaParts(formula)
          .map((part) => part.text)
          .join(""),
      ).toBe(formula);
    }
  });
});
