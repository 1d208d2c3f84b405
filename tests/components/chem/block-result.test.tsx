// @vitest-environment jsdom
import { cleanup, render, screen, within } from "@testing-library/react";
import { renderToString } from "react-dom/server";
import { afterEach, describe, expect, it } from "vitest";
import type { Warning } from "../../../chem/index.ts";
import { Answer } from "../../../components/chem/answer.tsx";
import { Balances, differenceText, TermsTable } from "../../../components/chem/balances.tsx";
import { BlockResult } from "../../../components/chem/block-result.tsx";
import { Comparison } from "../../../components/chem/comparison.tsx";
import { CompositionTable, ConstantsTable, PocketTable, SpeciesTable } from "../../../components/chem/tables.tsx";
import { MixingCautions, Warnings } from "../../../components/chem/warnings.tsx";
import { citrateBlock } from "./citrate-block.ts";

const { solved, sweeps } = citrateBlock();
const info: Warning = {
  code: "constants.from-memory",
  severity: "info",
  title: "A constant is from memory",
  text: "Citric acid, step 2.",
  remedy: "Compare it.",
};
const danger: Warning = {
  code: "corrosive",
  severity: "danger",
  title: "Corrosive",
  text: "It burns skin.",
  remedy: "Wear what the data sheet asks for.",
};

afterEach(cleanup);

describe("the balances", () => {
  it("are a table of terms with what happens, left, right, sum and difference (ACC-02, CAL-17)", () => {
    render(<TermsTable balance={solved.protonCondition.sum} pH={solved.pH} />);
    const table = screen.getByRole("table", { name: /Proton condition.*both sides at the root, pH 3\.19/ });
    expect(
      within(table)
        .getAllByRole("columnheader")
        .map((head) => head.textContent),
    ).toEqual(["Term What happens", "Left mol/L", "Right mol/L"]);
    const rows = within(table).getAllByRole("row");
    expect(rows).toHaveLength(1 + 8 + 2);
    const [, first, , , fourth] = rows;
    if (first === undefined || fourth === undefined) throw new Error("rows are missing");
    expect(within(first).getByRole("rowheader").textContent).toContain("water");
    expect(
      within(first)
        .getAllByRole("cell")
        .map((cell) => cell.textContent),
    ).toEqual(["6.43905 × 10−4", ""]);
    expect(
      within(fourth)
        .getAllByRole("cell")
        .map((cell) => cell.textContent),
    ).toEqual(["", "1.57101 × 10−11"]);
    expect(rows.at(-2)?.textContent).toBe("Sum2.22866 × 10−22.22866 × 10−2");
    expect(rows.at(-1)?.textContent).toMatch(/^Difference.*zero within rounding/);
  });

  it("say powers of ten in words (ACC-02)", () => {
    render(<TermsTable balance={solved.protonCondition.sum} pH={solved.pH} />);
    expect(screen.getByRole("cell", { name: "1.57101 times 10 to the power of minus 11" })).toBeDefined();
  });

  it("print a difference beyond its rounding error as a number (CAL-17)", () => {
    expect(differenceText({ difference: 2e-17, roundingBound: 3e-17 })).toBe(
      "zero within rounding (bound 3.0 × 10⁻¹⁷ mol/L)",
    );
    expect(differenceText({ difference: -4e-9, roundingBound: 3e-17 })).toBe("−4.00 × 10⁻⁹ mol/L");
  });

  it("each stand there in plain words too (ACC-02)", () => {
    const { container } = render(<Balances solved={solved} />);
    const all = [
      solved.protonCondition.sum,
      ...solved.protonCondition.components,
      ...solved.massBalances,
      solved.chargeBalance,
    ];
    for (const balance of all) expect(container.textContent).toContain(balance.plain);
    for (const family of solved.fractions) expect(container.textContent).toContain(family.plain);
  });

  it("fold on the screen, and not on a frozen page", () => {
    const live = renderToString(<Balances solved={solved} />);
    const frozen = renderToString(<Balances solved={solved} isStatic />);
    expect(live).toContain("<details");
    expect(frozen).not.toContain("<details");
    expect(frozen).toContain("Charge balance");
  });

  it("open for printing and fold again after it", () => {
    render(<Balances solved={solved} />);
    const folded = screen.getAllByRole("group").filter((group) => group instanceof HTMLDetailsElement);
    expect(folded.length).toBeGreaterThan(3);
    dispatchEvent(new Event("beforeprint"));
    expect(folded.every((group) => group.hasAttribute("open"))).toBe(true);
    dispatchEvent(new Event("afterprint"));
    expect(folded.some((group) => group.hasAttribute("open"))).toBe(false);
  });
});

