// @vitest-environment jsdom
import { cleanup, fireEvent, render, screen } from "@testing-library/react";
import { afterEach, describe, expect, it, vi } from "vitest";
import { EnteredNumber, EnteredText } from "../../editor/entered-text.tsx";
import type { FieldKeep } from "../../editor/field-keep.ts";
import { UnsavedFields } from "../../editor/page-context.tsx";

afterEach(cleanup);

function keepOf(texts: Map<string, string>): FieldKeep {
  return {
    textOf: (field) => texts.get(field) ?? null,
    keep(field, text) {
      if (text === null) texts.delete(field);
      else texts.set(field, text);
    },
    close: () => undefined,
  };
}

function show(texts = new Map<string, string>(), value = "") {
  const onEnter = vi.fn<(text: string) => void>();
  const onCommit = vi.fn<(decimal: string) => void>();
  const onCount = vi.fn<(count: number) => void>();
  const keep = keepOf(texts);
  const fields = (lot: string, amount: string) => (
    <UnsavedFields keep={keep} onCount={onCount}>
      <EnteredText field="lot" label="Lot" value={lot} most={20} onEnter={onEnter} />
      <EnteredNumber field="amount" label="Amount" value={amount} onCommit={onCommit} />
    </UnsavedFields>
  );
  const { rerender } = render(fields(value, value));
  return { texts, onEnter, onCommit, onCount, change: (lot: string, amount = lot) => rerender(fields(lot, amount)) };
}
const type = (label: string, value: string) => fireEvent.change(screen.getByLabelText(label), { target: { value } });
const press = (label: string, key: string) => fireEvent.keyDown(screen.getByLabelText(label), { key });
const textIn = (label: string) => screen.getByLabelText<HTMLInputElement>(label).value;

describe.each([
  ["Lot", "lot"],
  ["Amount", "amount"],
])("a field that is entered: %s", (label, field) => {
  it("keeps on the device what is typed, until it is entered", () => {
    const { texts, onCount, onEnter, onCommit } = show();
    type(label, "0.25");
    expect(texts.get(field)).toBe("0.25");
    expect(onCount).toHaveBeenLastCalledWith(1);
    press(label, "Enter");
    expect(texts.has(field)).toBe(false);
    expect(onCount).toHaveBeenLastCalledWith(0);
    expect([...onEnter.mock.calls, ...onCommit.mock.calls]).toEqual([["0.25"]]);
  });

  it("offers what was kept, and passing through enters nothing", () => {
    const { texts, onCount, onEnter, onCommit } = show(new Map([[field, "0.25"]]), "0.1");
    expect(textIn(label)).toBe("0.25");
    expect(onCount).toHaveBeenLastCalledWith(1);
    fireEvent.focus(screen.getByLabelText(label));
    fireEvent.blur(screen.getByLabelText(label));
    expect(onEnter).not.toHaveBeenCalled();
    expect(onCommit).not.toHaveBeenCalled();
    expect(screen.getByText(/^Typed before and not entered/)).toBeTruthy();
    press(label, "Escape");
    expect(textIn(label)).toBe("0.1");
    expect(texts.has(field)).toBe(false);
  });

  it("forgets what was kept when that is what stands there now", () => {
    const { texts } = show(new Map([[field, "0.25"]]), "0.25");
    expect(texts.size).toBe(0);
    expect(screen.queryByText(/^Typed before/)).toBeNull();
  });

  it("does not put what somebody else enters in place of what is being typed", () => {
    const { change } = show(new Map(), "0.1");
    change("0.2");
    expect(textIn(label)).toBe("0.2");
    type(label, "0.3");
    change("0.4");
    expect(textIn(label)).toBe("0.3");
    press(label, "Escape");
    expect(textIn(label)).toBe("0.4");
  });
});
