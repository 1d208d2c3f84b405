// @vitest-environment jsdom
import "./css-escape.ts";
import { act, cleanup, fireEvent, render, screen, within } from "@testing-library/react";
import { useState } from "react";
import { afterEach, describe, expect, it, vi } from "vitest";
import { Button } from "../../../components/ui/button.tsx";
import { type Column, DataTable } from "../../../components/ui/data-table.tsx";
import { Dialog } from "../../../components/ui/dialog.tsx";
import { LiveRegion, useAnnounce } from "../../../components/ui/live-region.tsx";
import { Menu } from "../../../components/ui/menu.tsx";
import { PlainTable } from "../../../components/ui/plain-table.tsx";
import { Progress } from "../../../components/ui/progress.tsx";
import { Says } from "../../../components/ui/says.tsx";

afterEach(() => {
  cleanup();
  vi.useRealTimers();
});

type Step = { id: string; name: string; pK: string };
const steps: Step[] = [
  { id: "1", name: "first", pK: "12.35" },
  { id: "2", name: "second", pK: "2.148" },
  { id: "3", name: "third", pK: "7.2" },
];
const columns: Column<Step>[] = [
  { id: "name", head: "Step", text: (step) => step.name, names: true },
  { id: "pK", head: "pKa", unit: "25 °C", kind: "number", text: (step) => step.pK, by: (step) => Number(step.pK) },
];

describe("a table", () => {
  it("has a name, heads, and rows named by their first cell", () => {
    render(<DataTable caption="Constants" columns={columns} rows={steps} keyOf={(step) => step.id} />);
    const table = screen.getByRole("table", { name: "Constants" });
    expect(within(table).getAllByRole("columnheader")).toHaveLength(2);
    expect(within(table).getByRole("rowheader", { name: "second" })).toBeTruthy();
  });

  it("gives every number of a column the same room on both sides of the point", () => {
    const { container } = render(
      <DataTable caption="Constants" columns={columns} rows={steps} keyOf={(step) => step.id} />,
    );
    const figures = [...container.querySelectorAll<HTMLElement>(".n")];
    expect(figures.map((figure) => [...figure.children].map((part) => part.textContent))).toEqual([
      ["12", ".35"],
      ["2", ".148"],
      ["7", ".2"],
    ]);
    for (const figure of figures) {
      expect([figure.style.getPropertyValue("--i"), figure.style.getPropertyValue("--f")]).toEqual(["2", "4"]);
    }
  });

  it("sorts by the number, not by its text, and says so", () => {
    render(<DataTable caption="Constants" columns={columns} rows={steps} keyOf={(step) => step.id} />);
    const names = () => screen.getAllByRole("rowheader").map((cell) => cell.textContent);
    const head = screen.getByRole("columnheader", { name: /pKa/ });
    expect(head.hasAttribute("aria-sort")).toBe(false);
    fireEvent.click(within(head).getByRole("button"));
    const once = head.getAttribute("aria-sort");
    const order = names();
    fireEvent.click(within(head).getByRole("button"));
    expect([once, head.getAttribute("aria-sort")].sort()).toEqual(["ascending", "descending"]);
    expect(names()).toEqual([...order].reverse());
    expect(order).toEqual(once === "ascending" ? ["second", "third", "first"] : ["first", "third", "second"]);
  });

  it("can be reached by keyboard where it scrolls, and says so when there is no row", () => {
    render(
      <DataTable caption="Hits" columns={columns} rows={[]} keyOf={(step) => step.id} emptyText="Nothing found." />,
    );
    expect(screen.getByRole("region", { name: /Hits/ }).tabIndex).toBe(0);
    expect(screen.getByRole("cell", { name: "Nothing found." })).toBeTruthy();
  });

  it("that is only read aligns the same way", () => {
    const { container } = render(
      <PlainTable
        caption="Readings"
        columns={[
          { id: "sample", head: "Sample", names: true },
          { id: "pH", head: "pH", kind: "number" },
        ]}
        rows={[
          { key: "1", cells: ["bath A", "3.12"] },
          { key: "2", cells: ["caustic", "12.9"] },
        ]}
      />,
    );
    expect(screen.getByRole("table", { name: "Readings" })).toBeTruthy();
    for (const figure of container.querySelectorAll<HTMLElement>(".n")) {
      expect(figure.style.getPropertyValue("--i")).toBe("2");
    }
  });
});