describe("the answer", () => {
  it("shows two decimals, six on request, and no invented uncertainty (CAL-05, CAL-10)", () => {
    const { container } = render(<Answer solved={solved} held={false} stillSolving={false} />);
    expect(screen.getByText("pH 3.19")).toBeDefined();
    expect(screen.getByText("uncertainty not evaluated")).toBeDefined();
    expect(container.textContent).not.toContain("3.191178");
    screen.getByRole("button", { name: "More digits" }).click();
    return screen.findByText("3.191178").then((digits) => expect(digits).toBeDefined());
  });

  it("has model, range, ionic strength and engine beside it (CAL-06)", () => {
    render(<Answer solved={solved} held={false} stillSolving={false} />);
    for (const words of [
      "Activity model",
      "Ideal",
      "Its stated range",
      "only at vanishing ionic strength",
      "Ionic strength I",
      "0.0314",
      "Engine",
      "0.1.0",
    ]) {
      expect(screen.getByText(words)).toBeDefined();
    }
  });

  it("keeps its place while it is being solved again, and says so", () => {
    const { container } = render(<Answer solved={solved} held stillSolving={false} />);
    expect(screen.getByText("pH 3.19")).toBeDefined();
    expect(screen.getByRole("status").textContent).toMatch(/^Being solved again\./);
    expect(container.querySelector(".answer-of")?.className).toContain("is-held");
  });

  it("says why there is none, with field and reason, and no number as if it were new (CAL-16)", () => {
    const refusals = [
      { code: "amount.negative", field: "rows.r1.amount", value: "-0.1", text: "The amount is below zero." },
    ] as const;
    render(<Answer solved={solved} held={false} stillSolving={false} refusals={refusals} />);
    expect(screen.getByText(/The amount is below zero\./).textContent).toMatch(/row\s1, amount/);
    expect(screen.getByRole("status").textContent).toContain("last inputs that could be solved");
    cleanup();
    const { container } = render(
      <BlockResult
        solved={null}
        warnings={[]}
        sweeps={null}
        cautions={[]}
        held={false}
        stillSolving={false}
        refusals={refusals}
      />,
    );
    expect(container.textContent).not.toMatch(/pH \d/);
    expect(container.textContent).toContain("Not solved.");
  });
});

