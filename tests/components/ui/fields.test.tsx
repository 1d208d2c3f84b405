// @vitest-environment jsdom
import "./css-escape.ts";
import { cleanup, fireEvent, render, screen } from "@testing-library/react";
import { useState } from "react";
import { useForm } from "react-hook-form";
import { afterEach, describe, expect, it, vi } from "vitest";
import { Button } from "../../../components/ui/button.tsx";
import { CheckField } from "../../../components/ui/check-field.tsx";
import { ComboField, type ComboItem } from "../../../components/ui/combo-field.tsx";
import { NumberText } from "../../../components/ui/number-text.tsx";
import { SelectField } from "../../../components/ui/select-field.tsx";
import { TextArea, TextField } from "../../../components/ui/text-field.tsx";

afterEach(cleanup);

/** The texts that describe a control, as a screen reader finds them. */
function described(control: HTMLElement): string {
  const ids = (control.getAttribute("aria-describedby") ?? "").split(" ").filter(Boolean);
  return ids.map((id) => document.getElementById(id)?.textContent ?? `(no element ${id})`).join(" | ");
}

describe("a field with an error (ACC-10)", () => {
  it("ties the sentence to a line of text", () => {
    render(<TextField label="Title" hint="Says what was done." error="Write a title." />);
    const control = screen.getByRole("textbox", { name: "Title" });
    expect(control.getAttribute("aria-invalid")).toBe("true");
    expect(described(control)).toBe("Write a title. | Says what was done.");
  });

  it("ties the sentence to lines of text", () => {
    render(<TextArea label="Reason" error="Write why you return it." />);
    expect(described(screen.getByRole("textbox", { name: "Reason" }))).toBe("Write why you return it.");
  });

  it("ties the sentence to a choice", () => {
    render(
      <SelectField
        label="Activity model"
        choices={[{ value: "ideal", label: "Ideal" }]}
        value=""
        onChange={() => undefined}
        error="Choose one."
      />,
    );
    expect(described(screen.getByRole("button", { name: /Activity model/ }))).toContain("Choose one.");
  });

  it("ties the sentence to what is looked up", () => {
    render(
      <ComboField
        label="Poured in"
        input="unobtainium"
        onInput={() => undefined}
        items={[]}
        value=""
        onPick={() => undefined}
        error="No compound of that name is in the library."
      />,
    );
    const control = screen.getByRole("combobox", { name: "Poured in" });
    expect(described(control)).toContain("No compound of that name is in the library.");
    expect(control.getAttribute("aria-invalid")).toBe("true");
  });

  it("ties the sentence to a tick", () => {
    render(
      <CheckField checked={false} onChange={() => undefined} error="Tick this to go on.">
        I have read it.
      </CheckField>,
    );
    expect(described(screen.getByRole("checkbox", { name: "I have read it." }))).toContain("Tick this to go on.");
  });

  it("says nothing and ties nothing when there is none", () => {
    render(<TextField label="Title" />);
    const control = screen.getByRole("textbox", { name: "Title" });
    expect(control.hasAttribute("aria-invalid")).toBe(false);
    expect(control.hasAttribute("aria-describedby")).toBe(false);
  });
});

function Amount({
  sign = ".",
  start = "0.100",
  heard,
}: {
  sign?: "." | ",";
  start?: string;
  heard?: (d: string) => void;
}) {
  const [value, setValue] = useState(start);
  return (
    <NumberText
      label="Amount"
      unit="g"
      value={value}
      decimalSign={sign}
      refuse={(decimal) => (decimal.startsWith("-") ? "The amount is below zero." : undefined)}
      onCommit={(decimal) => {
        setValue(decimal);
        heard?.(decimal);
      }}
    />
  );
}

function amount(): HTMLInputElement {
  return screen.getByRole<HTMLInputElement>("textbox", { name: "Amount" });
}

function type(text: string, end: "Enter" | "leave" = "Enter"): void {
  fireEvent.change(amount(), { target: { value: text } });
  if (end === "Enter") fireEvent.keyDown(amount(), { key: "Enter" });
  else fireEvent.blur(amount());
}

