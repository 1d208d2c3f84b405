import fc from "fast-check";
import { describe, expect, it } from "vitest";
import * as Y from "yjs";
import {
  copyState,
  isLinkAllowed,
  openState,
  PAGE_LIMITS,
  type PageNode,
  pageSchema,
  parsePage,
  seedPage,
  stateOfPage,
  validatePage,
} from "../../../editor/schema/index.ts";
import { bath, fullPage, paragraph, row } from "./pages.ts";

const pageOf = (...content: PageNode[]) => openState(stateOfPage({ type: "doc", content }));
/** A document as a forger would write it: straight into Yjs. */
function forged(write: (page: Y.XmlFragment, doc: Y.Doc) => void): Y.Doc {
  const doc = openState(seedPage());
  doc.transact(() => write(doc.getXmlFragment("page"), doc));
  const other = new Y.Doc({ gc: false });
  Y.applyUpdate(other, Y.encodeStateAsUpdate(doc));
  return other;
}
/** Written to the same document by a browser that takes the root types for something else. */
function smuggled(write: (doc: Y.Doc) => void): Y.Doc {
  const other = new Y.Doc({ gc: false });
  write(other);
  const doc = new Y.Doc({ gc: false });
  Y.applyUpdate(doc, seedPage());
  Y.applyUpdate(doc, Y.encodeStateAsUpdate(other));
  return doc;
}
function element(name: string, attributes: Record<string, unknown> = {}, children: (Y.XmlElement | Y.XmlText)[] = []) {
  const made = new Y.XmlElement(name);
  for (const [key, value] of Object.entries(attributes)) Reflect.apply(made.setAttribute, made, [key, value]);
  made.insert(0, children);
  return made;
}
const reasonOf = (doc: Y.Doc) => {
  const found = validatePage(doc);
  return found.ok ? null : found.reason;
};