describe("the tables", () => {
  it("compare the reading as typed with the calculation, apart, joint uncertainty not evaluated (CAL-09, CAL-01)", () => {
    if (solved.comparison === null) throw new Error("the block has a reading");
    render(<Comparison comparison={solved.comparison} measuredText="3.100" />);
    expect(screen.getByRole("row", { name: "Measured, by the meter 3.100" })).toBeDefined();
    expect(screen.getByRole("row", { name: "Calculated, from the model 3.19" })).toBeDefined();
    expect(screen.getByRole("row", { name: "Measured − calculated −0.09" })).toBeDefined();
    expect(screen.getByRole("row", { name: "Joint expanded uncertainty not evaluated" })).toBeDefined();
  });

  it("give each constant with basis, temperature, uncertainty, source and what is doubtful (CAL-03)", () => {
    render(<ConstantsTable constants={solved.constants} />);
    const [, first, second, third] = screen
      .getAllByRole("row")
      .map((row) => row.textContent?.replaceAll("\u00a0", " "));
    expect(first).toBe(
      "citric acid, step 13.128thermodynamic, I = 025.0 °C0.010Goldberg, Kishore, Lennen, J. Phys. Chem. Ref. Data 31 (2002) 231",
    );
    expect(second).toContain("not evaluated");
    expect(second).toContain("from memory, not yet compared with its source");
    expect(third).toContain("disputed: sources differ by 0.03");
  });

  it("hold all that a pocket calculator needs (CAL-17)", () => {
    const { container } = render(<PocketTable solved={solved} />);
    for (const text of ["0.51030", "activity coefficient, charge 2", "13.9950", "4.761000"])
      expect(container.textContent).toContain(text);
  });

  it("list every species with its concentration, and what was poured in with its formula", () => {
    render(<SpeciesTable solved={solved} />);
    expect(screen.getAllByRole("row")).toHaveLength(1 + solved.species.length);
    cleanup();
    const { container } = render(<CompositionTable solved={solved} />);
    expect(container.innerHTML).toContain("<sub>2</sub>HC");
    expect(container.textContent).toContain("1.5000 × 10−2");
  });
});

describe("warnings and cautions", () => {
  it("put dangers first, with word, finding, text and remedy, and cannot be closed (CAL-08)", () => {
    const { container } = render(<Warnings warnings={[info, danger]} />);
    expect(container.textContent).toMatch(
      /^Danger: Corrosive\. It burns skin\. Wear what the data sheet asks for\.Note: A constant is from memory\./,
    );
    expect(container.querySelector("button, details")).toBeNull();
  });

  it("say that no caution on file is no statement of safety (SAF-03)", () => {
    const { container } = render(<MixingCautions cautions={[]} />);
    expect(container.textContent).toBe("No caution on file for this combination; that is no statement of safety.");
  });

  it("stand before the result, the estimate notice with it (SAF-02, SAF-05)", () => {
    const cautions = [
      {
        id: "a",
        severity: "danger",
        text: "Acid with hypochlorite gives off chlorine.",
        source: "textbook reaction",
        fromMemory: true,
      },
    ];
    const text = renderToString(
      <BlockResult
        solved={solved}
        warnings={[danger]}
        sweeps={sweeps}
        cautions={cautions}
        held={false}
        stillSolving={false}
        static
      />,
    );
    const order = [
      "gives off chlorine",
      "from memory, not yet compared",
      'class="ph"',
      "Corrosive",
      "An estimate from a stated model",
      "Proton condition",
    ];
    const places = order.map((words) => text.indexOf(words));
    expect(places.every((place) => place >= 0)).toBe(true);
    expect([...places].sort((a, b) => a - b)).toEqual(places);
  });
});

describe("the whole block", () => {
  it.each([true, false])(
    "renders on the server, static %s, with plots as SVG before any script (ACC-03)",
    (isStatic) => {
      const html = renderToString(
        <BlockResult
          solved={solved}
          warnings={[]}
          sweeps={sweeps}
          cautions={[]}
          held={false}
          stillSolving={false}
          static={isStatic}
        />,
      );
      expect(html.match(/<svg class="plot-svg"/g)).toHaveLength(4);
      expect(html).not.toContain("formula-refused");
      expect(html.includes('role="slider"')).toBe(!isStatic);
      expect(html).not.toMatch(/\bNaN\b|undefined|Infinity/);
    },
  );

  it("never calls anything safe, compliant or validated (SAF-04)", () => {
    const { container } = render(
      <BlockResult solved={solved} warnings={[]} sweeps={sweeps} cautions={[]} held={false} stillSolving={false} />,
    );
    const text = container.textContent?.replaceAll("statement of safety", "").replaceAll("safety data sheet", "") ?? "";
    expect(text).not.toMatch(/\b(safe|safety|compliant|validated|certified)\b/i);
  });
});
