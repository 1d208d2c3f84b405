import { renderToString } from "react-dom/server";
import { describe, expect, it } from "vitest";
import { StaticPage, type StaticPageProps } from "../../../editor/read/static-page.tsx";
import { blocksOf, type PageJson } from "../../../editor/schema/index.ts";
import { fullPage, paragraph } from "../schema/pages.ts";

const names = {
  "reagent:phosphoric-acid-85": { name: "phosphoric acid, 85\u00a0%", formula: "H3PO4" },
  "reagent:citric-acid-monohydrate": { name: "citric acid monohydrate", formula: "C6H8O7·H2O" },
};
const attachments = {
  f1: { id: "f1", name: "meter <m2>.csv", size: 3174, sha256: "ab".repeat(32), isPicture: false },
};
const render = (page: PageJson, more: Partial<StaticPageProps> = {}) =>
  renderToString(
    <StaticPage
      page={page}
      head={{ title: "First trial", doneOn: "2026-11-28", lateReason: "the tablet was charging" }}
      names={names}
      blocks={{}}
      attachments={attachments}
      {...more}
    />,
  );

describe("StaticPage", () => {
  it("renders every kind of node and mark on the server, without the editor", () => {
    const html = render(fullPage);
    for (const tag of [
      "<h2>",
      "<strong><em>",
      "<ul>",
      '<ol start="3">',
      "<blockquote>",
      "<pre><code>",
      "<hr",
      "<table>",
      "<th>",
      "<td>",
      "<sub>2</sub>",
    ]) {
      expect(html).toContain(tag);
    }
    expect(html).toContain("First trial");
    expect(html).toContain("28 November 2026");
    expect(html).toContain("the tablet was charging");
    expect(html).toContain("katex");
    expect(html).not.toContain("contenteditable");
  });

  it("names mentions from the library, and shows a file with its length and its whole SHA-256 (FIL-01)", () => {
    const html = render(fullPage);
    expect(html).toContain("phosphoric acid, 85\u00a0%");
    expect(html).toContain("meter &lt;m2&gt;.csv");
    expect(html).toContain("3.1 KiB");
    expect(html).toContain(Array.from({ length: 16 }, () => "abab").join(" "));
    expect(html).toContain("/api/attachments/f1");
    expect(html).not.toContain("<img");
  });

  it("shows a checked picture on the page (FIL-03)", () => {
    const picture = { ...attachments.f1, isPicture: true };
    expect(render(fullPage, { attachments: { f1: picture } })).toContain('<img src="/api/attachments/f1"');
  });

  it("shows a block's quantities as they were typed, with units (CAL-01)", () => {
    const html = render(fullPage);
    expect(html).toContain("E1");
    expect(html).toMatch(/<span>4<\/span><span>\.2114<\/span>/);
    expect(html).toMatch(/<span>0<\/span><span>\.100<\/span>/);
    expect(html).toContain("1.000 L");
    expect(html).toContain("3.10");
    expect(html).toContain("C-17");
  });

  it("shows refusals in words and no number for a block without an answer (CAL-16)", () => {
    const [block] = blocksOf(fullPage);
    if (block === undefined) throw new Error("the page has a block");
    const refusal = {
      code: "mass-fraction.out-of-range" as const,
      field: "rows.r1.massFraction",
      value: "",
      text: "No mass fraction yet.",
    };
    const answer = {
      key: null,
      engine: "test",
      outcome: { ok: false as const, refusals: [refusal] },
      sweeps: null,
      cautions: [],
      hazards: [{ compound: "reagent:x", name: "citric acid monohydrate", record: null }],
    };
    const html = render(fullPage, { blocks: { b1: { block, answer } } });
    expect(html).toContain("No mass fraction yet.");
    expect(html).toContain("no hazard data on file");
    expect(html).not.toMatch(/pH \d/);
  });

  it("keeps HTML and scripts as text, and a link that is none as words", () => {
    const nasty = "<script>alert(1)</script>";
    const link = { type: "text", text: "press", marks: [{ type: "link", attrs: { href: "javascript:alert(1)" } }] };
    const html = render({ type: "doc", content: [paragraph(nasty), paragraph(link)] });
    expect(html).not.toContain("<script>");
    expect(html).toContain("&lt;script&gt;");
    expect(html).not.toContain("javascript:");
  });
});