function Signing({ busy = false }: { busy?: boolean }) {
  const [open, setOpen] = useState(false);
  return (
    <>
      <Button onClick={() => setOpen(true)}>Sign as author</Button>
      <Dialog
        open={open}
        onClose={() => setOpen(false)}
        title="Sign DSB-0042"
        busy={busy}
        actions={<Button>Sign</Button>}
      >
        <input aria-label="Password" type="password" />
      </Dialog>
    </>
  );
}

describe("a dialog", () => {
  it("is named by its title, closes on Escape and gives the focus back (ACC-01)", async () => {
    render(<Signing />);
    const opener = screen.getByRole("button", { name: "Sign as author" });
    opener.focus();
    fireEvent.click(opener);
    const dialog = screen.getByRole("dialog", { name: "Sign DSB-0042" });
    await vi.waitFor(() => expect(dialog.contains(document.activeElement)).toBe(true));
    fireEvent.keyDown(dialog, { key: "Escape" });
    expect(screen.queryByRole("dialog")).toBeNull();
    await vi.waitFor(() => expect(document.activeElement).toBe(opener));
  });

  it("stays while the answer is on its way", () => {
    render(<Signing busy />);
    fireEvent.click(screen.getByRole("button", { name: "Sign as author" }));
    fireEvent.keyDown(screen.getByRole("dialog"), { key: "Escape" });
    expect(screen.getByRole("dialog", { name: "Sign DSB-0042" })).toBeTruthy();
  });
});

describe("a menu", () => {
  it("opens by keyboard and tells which act was chosen", () => {
    const chosen = vi.fn();
    render(
      <Menu
        acts={[
          { id: "json", label: "As JSON" },
          { id: "print", label: "Print" },
        ]}
        onAct={chosen}
      >
        Export
      </Menu>,
    );
    const button = screen.getByRole("button", { name: "Export" });
    button.focus();
    fireEvent.keyDown(button, { key: "ArrowDown" });
    fireEvent.keyUp(button, { key: "ArrowDown" });
    const item = screen.getByRole("menuitem", { name: "Print" });
    fireEvent.click(item);
    expect(chosen.mock.calls).toEqual([["print"]]);
  });
});

function Speaker() {
  const announce = useAnnounce();
  return (
    <button type="button" onClick={() => announce("Saved")}>
      say
    </button>
  );
}

describe("what is heard", () => {
  it("says a sentence politely, once, and again only later (ACC-06)", () => {
    vi.useFakeTimers();
    render(
      <LiveRegion>
        <Speaker />
      </LiveRegion>,
    );
    const region = screen.getByRole("status");
    expect(region.getAttribute("aria-live")).toBe("polite");
    const changes = vi.fn();
    const observer = new MutationObserver(changes);
    observer.observe(region, { childList: true, characterData: true, subtree: true });
    const say = screen.getByRole("button", { name: "say" });
    fireEvent.click(say);
    expect(region.textContent).toBe("Saved");
    expect(observer.takeRecords()).not.toEqual([]);
    fireEvent.click(say);
    expect(observer.takeRecords()).toEqual([]);
    act(() => vi.advanceTimersByTime(5000));
    expect(region.textContent).toBe("");
    fireEvent.click(say);
    expect(region.textContent).toBe("Saved");
  });

  it("says how far long work is", () => {
    render(<Progress label="Solving again" done={3} of={10} words="3 of 10 calculations" />);
    const bar = screen.getByRole("progressbar", { name: "Solving again" });
    expect([bar.getAttribute("aria-valuenow"), bar.getAttribute("aria-valuetext")]).toEqual([
      "3",
      "3 of 10 calculations",
    ]);
  });

  it("gives every message a drawn mark and words, and shouts only what is urgent", () => {
    const { container } = render(
      <>
        <Says kind="warn" finding="The meter stood at 24.6 °C.">
          Not corrected for that.
        </Says>
        <Says kind="stop" finding="The signature was refused." urgent />
      </>,
    );
    for (const says of container.querySelectorAll(".says")) expect(says.querySelector("svg.mark")).not.toBeNull();
    expect(screen.getByRole("alert").textContent).toBe("The signature was refused.");
  });
});
