// @vitest-environment jsdom
import { QueryClient, QueryClientProvider } from "@tanstack/react-query";
import { cleanup, fireEvent, render, screen } from "@testing-library/react";
import { afterEach, describe, expect, it, vi } from "vitest";
import type { CompoundItem } from "../../components/query/compounds.ts";
import { Composition, type CompositionProps } from "../../editor/nodes/composition.tsx";
import { fieldErrors } from "../../editor/nodes/refusals.ts";
import { PageProvider, UnsavedFields } from "../../editor/page-context.tsx";
import type { CompositionRow } from "../../editor/schema/index.ts";

afterEach(cleanup);

const acid: CompoundItem = {
  id: "reagent:phosphoric-acid-85",
  name: "phosphoric acid, 85 % solution",
  formula: "H3PO4",
  cas: "7664-38-2",
  molarMass: "97.994",
  form: "aqueous solution",
  constants: [],
  massFraction: "0.850",
  density: "1.685",
  typicalPurity: null,
  neutral: true,
  matched: "phosphoric acid",
};
const row: CompositionRow = {
  id: "x1",
  compound: acid.id,
  constants: "",
  amount: "",
  unit: "mL",
  massFraction: "",
  density: "",
  lot: "",
};

function show(more: Partial<CompositionProps> = {}, decimalSign: "." | "," = ".") {
  const onSet = vi.fn();
  const onCount = vi.fn();
  render(
    <QueryClientProvider client={new QueryClient()}>
      <UnsavedFields keep={null} onCount={onCount}>
        <PageProvider
          value={{
            revisionId: "rev",
            decimalSign,
            timeZone: "UTC",
            line: { kind: "saved", waiting: 0, isLoaded: true, state: "draft", refusedCode: null },
            compounds: new Map([[acid.id, acid]]),
            remember: () => undefined,
            askFormula: () => undefined,
          }}
        >
          <Composition
            rows={[row]}
            errors={fieldErrors([])}
            concentrations={[]}
            isHeld={false}
            onSet={onSet}
            onAdd={() => "new"}
            onMove={() => undefined}
            onTakeOut={() => undefined}
            {...more}
          />
        </PageProvider>
      </UnsavedFields>
    </QueryClientProvider>,
  );
  return { onSet, onCount };
}

describe("the composition", () => {
  it("offers what the label says and fills nothing in (CAL-12)", () => {
    const { onSet } = show();
    expect(screen.getByLabelText("Mass fraction, row 1")).toHaveProperty("value", "");
    expect(onSet).not.toHaveBeenCalled();
    fireEvent.click(screen.getByRole("button", { name: "as on the label: 0.850" }));
    expect(onSet).toHaveBeenCalledWith("x1", { massFraction: "0.850" });
  });

  it("enters an amount with Enter, as typed, and counts it as unsaved until then (CAL-01)", () => {
    const { onSet, onCount } = show();
    const amount = screen.getByLabelText("Amount, row 1");
    fireEvent.change(amount, { target: { value: "0.100" } });
    expect(onSet).not.toHaveBeenCalled();
    expect(onCount).toHaveBeenLastCalledWith(1);
    fireEvent.keyDown(amount, { key: "Enter" });
    expect(onSet).toHaveBeenCalledWith("x1", { amount: "0.100" });
    expect(onCount).toHaveBeenLastCalledWith(0);
  });

  it("asks about an amount that can be read in two ways (CAL-02)", () => {
    const { onSet } = show({}, ".");
    const amount = screen.getByLabelText("Amount, row 1");
    fireEvent.change(amount, { target: { value: "1,000" } });
    fireEvent.keyDown(amount, { key: "Enter" });
    expect(onSet).not.toHaveBeenCalled();
    expect(screen.getByText(/two ways/)).toBeTruthy();
  });

  it("shows a refusal at its field and joins them", () => {
    const refusal = {
      code: "amount.negative" as const,
      field: "rows.r1.amount",
      value: "-1",
      text: "An amount cannot be negative.",
    };
    show({ errors: fieldErrors([refusal]) });
    const amount = screen.getByLabelText("Amount, row 1");
    expect(amount.getAttribute("aria-invalid")).toBe("true");
    const told = document.getElementById(amount.getAttribute("aria-describedby") ?? "");
    expect(told?.textContent).toContain("An amount cannot be negative.");
  });

  it("refuses a 41st row with words", () => {
    const onAdd = vi.fn(() => "new");
    show({ rows: Array.from({ length: 40 }, (_, index) => ({ ...row, id: `x${index}` })), onAdd });
    fireEvent.click(screen.getByRole("button", { name: "Add a row" }));
    expect(onAdd).not.toHaveBeenCalled();
    expect(screen.getByText(/at most 40 rows/)).toBeTruthy();
  });
});
