// Pages for the tests of the schema: made of invented baths.
import type { PageJson, PageNode } from "../../../editor/schema/index.ts";

export function row(id: string, attrs: Record<string, string> = {}): PageNode {
  return { type: "compositionRow", attrs: { id, ...attrs } };
}

export function bath(id: string, rows: PageNode[], attrs: Record<string, string> = {}): PageNode {
  return { type: "equilibrium", attrs: { id, ...attrs }, content: rows };
}

export function paragraph(...content: (PageNode | string)[]): PageNode {
  return {
    type: "paragraph",
    content: content.map((each) => (typeof each === "string" ? { type: "text", text: each } : each)),
  };
}

export const fullPage: PageJson = {
  type: "doc",
  content: [
    { type: "heading", attrs: { level: 2 }, content: [{ type: "text", text: "Bath A" }] },
    paragraph(
      "Citric acid weighed, ",
      { type: "text", text: "then", marks: [{ type: "bold" }, { type: "italic" }] },
      " ",
      {
        type: "mention",
        attrs: { compound: "reagent:phosphoric-acid-85" },
      },
      " added.",
    ),
    { type: "bulletList", content: [{ type: "listItem", content: [paragraph("into part of the water")] }] },
    { type: "orderedList", attrs: { start: 3 }, content: [{ type: "listItem", content: [paragraph("stirred")] }] },
    { type: "blockquote", content: [paragraph("as agreed")] },
    { type: "codeBlock", content: [{ type: "text", text: "t = 3" }] },
    { type: "horizontalRule" },
    {
      type: "table",
      content: [
        { type: "tableRow", content: [{ type: "tableHeader", content: [paragraph("time")] }] },
        { type: "tableRow", content: [{ type: "tableCell", content: [paragraph("5 min")] }] },
      ],
    },
    paragraph(
      { type: "text", text: "method", marks: [{ type: "link", attrs: { href: "https://example.org/method" } }] },
      { type: "hardBreak" },
      { type: "formula", attrs: { tex: "c_0" } },
      { type: "text", text: "2", marks: [{ type: "subscript" }] },
    ),
    { type: "formulaBlock", attrs: { tex: "a+b" } },
    { type: "attachment", attrs: { attachment: "f1", caption: "print-out of the meter" } },
    bath(
      "b1",
      [
        row("x1", {
          compound: "reagent:citric-acid-monohydrate",
          constants: "citric-acid.1.v1 citric-acid.2.v1 citric-acid.3.v1",
          amount: "4.2114",
          unit: "g",
          massFraction: "0.995",
          lot: "C-17",
        }),
        row("x2", { compound: "reagent:sodium-hydroxide", amount: "0.100", unit: "mol/L" }),
      ],
      { title: "Bath A", volume: "1.000", measuredPH: "3.10" },
    ),
  ],
};
