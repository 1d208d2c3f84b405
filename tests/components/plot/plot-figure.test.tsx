// @vitest-environment jsdom
import { cleanup, fireEvent, render, screen } from "@testing-library/react";
import { renderToString } from "react-dom/server";
import { afterEach, describe, expect, it } from "vitest";
import { fractionsPlots, residualPlots } from "../../../components/plot/block-plots.ts";
import { PlotFigure } from "../../../components/plot/plot-figure.tsx";
import { PlotStatic } from "../../../components/plot/plot-static.tsx";
import { SweepDownload } from "../../../components/plot/sweep-download.tsx";
import { citrateBlock } from "../chem/citrate-block.ts";

const { solved, sweeps } = citrateBlock();
const { coarse } = residualPlots(sweeps, solved);
const [fractions] = fractionsPlots(sweeps, solved);
if (fractions === undefined) throw new Error("one family");

afterEach(cleanup);

describe("a plot that is read by keyboard", () => {
  it("begins at the root and moves by arrow, page, Home and End, saying each value (ACC-01, ACC-03)", () => {
    render(<PlotFigure model={fractions} />);
    const plot = screen.getByRole("slider", { name: "Read values: Fractions of citric acid" });
    const said = () => screen.getByText(/^At pH|^Point at/).textContent;
    expect(said()).toMatch(/^Point at the plot/);
    fireEvent.focus(plot);
    expect(said()).toMatch(/^At pH 3\.191 \(the root\): H₃Cit 0\.4571, H₂Cit⁻ 0\.5287/);
    fireEvent.keyDown(plot, { key: "ArrowRight" });
    expect(plot.getAttribute("aria-valuetext")).toBe("pH 3.200");
    fireEvent.keyDown(plot, { key: "ArrowLeft" });
    fireEvent.keyDown(plot, { key: "ArrowLeft" });
    expect(plot.getAttribute("aria-valuetext")).toBe("pH 3.100");
    fireEvent.keyDown(plot, { key: "PageUp" });
    expect(plot.getAttribute("aria-valuetext")).toBe("pH 3.900");
    fireEvent.keyDown(plot, { key: "Home" });
    expect(said()).toMatch(/^At pH 0\.000:/);
    fireEvent.keyDown(plot, { key: "PageDown" });
    expect(plot.getAttribute("aria-valuetext")).toBe("pH 0.000");
    fireEvent.keyDown(plot, { key: "End" });
    fireEvent.keyDown(plot, { key: "ArrowUp" });
    expect(plot.getAttribute("aria-valuetext")).toBe("pH 14.000");
    expect(plot.getAttribute("aria-valuenow")).toBe(String(fractions.points.at(-1)));
  });

  it("announces politely, and leaves every other key to the page (ACC-01)", () => {
    const { container } = render(<PlotFigure model={fractions} />);
    const plot = screen.getByRole("slider");
    expect(container.querySelector('[aria-live="polite"]')?.className).toBe("plot-read");
    expect(fireEvent.keyDown(plot, { key: "Tab" })).toBe(true);
    expect(fireEvent.keyDown(plot, { key: "ArrowRight" })).toBe(false);
  });

  it("is described by the sentence in its caption (ACC-03)", () => {
    const { container } = render(<PlotFigure model={coarse} />);
    const id = screen.getByRole("slider").getAttribute("aria-describedby") ?? "";
    expect(document.getElementById(id)?.textContent).toBe(coarse.sentence);
    expect(container.querySelector("figcaption")?.textContent).toContain("Drawn for reading; solved by bracketing.");
  });
});

describe("a plot that is read by pointer", () => {
  it("takes the point under the pointer, by touch as well", () => {
    render(<PlotFigure model={fractions} />);
    const plot = screen.getByRole("slider");
    // Unmeasured, the frame runs from 52 to 416 px: pH 7 lies at its middle.
    fireEvent.pointerDown(plot, { clientX: 234, pointerType: "touch" });
    expect(plot.getAttribute("aria-valuetext")).toBe("pH 7.000");
  });
});

describe("a plot without script", () => {
  const html = renderToString(<PlotStatic model={fractions} />);

  it("is an SVG with the sentence as its name, axes, names at the curves and the root's mark (ACC-03)", () => {
    const page = new DOMParser().parseFromString(html, "text/html");
    const svg = page.querySelector("svg");
    expect(svg?.getAttribute("aria-label")).toBe(fractions.sentence);
    expect(page.querySelectorAll(".plot-curve")).toHaveLength(4);
    expect([...page.querySelectorAll(".plot-label")].map((label) => label.textContent)).toEqual([
      "H₃Cit",
      "H₂Cit⁻",
      "HCit²⁻",
      "Cit³⁻",
    ]);
    expect([...page.querySelectorAll(".plot-title")].map((title) => title.textContent)).toEqual(["fraction α", "pH"]);
    expect(page.querySelectorAll(".plot-root")).toHaveLength(1);
    expect(page.querySelectorAll(".plot-ring").length).toBeGreaterThan(1);
    expect(page.querySelectorAll(".plot-tick")).toHaveLength(8 + 6);
    expect(html).not.toMatch(/NaN|Infinity/);
  });

  it("has its values in a table behind it (ACC-03)", () => {
    const page = new DOMParser().parseFromString(html, "text/html");
    expect(page.querySelector("details > summary")?.textContent).toBe("Values as a table");
    expect([...page.querySelectorAll("thead th")].map((head) => head.textContent)).toEqual([
      "pH",
      "H₃Cit",
      "H₂Cit⁻",
      "HCit²⁻",
      "Cit³⁻",
    ]);
    expect(page.querySelector(".plot-root-row th")?.textContent).toBe("root 3.191");
  });
});

describe("the download", () => {
  it("offers both sweeps by name", () => {
    render(<SweepDownload sweeps={sweeps} name="DSB-0042-E1" />);
    expect(screen.getAllByRole("button").map((button) => button.textContent)).toEqual([
      "Coarse sweep as CSV",
      "Refined sweep as CSV",
    ]);
  });
});