describe("a typed number", () => {
  it("keeps 0.100 as typed and commits it on Enter and on leaving (CAL-01)", () => {
    const heard = vi.fn();
    render(<Amount start="" heard={heard} />);
    type("0.100");
    expect(amount().value).toBe("0.100");
    type("0.1000", "leave");
    expect(amount().value).toBe("0.1000");
    expect(heard.mock.calls).toEqual([["0.100"], ["0.1000"]]);
  });

  it("commits nothing while typing, and nothing twice", () => {
    const heard = vi.fn();
    render(<Amount heard={heard} />);
    fireEvent.change(amount(), { target: { value: "0.2" } });
    expect(heard).not.toHaveBeenCalled();
    type("0.2");
    fireEvent.blur(amount());
    expect(heard.mock.calls).toEqual([["0.2"]]);
  });

  it("asks which of two numbers 1,000 is, and takes the one that is pressed (CAL-02)", () => {
    const heard = vi.fn();
    render(<Amount heard={heard} />);
    type("1,000");
    expect(heard).not.toHaveBeenCalled();
    expect(described(amount())).toContain("two ways");
    fireEvent.click(screen.getByRole("button", { name: "1000 g" }));
    expect(heard.mock.calls).toEqual([["1000"]]);
    expect(amount().value).toBe("1000");
    expect(screen.queryByText(/two ways/)).toBeNull();
  });

  it("shows and reads the person's own decimal sign (CAL-02)", () => {
    const heard = vi.fn();
    render(<Amount sign="," heard={heard} />);
    expect(amount().value).toBe("0,100");
    type("1,000");
    expect(heard.mock.calls).toEqual([["1.000"]]);
  });

  it("echoes a reading that could surprise (CAL-02)", () => {
    render(<Amount />);
    type("0,250");
    expect(described(amount())).toBe("Read as 0.250 g");
    expect(amount().value).toBe("0,250");
  });

  it.each([
    ["four", /“four” is not a number/],
    ["-2", /below zero/],
    ["1e400", /too large/],
  ])("refuses “%s” at the field, keeps what was typed and commits nothing", (text, sentence) => {
    const heard = vi.fn();
    render(<Amount heard={heard} />);
    type(text, "leave");
    expect(amount().value).toBe(text);
    expect(described(amount())).toMatch(sentence);
    expect(amount().getAttribute("aria-invalid")).toBe("true");
    expect(heard).not.toHaveBeenCalled();
  });

  it("goes back to what is committed on Escape, and follows a change from elsewhere", () => {
    const { rerender } = render(<NumberText label="Amount" value="0.100" onCommit={() => undefined} />);
    fireEvent.change(amount(), { target: { value: "9" } });
    fireEvent.keyDown(amount(), { key: "Escape" });
    expect(amount().value).toBe("0.100");
    rerender(<NumberText label="Amount" value="0.25" onCommit={() => undefined} />);
    expect(amount().value).toBe("0.25");
  });

  it("commits the emptied field as no value", () => {
    const heard = vi.fn();
    render(<Amount heard={heard} />);
    type("");
    expect(heard.mock.calls).toEqual([[""]]);
  });
});

const citrates: ComboItem[] = [
  { id: "a", text: "citric acid", columns: ["citric acid", "H₃Cit"] },
  { id: "b", text: "trisodium citrate", columns: ["trisodium citrate", "Na₃Cit"] },
];

function Lookup({ items, picked, loading }: { items: ComboItem[]; picked?: (id: string) => void; loading?: boolean }) {
  const [input, setInput] = useState("");
  const [value, setValue] = useState("");
  return (
    <ComboField
      label="Poured in"
      input={input}
      onInput={setInput}
      items={items}
      value={value}
      loading={loading}
      emptyText="No compound of that name."
      onPick={(item) => {
        setValue(item.id);
        setInput(item.text);
        picked?.(item.id);
      }}
    />
  );
}

