// What stands on the pages of the demo laboratory. All of it is made up: people, baths, lots, instruments and readings. Real are
// only the constants of the library, each with its source.
import type { PageJson, PageNode } from "../../editor/schema/index.ts";

export type DemoRow = {
  compound: string;
  amount: string;
  unit: string;
  massFraction?: string;
  density?: string;
  lot?: string;
};
export type DemoBlock = {
  id: string;
  title: string;
  volume?: string;
  measuredPH?: string;
  activity?: string;
  rows: DemoRow[];
};
export type DemoPage = {
  title: string;
  /** days before today on which the work is said to have been done */
  doneDaysAgo: number;
  lateReason?: string;
  content: DemoNode[];
};
/** Blocks and mentions stand in for their nodes until the library has told which constants are current. */
export type DemoNode = PageNode | { demo: "block"; block: DemoBlock };

const MADE_UP =
  "Made up for the demonstration: this laboratory, its people, lots, instruments and readings do not exist. Only the constants are published ones.";

export const DEMO_PAGES = {
  firstTrial: {
    title: "Citric/phosphoric descaling bath, first trial, 1 L",
    doneDaysAgo: 0,
    content: [
      madeUp(),
      heading("Purpose"),
      paragraph(
        "A bath that takes calcium phosphate and milk stone off the plates of a heat exchanger within half an hour at 60 °C. First trial at one litre, to see whether the acidity comes out where the calculation puts it.",
      ),
      heading("What was mixed"),
      paragraph(
        "Weighed on balance B-2 (readability 0.01 g) into about 600 mL of deionised water, in this order: ",
        mention("reagent:citric-acid-monohydrate"),
        ", then ",
        mention("reagent:phosphoric-acid-85"),
        " slowly and with stirring. The flask grew hand-warm. Made up to the mark at 21 °C.",
      ),
      block({
        id: "bath",
        title: "Bath, 1 L",
        volume: "1.000",
        measuredPH: "1.70",
        rows: [
          {
            compound: "reagent:citric-acid-monohydrate",
            amount: "20.00",
            unit: "g",
            massFraction: "0.995",
            lot: "CA-0311",
          },
          { compound: "reagent:phosphoric-acid-85", amount: "10.00", unit: "g", massFraction: "0.850", lot: "PA-0127" },
        ],
      }),
      heading("Reading"),
      paragraph(
        "Meter M-3, calibrated this morning with 1.68 and 4.01, checked with 3.78: slope 97.8 %, offset +6 mV. It read 1.70 at 21.4 °C.",
      ),
      paragraph(
        "The reading lies above the calculated value. At such acidity the junction potential alone can account for some hundredths; besides, the calculation holds for 25 °C and the bath was at 21.4 °C. Nothing was adjusted.",
      ),
      bullets(["Next: the same bath with half the phosphoric acid.", "Ask for a second reading with electrode E-7."]),
    ],
  },
  secondBatch: {
    title: "Citric/phosphoric descaling bath, second batch",
    doneDaysAgo: 0,
    content: [
      madeUp(),
      paragraph(
        "The bath of the first trial once more, by another hand and from the same lots, to see how far two batches lie apart.",
      ),
      block({
        id: "bath",
        title: "Second batch",
        volume: "1.000",
        measuredPH: "1.68",
        rows: [
          {
            compound: "reagent:citric-acid-monohydrate",
            amount: "20.04",
            unit: "g",
            massFraction: "0.995",
            lot: "CA-0311",
          },
          { compound: "reagent:phosphoric-acid-85", amount: "9.97", unit: "g", massFraction: "0.850", lot: "PA-0127" },
        ],
      }),
      table([
        ["batch", "reading", "temperature / °C"],
        ["first", "1.70", "21.4"],
        ["second", "1.68", "21.1"],
      ]),
      paragraph("Two hundredths apart, which is what the meter's display lets one see."),
    ],
  },
  halfPhosphoric: {
    title: "Descaling bath with half the phosphoric acid",
    doneDaysAgo: 1,
    content: [
      madeUp(),
      paragraph(
        "Same as the first trial with half the ",
        mention("reagent:phosphoric-acid-85"),
        ". The rinse water then carries half the phosphate.",
      ),
      block({
        id: "bath",
        title: "Half the phosphoric acid",
        volume: "1.000",
        measuredPH: "1.83",
        rows: [
          {
            compound: "reagent:citric-acid-monohydrate",
            amount: "20.01",
            unit: "g",
            massFraction: "0.995",
            lot: "CA-0311",
          },
          { compound: "reagent:phosphoric-acid-85", amount: "5.02", unit: "g", massFraction: "0.850" },
        ],
      }),
      paragraph("Plate P-4, scaled with skim milk for a week, looked clean after 40 minutes instead of 30."),
    ],
  },
  sharedDraft: {
    title: "Which lot of citric acid for the pilot bath?",
    doneDaysAgo: 0,
    content: [
      madeUp(),
      paragraph(
        "Two lots are on the shelf. Before fifty litres are made up, both are dissolved at the strength of the bath and read.",
      ),
      numbered([
        "20.0 g of each lot in water, made up to 1 L.",
        "Read at 25.0 °C in the water bath.",
        "Compare with the calculated value; a difference above 0.05 is looked into.",
      ]),
      block({
        id: "lot-a",
        title: "Lot CA-0311",
        volume: "1.000",
        measuredPH: "2.11",
        rows: [
          {
            compound: "reagent:citric-acid-monohydrate",
            amount: "20.00",
            unit: "g",
            massFraction: "0.995",
            lot: "CA-0311",
          },
        ],
      }),
    ],
  },
  sulfamic: {
    title: "Sulfamic acid beside citric acid at equal strength",
    doneDaysAgo: 1,
    content: [
      madeUp(),
      paragraph(
        "How much further down does ",
        mention("reagent:sulfamic-acid"),
        " bring the bath than ",
        mention("reagent:citric-acid"),
        "? Both at 0.100 mol/L, calculated only; nothing was mixed yet.",
      ),
      block({
        id: "sulfamic",
        title: "Sulfamic acid",
        rows: [{ compound: "reagent:sulfamic-acid", amount: "0.100", unit: "mol/L" }],
      }),
      block({
        id: "citric",
        title: "Citric acid",
        rows: [{ compound: "reagent:citric-acid", amount: "0.100", unit: "mol/L" }],
      }),
      paragraph(
        "Sulfamic acid never into a line that still holds hypochlorite: the rinse between the two is part of the procedure.",
      ),
    ],
  },
  buffered: {
    title: "Buffered citrate bath for aluminium parts",
    doneDaysAgo: 4,
    lateReason: "Written up after the trial week; the readings stand in the bench diary of meter M-3.",
    content: [
      madeUp(),
      paragraph(
        "Aluminium fittings do not bear the strong bath. A citrate buffer near pH 4.5 is slower and spares them.",
      ),
      block({
        id: "buffer",
        title: "Citrate buffer",
        volume: "0.500",
        measuredPH: "4.52",
        rows: [
          {
            compound: "reagent:citric-acid-monohydrate",
            amount: "5.25",
            unit: "g",
            massFraction: "0.995",
            lot: "CA-0311",
          },
          {
            compound: "reagent:trisodium-citrate-dihydrate",
            amount: "7.35",
            unit: "g",
            massFraction: "0.990",
            lot: "TC-0042",
          },
        ],
      }),
      paragraph("Weight loss of the coupon after 2 h: 0.3 mg, within what the balance can tell."),
    ],
  },
  drain: {
    title: "Neutralising a spent bath before the drain",
    doneDaysAgo: 0,
    content: [
      madeUp(),
      paragraph("How much alkali brings one litre of spent bath near neutral? A first estimate, to be titrated later."),
      block({
        id: "spent",
        title: "Spent bath with alkali",
        rows: [
          { compound: "reagent:citric-acid", amount: "0.0947", unit: "mol/L" },
          { compound: "reagent:phosphoric-acid-85", amount: "0.0867", unit: "mol/L" },
          { compound: "reagent:sodium-hydroxide", amount: "0.420", unit: "mol/L" },
        ],
      }),
      paragraph(
        "Dissolved calcium is not in the calculation: it binds citrate and precipitates phosphate, and both move the value.",
      ),
    ],
  },
  phosphateRinse: {
    title: "Phosphate buffer for the rinse water check",
    doneDaysAgo: 0,
    content: [
      madeUp(),
      paragraph("A buffer near pH 7 with which the rinse water meter is checked every Monday."),
      block({
        id: "buffer",
        title: "Check buffer",
        volume: "1.000",
        measuredPH: "6.87",
        rows: [
          {
            compound: "reagent:sodium-dihydrogen-phosphate-dihydrate",
            amount: "3.90",
            unit: "g",
            massFraction: "0.990",
            lot: "SP-0098",
          },
          {
            compound: "reagent:disodium-hydrogen-phosphate",
            amount: "3.55",
            unit: "g",
            massFraction: "0.990",
            lot: "SP-0101",
          },
        ],
      }),
    ],
  },
  alkalineRinse: {
    title: "Alkaline rinse, soda and caustic",
    doneDaysAgo: 1,
    content: [
      madeUp(),
      paragraph(
        "The alkaline rinse that takes fat off before the acid bath. ",
        mention("reagent:sodium-carbonate"),
        " holds the value when the caustic is used up.",
      ),
      block({
        id: "rinse",
        title: "Alkaline rinse",
        measuredPH: "12.6",
        rows: [
          { compound: "reagent:sodium-hydroxide", amount: "50.0", unit: "mmol/L" },
          { compound: "reagent:sodium-carbonate", amount: "50.0", unit: "mmol/L" },
        ],
      }),
      paragraph(
        "Taken up from the open tank, carbon dioxide lowers the value from day to day; the tank is read each morning.",
      ),
    ],
  },
  hypochloriteTrap: {
    title: "Why the disinfectant is rinsed out before the acid",
    doneDaysAgo: 0,
    content: [
      madeUp(),
      paragraph(
        "For the board in the cleaning room: what would meet in the line if the rinse between were left out. Calculated, not mixed.",
      ),
      block({
        id: "trap",
        title: "Residue of disinfectant in the acid bath",
        rows: [
          { compound: "reagent:sodium-hypochlorite-12", amount: "0.0050", unit: "mol/L" },
          { compound: "reagent:citric-acid", amount: "0.0947", unit: "mol/L" },
        ],
      }),
      paragraph("The caution above the result is the point of this page."),
    ],
  },
  acetateRinse: {
    title: "Weak acetate rinse after the acid bath",
    doneDaysAgo: 0,
    content: [
      madeUp(),
      paragraph("A weak buffer that takes the last acid along without shocking the gaskets."),
      block({
        id: "acetate",
        title: "Acetate rinse",
        rows: [
          { compound: "reagent:acetic-acid-glacial", amount: "5.0", unit: "mmol/L" },
          { compound: "reagent:sodium-acetate-trihydrate", amount: "5.0", unit: "mmol/L" },
        ],
      }),
    ],
  },
  pilot: {
    title: "Pilot line, phosphoric acid dosing",
    doneDaysAgo: 0,
    content: [
      madeUp(),
      paragraph("Dosing of ", mention("reagent:phosphoric-acid-75"), " into the recirculated water of the pilot line."),
      block({
        id: "dose",
        title: "Dosed water",
        rows: [{ compound: "reagent:phosphoric-acid-75", amount: "2.0", unit: "mmol/L" }],
      }),
    ],
  },
} as const satisfies Record<string, DemoPage>;