describe("validatePage", () => {
  it("reads a page with every kind of node and mark, and changes nothing", () => {
    const doc = openState(stateOfPage(fullPage, { title: "First trial", doneOn: "2026-11-30" }));
    const before = Y.encodeStateAsUpdate(doc);
    const found = validatePage(doc);
    expect(Y.encodeStateAsUpdate(doc)).toEqual(before);
    expect(found).toMatchObject({
      ok: true,
      head: { title: "First trial", doneOn: "2026-11-30", lateReason: "" },
      duplicates: [],
    });
    if (!found.ok) return;
    expect(pageSchema.nodeFromJSON(found.page).textContent).toBe(pageSchema.nodeFromJSON(fullPage).textContent);
    expect(parsePage(JSON.parse(JSON.stringify(found.page)))).toEqual(found.page);
  });

  it("takes the server's seed and a document that nobody has written yet", () => {
    expect(validatePage(openState(seedPage()))).toMatchObject({
      ok: true,
      page: { content: [{ type: "paragraph" }] },
    });
    expect(validatePage(new Y.Doc())).toMatchObject({ ok: true, page: { content: [] } });
  });

  it("keeps HTML and scripts as the text that they are", () => {
    const nasty = '<script>alert(1)</script><img src=x onerror="alert(2)">=cmd()';
    const doc = openState(stateOfPage({ type: "doc", content: [paragraph(nasty)] }, { title: nasty }));
    expect(validatePage(doc)).toMatchObject({
      ok: true,
      head: { title: nasty },
      page: { content: [{ content: [{ type: "text", text: nasty }] }] },
    });
  });

  it("lets a 41st row stand on the page, for the solver to refuse", () => {
    const rows = Array.from({ length: 41 }, (_, index) => row(`r${index}`));
    expect(reasonOf(pageOf(bath("b1", rows)))).toBeNull();
  });

  it("reports ids that stand twice", () => {
    expect(validatePage(pageOf(bath("b1", [row("x")]), bath("b1", [row("x")])))).toMatchObject({
      ok: true,
      duplicates: ["b1", "x"],
    });
  });

  const hostile: [string, Y.Doc][] = [
    ["an unknown element", forged((page) => page.insert(0, [element("iframe")]))],
    ["an element named like a property of objects", forged((page) => page.insert(0, [element("constructor")]))],
    ["an unknown attribute", forged((page) => page.insert(0, [element("paragraph", { onclick: "alert(1)" })]))],
    ["a heading of level 7", forged((page) => page.insert(0, [element("heading", { level: 7 })]))],
    ["an attribute that is an object", forged((page) => page.insert(0, [element("formulaBlock", { tex: { a: 1 } })]))],
    [
      "an attribute that is a Yjs type",
      forged((page) => page.insert(0, [element("formulaBlock", { tex: new Y.Map() })])),
    ],
    [
      "a formula beyond its length",
      forged((page) => page.insert(0, [element("formulaBlock", { tex: "x".repeat(5000) })])),
    ],
    [
      "a compound that is no id",
      forged((page) => page.insert(0, [element("paragraph", {}, [element("mention", { compound: "<b>" })])])),
    ],
    [
      "an unknown unit",
      forged((page) =>
        page.insert(0, [element("equilibrium", { id: "b" }, [element("compositionRow", { id: "r", unit: "cups" })])]),
      ),
    ],
    ["a result among the inputs", forged((page) => page.insert(0, [element("equilibrium", { id: "b", pH: "7" })]))],
    [
      "a paragraph inside a block's rows",
      forged((page) => page.insert(0, [element("equilibrium", { id: "b" }, [element("paragraph")])])),
    ],
    ["running text outside a paragraph", forged((page) => page.insert(0, [new Y.XmlText("bare")]))],
    [
      "merged cells",
      forged((page) =>
        page.insert(0, [element("table", {}, [element("tableRow", {}, [element("tableCell", { colspan: 3 })])])]),
      ),
    ],
    ["a second document beside the page", forged((_, doc) => doc.getText("other").insert(0, "x"))],
    ["an attribute on the page itself", smuggled((doc) => doc.getMap("page").set("a", "b"))],
    ["a title that is a number", forged((_, doc) => doc.getMap("head").set("title", 7))],
    ["a head that is no map", smuggled((doc) => doc.getArray("head").insert(0, ["x"]))],
    ["a title that is too long", forged((_, doc) => doc.getMap("head").set("title", "x".repeat(301)))],
    ["a day that does not exist", forged((_, doc) => doc.getMap("head").set("doneOn", "2026-02-30"))],
    ["an unknown field above the page", forged((_, doc) => doc.getMap("head").set("signed", "yes"))],
    ["plain values in place of nodes", smuggled((doc) => doc.getArray("page").insert(0, [{ type: "doc" }]))],
    [
      "a javascript: link",
      forged((page) => {
        const text = new Y.XmlText();
        page.insert(0, [element("paragraph", {}, [text])]);
        text.insert(0, "click", { link: { href: "javascript:alert(1)" } });
      }),
    ],
    [
      "a link with another target",
      forged((page) => {
        const text = new Y.XmlText();
        page.insert(0, [element("paragraph", {}, [text])]);
        text.insert(0, "click", { link: { href: "https://example.org", target: "_top" } });
      }),
    ],
    [
      "an unknown mark",
      forged((page) => {
        const text = new Y.XmlText();
        page.insert(0, [element("paragraph", {}, [text])]);
        text.insert(0, "click", { style: { color: "red" } });
      }),
    ],
    [
      "something embedded in text",
      forged((page) => {
        const text = new Y.XmlText();
        page.insert(0, [element("paragraph", {}, [text])]);
        text.insertEmbed(0, { image: "x" });
      }),
    ],
    [
      "U+0000, which the database cannot keep",
      forged((page) => page.insert(0, [element("paragraph", {}, [new Y.XmlText("a\u0000b")])])),
    ],
    [
      "nesting without end",
      forged((page) => {
        let inner = element("blockquote");
        for (let depth = 0; depth < 40; depth++) inner = element("blockquote", {}, [inner]);
        page.insert(0, [inner]);
      }),
    ],
    [
      "more text than a page holds",
      forged((page) =>
        page.insert(0, [element("paragraph", {}, [new Y.XmlText("x".repeat(PAGE_LIMITS.characters + 1))])]),
      ),
    ],
    [
      "a block with 201 rows",
      forged((page) =>
        page.insert(0, [
          element(
            "equilibrium",
            { id: "b" },
            Array.from({ length: 201 }, () => element("compositionRow")),
          ),
        ]),
      ),
    ],
  ];
  it.each(hostile)("refuses %s", (_, doc) => {
    expect(reasonOf(doc)).toEqual(expect.any(String));
  });

  it("refuses an update whose predecessor has not arrived", () => {
    const doc = openState(seedPage());
    const updates: Uint8Array[] = [];
    doc.on("update", (update: Uint8Array) => updates.push(update));
    doc.getMap("head").set("title", "one");
    doc.getMap("head").set("title", "two");
    const other = openState(seedPage());
    const [, second] = updates;
    if (second === undefined) throw new Error("two updates were expected");
    Y.applyUpdate(other, second);
    expect(reasonOf(other)).toMatch(/has not arrived/);
  });
});

