// @vitest-environment jsdom
import { cleanup, render, screen, within } from "@testing-library/react";
import { renderToStaticMarkup } from "react-dom/server";
import { afterEach, describe, expect, it } from "vitest";
import { Counterfoil, StubHead, StubSection, Vouch } from "../../../components/leaf/counterfoil.tsx";
import { Fingerprint } from "../../../components/leaf/fingerprint.tsx";
import { HazardRow, PICTOGRAMS } from "../../../components/leaf/hazard-row.tsx";
import { Leaf, LeafTitle } from "../../../components/leaf/leaf.tsx";
import { SEAL_SENTENCE, Seal, Sealed } from "../../../components/leaf/seal-print.tsx";
import { SideRow } from "../../../components/leaf/side-row.tsx";
import { STATE_WORDS, StateMark, type StateName } from "../../../components/leaf/state-mark.tsx";

afterEach(cleanup);

const hash = "02f15288900abecf2ecb1b0dfb2397f6a5b231c3dbbd773d304d028c12af5553";

describe("a state", () => {
  const states: [StateName, string][] = [
    ["draft", "Draft"],
    ["signed", "Signed"],
    ["witnessed", "Witnessed"],
    ["returned", "Returned"],
    ["superseded", "Superseded"],
    ["voided", "Voided"],
    ["overdue", "Overdue"],
    ["waiting", "Waiting"],
    ["reproduces", "Reproduces"],
    ["differs", "Differs"],
    ["saved", "Saved"],
    ["saving", "Saving"],
    ["offline", "Offline"],
  ];

  it.each(states)("%s is a word and a drawn mark (ACC-04)", (state, word) => {
    const { container } = render(<StateMark state={state} />);
    expect(container.textContent).toBe(word);
    expect(container.querySelector("svg.mark")?.innerHTML).not.toBe("");
  });

  it("has a mark of its own, so that no two are told apart by colour alone (ACC-04)", () => {
    expect(states.map(([state]) => state).sort()).toEqual(Object.keys(STATE_WORDS).sort());
    const drawings = states.map(
      ([state]) => /<svg.*<\/svg>/.exec(renderToStaticMarkup(<StateMark state={state} />))?.[0],
    );
    expect(new Set(drawings).size).toBe(states.length);
  });

  it("can say more than its word", () => {
    render(<StateMark state="offline">Offline, 3 changes kept on this device</StateMark>);
    expect(screen.getByText("Offline, 3 changes kept on this device")).toBeTruthy();
  });
});

describe("a seal", () => {
  const sealed = (
    <Sealed
      hash={hash}
      by="author"
      name="L. Brandt"
      capacity="author"
      when="30 November 2026, 15:42 UTC"
      meaning="I did this work and wrote this page."
    />
  );

  it("stands with its eight characters, name, time with zone, meaning, the full hash, and what decides (SGN-20)", () => {
    const { container } = render(sealed);
    const text = container.textContent ?? "";
    for (const needed of ["02F1 5288", "L. Brandt", "15:42 UTC", "I did this work", SEAL_SENTENCE]) {
      expect(text).toContain(needed);
    }
    expect(text.replaceAll(" ", "")).toContain(hash);
    expect(screen.getByRole("img", { name: "Seal of L. Brandt, author: 02F1 5288" })).toBeTruthy();
  });

  it("renders on the server to what it renders to in the browser", () => {
    const { container } = render(<Seal hash={hash} by="witness" size={48} />);
    expect(container.innerHTML).toBe(renderToStaticMarkup(<Seal hash={hash} by="witness" size={48} />));
  });

  it("is silent where it is only a picture beside words", () => {
    render(<Seal hash={hash} by="author" size={48} />);
    expect(screen.queryByRole("img")).toBeNull();
  });
});

describe("a fingerprint", () => {
  it("is whole, in groups of four", () => {
    const { container } = render(<Fingerprint hex={hash} />);
    expect(container.textContent).toMatch(/^SHA-256: 02f1 5288 900a .* 5553$/);
    expect(container.textContent?.replace("SHA-256: ", "").replaceAll(" ", "")).toBe(hash);
  });

  it("is never shorter than 32 digits, and says that it is shortened", () => {
    const { container } = render(<Fingerprint hex={hash} short />);
    expect(container.textContent?.replace("SHA-256: ", "").replaceAll(" ", "")).toBe(`${hash.slice(0, 32)}…`);
  });
});

describe("hazards", () => {
  const record = {
    pictograms: ["GHS05", "GHS07"],
    signalWord: "Danger",
    statements: [{ code: "H314", sentence: "Causes severe skin burns and eye damage." }],
    source: "Annex VI of Regulation (EC) No 1272/2008",
    date: "as of 2024",
    fromMemory: true,
  };

  it("are pictograms with their names, signal word, code and full sentence, source and date (SAF-01)", () => {
    const { container } = render(<HazardRow name="sodium hydroxide" record={record} />);
    const text = container.textContent ?? "";
    for (const needed of [
      "Corrosion",
      "Exclamation mark",
      "Danger",
      "H314",
      "Causes severe skin burns and eye damage.",
      "1272/2008, as of 2024",
      "from memory",
    ]) {
      expect(text).toContain(needed);
    }
    expect([...container.querySelectorAll("img")].map((image) => image.getAttribute("src"))).toEqual([
      "/ghs/GHS05.svg",
      "/ghs/GHS07.svg",
    ]);
  });

  it("say in words that there is no record (SAF-01)", () => {
    const { container } = render(<HazardRow name="sodium chloride" record={null} />);
    expect(container.textContent).toContain("sodium chloride: no hazard data on file");
    expect(container.querySelector("img")).toBeNull();
  });

  it("have a name for each of the nine pictograms", () => {
    expect(Object.keys(PICTOGRAMS)).toHaveLength(9);
  });
});

describe("a leaf", () => {
  it("is the page's main part, with its counterfoil beside it and one title", () => {
    render(
      <Leaf
        counterfoil={
          <Counterfoil head={<StubHead number="DSB-0042" state={<StateMark state="draft" />} />}>
            <StubSection title="Author">R. Okafor</StubSection>
          </Counterfoil>
        }
      >
        <LeafTitle under="Monday 30 November 2026">Citrate bath A: make-up</LeafTitle>
        <Vouch label="Calculation E1">reproduces</Vouch>
        <SideRow label="Composition" note="3 rows">
          rows
        </SideRow>
      </Leaf>,
    );
    const main = screen.getByRole("main");
    expect(within(main).getByRole("heading", { level: 1 }).textContent).toBe("Citrate bath A: make-up");
    const counterfoil = screen.getByRole("complementary", { name: "Counterfoil" });
    expect(main.contains(counterfoil)).toBe(false);
    expect(within(counterfoil).getByRole("heading", { name: "DSB-0042" })).toBeTruthy();
    expect(within(counterfoil).getByRole("heading", { name: "Author" })).toBeTruthy();
    expect(within(main).getByRole("group", { name: "Calculation E1" })).toBeTruthy();
  });
});