/** The page as JSON, with the constants that are current now pinned in each row. */
export function demoPageJson(page: DemoPage, constantsOf: (compound: string) => string): PageJson {
  return {
    type: "doc",
    content: page.content.map((node) => ("demo" in node ? blockNode(node.block, constantsOf) : node)),
  };
}

export function compoundsOfPage(page: DemoPage): string[] {
  return page.content.flatMap((node) => ("demo" in node ? node.block.rows.map((row) => row.compound) : []));
}

function blockNode(given: DemoBlock, constantsOf: (compound: string) => string): PageNode {
  return {
    type: "equilibrium",
    attrs: {
      id: given.id,
      title: given.title,
      volume: given.volume ?? "",
      volumeUnit: "L",
      temperatureC: "25",
      activity: given.activity ?? "davies",
      measuredPH: given.measuredPH ?? "",
      show: "",
    },
    content: given.rows.map((row, index) => ({
      type: "compositionRow",
      attrs: {
        id: `${given.id}-${index + 1}`,
        compound: row.compound,
        constants: constantsOf(row.compound),
        amount: row.amount,
        unit: row.unit,
        massFraction: row.massFraction ?? "",
        density: row.density ?? "",
        lot: row.lot ?? "",
      },
    })),
  };
}

function block(given: DemoBlock): DemoNode {
  return { demo: "block", block: given };
}

function madeUp(): PageNode {
  return { type: "blockquote", content: [paragraph(MADE_UP)] };
}

function text(words: string): PageNode {
  return { type: "text", text: words };
}

export function paragraph(...parts: (string | PageNode)[]): PageNode {
  return { type: "paragraph", content: parts.map((part) => (typeof part === "string" ? text(part) : part)) };
}

function heading(words: string): PageNode {
  return { type: "heading", attrs: { level: 2 }, content: [text(words)] };
}

function mention(compound: string): PageNode {
  return { type: "mention", attrs: { compound } };
}

function items(words: readonly string[]): PageNode[] {
  return words.map((each) => ({ type: "listItem", content: [paragraph(each)] }));
}

function bullets(words: readonly string[]): PageNode {
  return { type: "bulletList", content: items(words) };
}

function numbered(words: readonly string[]): PageNode {
  return { type: "orderedList", content: items(words) };
}

function table(rows: readonly (readonly string[])[]): PageNode {
  return {
    type: "table",
    content: rows.map((row, index) => ({
      type: "tableRow",
      content: row.map((cell) => ({ type: index === 0 ? "tableHeader" : "tableCell", content: [paragraph(cell)] })),
    })),
  };
}
