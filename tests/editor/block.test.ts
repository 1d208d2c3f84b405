import { type Command, EditorState } from "@tiptap/pm/state";
import { describe, expect, it } from "vitest";
import { addRow, moveRow, removeBlock, setBlockField, setRowFields, takeOutRow } from "../../editor/commands/block.ts";
import { insertAttachment, insertEquilibrium, insertTable } from "../../editor/commands/insert.ts";
import { pinsFor } from "../../editor/nodes/composition.tsx";
import { fieldErrors } from "../../editor/nodes/refusals.ts";
import { blocksOf, type PageJson, pageSchema, parsePage } from "../../editor/schema/index.ts";
import { bath, paragraph, row } from "./schema/pages.ts";

function stateOf(page: PageJson): EditorState {
  return EditorState.create({ doc: pageSchema.nodeFromJSON(page) });
}
function applied(page: PageJson, ...commands: Command[]) {
  let state = stateOf(page);
  const done = commands.map((command) =>
    command(state, (tr) => {
      state = state.apply(tr);
    }),
  );
  const json = parsePage(state.doc.toJSON());
  if (json === null) throw new Error("the command left no page");
  return { page: json, blocks: blocksOf(json), done, size: state.doc.childCount };
}
const page: PageJson = {
  type: "doc",
  content: [
    paragraph("before"),
    bath("b1", [row("x1", { amount: "1" }), row("x2"), row("x3")]),
    bath("b2", [row("y1")]),
  ],
};
const rowsOf = (found: ReturnType<typeof applied>) => found.blocks[0]?.rows.map((each) => each.id);

describe("commands of the equilibrium block", () => {
  it("change one field of one row, as typed (CAL-01)", () => {
    const found = applied(
      page,
      setRowFields("b1", "x2", { amount: "0.100", unit: "mmol/L" }),
      setBlockField("b2", "volume", "1.000"),
    );
    expect(found.blocks[0]?.rows[1]).toMatchObject({ amount: "0.100", unit: "mmol/L" });
    expect(found.blocks[0]?.rows[0]).toMatchObject({ amount: "1" });
    expect(found.blocks[1]).toMatchObject({ volume: "1.000" });
  });

  it("do nothing when the value stands there already, or the row is gone", () => {
    expect(
      applied(
        page,
        setRowFields("b1", "x1", { amount: "1" }),
        setRowFields("b1", "gone", { amount: "2" }),
        takeOutRow("b9", "x1"),
      ).done,
    ).toEqual([false, false, false]);
  });

  it("add, move and take out rows; the ends stay", () => {
    expect(rowsOf(applied(page, addRow("b1", "x4")))).toEqual(["x1", "x2", "x3", "x4"]);
    expect(rowsOf(applied(page, moveRow("b1", "x3", -1)))).toEqual(["x1", "x3", "x2"]);
    expect(rowsOf(applied(page, moveRow("b1", "x1", 1)))).toEqual(["x2", "x1", "x3"]);
    expect(rowsOf(applied(page, takeOutRow("b1", "x2")))).toEqual(["x1", "x3"]);
    expect(applied(page, moveRow("b1", "x1", -1), moveRow("b1", "x3", 1)).done).toEqual([false, false]);
  });

  it("refuse a 41st row and lose nothing", () => {
    const full: PageJson = {
      type: "doc",
      content: [
        bath(
          "b1",
          Array.from({ length: 40 }, (_, index) => row(`r${index}`)),
        ),
      ],
    };
    const found = applied(full, addRow("b1"));
    expect(found.done).toEqual([false]);
    expect(found.blocks[0]?.rows).toHaveLength(40);
  });

  it("take a block off the page and leave the rest", () => {
    expect(applied(page, removeBlock("b1")).blocks.map((block) => block.id)).toEqual(["b2"]);
  });
});

describe("putting in", () => {
  it("makes a block with one row and a line to go on writing", () => {
    const found = applied({ type: "doc", content: [paragraph("text")] }, insertEquilibrium);
    expect(found.page.content.map((node) => node.type)).toEqual(["paragraph", "equilibrium", "paragraph"]);
    expect(found.blocks[0]?.rows).toHaveLength(1);
  });

  it("takes the place of an empty paragraph", () => {
    const found = applied({ type: "doc", content: [{ type: "paragraph" }] }, insertTable);
    expect(found.page.content.map((node) => node.type)).toEqual(["table", "paragraph"]);
  });

  it("puts a file after the list that the caret stands in", () => {
    const list = { type: "bulletList", content: [{ type: "listItem", content: [paragraph("one")] }] };
    const found = applied({ type: "doc", content: [list] }, insertAttachment("f1"));
    expect(found.page.content.map((node) => node.type)).toEqual(["bulletList", "attachment", "paragraph"]);
  });
});

describe("fieldErrors", () => {
  const refusal = (field: string) => ({ code: "amount.negative" as const, field, value: "-1", text: `at ${field}` });
  it("finds the field of a refusal", () => {
    const errors = fieldErrors(
      [
        "rows.r2.amount",
        "rows.r1.reagent",
        "rows.r3",
        "madeUpTo",
        "conditions.temperatureC",
        "measuredPH",
        "composition",
      ].map(refusal),
    );
    expect(errors.row(1, "amount")).toBe("at rows.r2.amount");
    expect(errors.row(0, "compound")).toBe("at rows.r1.reagent");
    expect(errors.row(2, "compound")).toBe("at rows.r3");
    expect(errors.block("volume")).toBe("at madeUpTo");
    expect(errors.block("temperature")).toBe("at conditions.temperatureC");
    expect(errors.block("measuredPH")).toBe("at measuredPH");
    expect(errors.rest).toEqual(["at composition"]);
    expect(errors.row(0, "amount")).toBeUndefined();
  });
});

describe("pinsFor", () => {
  it("takes the versions that other rows have pinned, else the current ones", () => {
    const other = { ...blocksOf(page)[0]?.rows[0], constants: "citric-acid.1.v1 citric-acid.2.v1" };
    const others = [
      { id: "o", compound: "", amount: "", unit: "g" as const, massFraction: "", density: "", lot: "", ...other },
    ];
    const current = ["citric-acid.1.v2", "citric-acid.2.v1", "citric-acid.3.v4"];
    expect(pinsFor({ constants: current }, others)).toEqual([
      "citric-acid.1.v1",
      "citric-acid.2.v1",
      "citric-acid.3.v4",
    ]);
  });
});