describe("isLinkAllowed", () => {
  it.each(["https://example.org/a?b=c", "http://example.org", "mailto:okafor@demo.invalid"])("takes %s", (href) => {
    expect(isLinkAllowed(href)).toBe(true);
  });
  it.each([
    "javascript:alert(1)",
    "data:text/html,x",
    "//example.org",
    "/entries/1",
    "",
    " https://a",
    "https://",
    "java\nscript:x",
    "vbscript:x",
    "https://a b",
  ])("refuses %j", (href) => expect(isLinkAllowed(href)).toBe(false));
});

describe("copyState", () => {
  it("copies content, head and block ids, and no history", () => {
    const doc = openState(stateOfPage(fullPage, { title: "First trial" }));
    const text = new Y.XmlText("struck");
    doc.getXmlFragment("page").insert(0, [element("paragraph", {}, [text])]);
    doc.getXmlFragment("page").delete(0, 1);
    const copy = openState(copyState(Y.encodeStateAsUpdate(doc)));
    expect(validatePage(copy)).toEqual(validatePage(doc));
    expect(Buffer.from(Y.encodeStateAsUpdate(copy)).includes("struck")).toBe(false);
    expect([...Y.decodeStateVector(Y.encodeStateVector(copy)).keys()]).toHaveLength(1);
  });
});

describe("merging", () => {
  type Edit = {
    who: 0 | 1 | 2;
    place: number;
    kind: "type" | "split" | "row" | "amount" | "remove" | "title";
    text: string;
  };
  const edits = fc.array(
    fc.record({
      who: fc.constantFrom(0 as const, 1 as const, 2 as const),
      place: fc.nat(20),
      kind: fc.constantFrom(
        "type" as const,
        "split" as const,
        "row" as const,
        "amount" as const,
        "remove" as const,
        "title" as const,
      ),
      text: fc.string({ minLength: 1, maxLength: 8 }).map((text) => text.replaceAll("\u0000", "0")),
    }),
    { minLength: 1, maxLength: 40 },
  );
  const start = stateOfPage({ type: "doc", content: [paragraph("water"), bath("b1", [row("x1")])] });

  function apply(doc: Y.Doc, edit: Edit, serial: number): void {
    const page = doc.getXmlFragment("page");
    const blocks = page.toArray().filter((each) => each instanceof Y.XmlElement);
    const at = blocks.length === 0 ? 0 : edit.place % blocks.length;
    const chosen = blocks[at];
    if (edit.kind === "title") doc.getMap("head").set("title", edit.text);
    else if (edit.kind === "split") page.insert(at, [element("paragraph", {}, [new Y.XmlText(edit.text)])]);
    else if (edit.kind === "remove" && chosen !== undefined) page.delete(at, 1);
    else if (chosen?.nodeName === "paragraph") {
      const text = chosen.get(0);
      if (text instanceof Y.XmlText) text.insert(Math.min(edit.place, text.length), edit.text);
    } else if (chosen?.nodeName === "equilibrium") {
      const target = chosen.get(0);
      if (edit.kind === "row" || !(target instanceof Y.XmlElement))
        chosen.insert(0, [element("compositionRow", { id: `r-${serial}` })]);
      else target.setAttribute("amount", edit.text);
    }
  }

  it("comes to one and the same page in every order of arrival, which is always a page (COL-01)", () => {
    fc.assert(
      fc.property(edits, fc.array(fc.nat(), { minLength: 40, maxLength: 40 }), (script, shuffle) => {
        const writers = [0, 1, 2].map(() => openState(start));
        const updates: Uint8Array[] = [];
        for (const writer of writers) writer.on("update", (update: Uint8Array) => updates.push(update));
        script.forEach((edit, serial) => {
          const writer = writers[edit.who];
          if (writer !== undefined) apply(writer, edit, serial);
        });
        const inOrder = openState(start);
        for (const update of updates) Y.applyUpdate(inOrder, update);
        const mixed = openState(start);
        const order = updates.map((update, index) => ({ update, key: shuffle[index % shuffle.length] ?? 0 }));
        for (const { update } of order.toSorted((a, b) => a.key - b.key)) {
          Y.applyUpdate(mixed, update);
          Y.applyUpdate(mixed, update);
        }
        const merged = openState(start);
        Y.applyUpdate(merged, Y.mergeUpdates(updates.length > 0 ? updates : [start]));
        const found = validatePage(inOrder);
        expect(found.ok).toBe(true);
        expect(validatePage(mixed)).toEqual(found);
        expect(validatePage(merged)).toEqual(found);
      }),
      { seed: 20261201, numRuns: 150 },
    );
  });
});