describe("a field that looks up", () => {
  it("is walked and chosen from by keyboard alone (ACC-01)", () => {
    const picked = vi.fn();
    render(<Lookup items={citrates} picked={picked} />);
    const box = screen.getByRole<HTMLInputElement>("combobox", { name: "Poured in" });
    box.focus();
    fireEvent.change(box, { target: { value: "cit" } });
    expect(screen.getAllByRole("option").map((option) => option.textContent)).toEqual([
      "citric acidH₃Cit",
      "trisodium citrateNa₃Cit",
    ]);
    fireEvent.keyDown(box, { key: "ArrowDown" });
    fireEvent.keyDown(box, { key: "ArrowDown" });
    fireEvent.keyDown(box, { key: "Enter" });
    expect(picked.mock.calls).toEqual([["b"]]);
    expect(box.value).toBe("trisodium citrate");
  });

  it("closes on Escape and brings back what was chosen, found or not (ACC-01)", () => {
    const { rerender } = render(<Lookup items={citrates} />);
    const box = screen.getByRole<HTMLInputElement>("combobox", { name: "Poured in" });
    box.focus();
    fireEvent.change(box, { target: { value: "cit" } });
    fireEvent.keyDown(box, { key: "Escape" });
    expect(screen.queryByRole("listbox")).toBeNull();
    expect(box.value).toBe("");
    fireEvent.change(box, { target: { value: "cit" } });
    fireEvent.keyDown(box, { key: "ArrowDown" });
    fireEvent.keyDown(box, { key: "Enter" });
    fireEvent.change(box, { target: { value: "phos" } });
    rerender(<Lookup items={[]} />);
    fireEvent.keyDown(box, { key: "Escape" });
    expect(screen.queryByRole("listbox")).toBeNull();
    expect(box.value).toBe("citric acid");
  });

  it("says that it looks, then that nothing was found", () => {
    const { rerender } = render(<Lookup items={[]} loading />);
    const box = screen.getByRole("combobox", { name: "Poured in" });
    box.focus();
    fireEvent.change(box, { target: { value: "xyz" } });
    expect(screen.getByText("Looking …")).toBeTruthy();
    rerender(<Lookup items={[]} />);
    expect(screen.getByText("No compound of that name.")).toBeTruthy();
  });
});

function Form({ done }: { done: (values: { title: string }) => void }) {
  const { register, handleSubmit, formState } = useForm<{ title: string }>({ defaultValues: { title: "" } });
  return (
    <form onSubmit={handleSubmit(done)}>
      <TextField
        label="Title"
        error={formState.errors.title?.message}
        {...register("title", { required: "Write a title." })}
      />
      <Button type="submit" kind="first">
        Begin
      </Button>
    </form>
  );
}

describe("with a form", () => {
  it("registers as it is: an error comes to the field and the focus with it", async () => {
    const done = vi.fn();
    render(<Form done={done} />);
    fireEvent.click(screen.getByRole("button", { name: "Begin" }));
    await screen.findByText("Write a title.");
    const control = screen.getByRole("textbox", { name: "Title" });
    expect(document.activeElement).toBe(control);
    fireEvent.change(control, { target: { value: "Bath A" } });
    fireEvent.click(screen.getByRole("button", { name: "Begin" }));
    await vi.waitFor(() => expect(done.mock.calls[0]?.[0]).toEqual({ title: "Bath A" }));
  });
});

describe("a button", () => {
  it("that is not yet possible stays in reach, says why and does nothing", () => {
    const pressed = vi.fn();
    render(
      <Button notYet="Not yet: E1 has one field to put right." onClick={pressed}>
        Sign as author
      </Button>,
    );
    const button = screen.getByRole("button", { name: "Sign as author" });
    expect(button.getAttribute("aria-disabled")).toBe("true");
    expect(button.hasAttribute("disabled")).toBe(false);
    expect(described(button)).toBe("Not yet: E1 has one field to put right.");
    fireEvent.click(button);
    expect(pressed).not.toHaveBeenCalled();
  });

  it("does nothing a second time while the answer is on its way", () => {
    const sent = vi.fn((event: { preventDefault: () => void }) => event.preventDefault());
    render(
      <form onSubmit={sent}>
        <Button type="submit" pending pendingWords="Solving every block again">
          Countersign
        </Button>
      </form>,
    );
    fireEvent.click(screen.getByRole("button", { name: "Solving every block again" }));
    expect(sent).not.toHaveBeenCalled();
  });
});
