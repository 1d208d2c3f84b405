import { describe, expect, it } from "vitest";
import { blocksOf, deriveFrom, derivePage, EMPTY_HEAD, openState, stateOfPage } from "../../../editor/schema/index.ts";
import { bath, fullPage, paragraph, row } from "./pages.ts";

const NAMES = new Map([
  ["reagent:citric-acid-monohydrate", "citric acid monohydrate"],
  ["reagent:phosphoric-acid-85", "phosphoric acid, 85 %"],
  ["reagent:sodium-hydroxide", "sodium hydroxide"],
]);
const nameOf = (id: string) => NAMES.get(id) ?? id;
const derived = () =>
  derivePage(openState(stateOfPage(fullPage, { title: "First trial", doneOn: "2026-11-30" })), nameOf);

describe("derivePage", () => {
  it("is the same each time", () => {
    expect(derived()).toEqual(derived());
  });

  it("gives the words of the page, title first, one line a paragraph", () => {
    expect(derived().text.split("\n")).toEqual([
      "First trial",
      "Bath A",
      "Citric acid weighed, then phosphoric acid, 85 % added.",
      "into part of the water",
      "stirred",
      "as agreed",
      "t = 3",
      "time",
      "5 min",
      "method c_02",
      "a+b",
      "print-out of the meter",
      "E1 Bath A",
      "E1 Bath A: citric acid monohydrate 4.2114 g, lot C-17",
      "E1 Bath A: sodium hydroxide 0.100 mol/L",
    ]);
  });

  it("keeps quantities as typed, under a path and a label (CAL-01)", () => {
    expect(derived().typedValues).toEqual(
      expect.arrayContaining([
        { path: "head.doneOn", label: "Done on", value: "2026-11-30" },
        { path: "block.b1.volume", label: "E1 Bath A: volume", value: "1.000" },
        { path: "block.b1.measuredPH", label: "E1 Bath A: measured pH", value: "3.10" },
        { path: "block.b1.row.x1.amount", label: "E1 Bath A, citric acid monohydrate: amount", value: "4.2114" },
        { path: "block.b1.row.x2.amount", label: "E1 Bath A, sodium hydroxide: amount", value: "0.100" },
      ]),
    );
    expect(derived().typedValues.some((value) => value.value === "")).toBe(false);
  });

  it("names each compound with its role and the line in which it stands", () => {
    expect(derived().mentions).toEqual([
      {
        compound: "reagent:phosphoric-acid-85",
        line: "Citric acid weighed, then phosphoric acid, 85 % added.",
        role: "mentioned",
        position: 0,
      },
      {
        compound: "reagent:citric-acid-monohydrate",
        line: "E1 Bath A: citric acid monohydrate 4.2114 g",
        role: "component",
        position: 1,
      },
      {
        compound: "reagent:sodium-hydroxide",
        line: "E1 Bath A: sodium hydroxide 0.100 mol/L",
        role: "component",
        position: 2,
      },
    ]);
  });

  it("cuts a long line around the mention", () => {
    const long = paragraph(
      "a".repeat(500),
      { type: "mention", attrs: { compound: "reagent:sodium-hydroxide" } },
      "b".repeat(500),
    );
    const { mentions } = deriveFrom({ type: "doc", content: [long] }, EMPTY_HEAD, nameOf);
    expect(mentions[0]?.line).toBe(`…${"a".repeat(120)}sodium hydroxide${"b".repeat(120)}…`);
  });

  it("lists files once and blocks in the order of the page, also inside other parts", () => {
    const page = {
      type: "doc" as const,
      content: [
        { type: "blockquote", content: [bath("in", [])] },
        bath("after", []),
        { type: "attachment", attrs: { attachment: "f1", caption: "" } },
        { type: "attachment", attrs: { attachment: "f1", caption: "" } },
      ],
    };
    const result = derivePage(openState(stateOfPage(page)), nameOf);
    expect(result.blocks.map((block) => block.id)).toEqual(["in", "after"]);
    expect(result.attachments).toEqual(["f1"]);
  });

  it("tells blocks and rows apart whose id stands twice", () => {
    const page = openState(stateOfPage({ type: "doc", content: [bath("b", [row("x")]), bath("b", [row("x")])] }));
    const result = derivePage(page, nameOf);
    expect(result.blocks.map((block) => [block.id, block.rows[0]?.id])).toEqual([
      ["b", "x"],
      ["b~2", "x~2"],
    ]);
    expect(new Set(result.typedValues.map((value) => value.path)).size).toBe(result.typedValues.length);
    expect(blocksOf(result.page)).toEqual(result.blocks);
  });
});
