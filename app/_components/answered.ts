// What an action answered, as a form shows it: each sentence at its field, the rest above the button.
import type { FieldValues, Path, UseFormReturn } from "react-hook-form";
import type { Problem } from "../../components/query/http.ts";

export type Answered<T> = { ok: true; value: T } | { ok: false; problem: Problem };

/** Puts a problem where it belongs. What names no field of the form stands as the form's own error (`errors.root`). */
export function showProblem<Values extends FieldValues>(
  form: UseFormReturn<Values>,
  problem: Problem,
  fields: readonly Path<Values>[],
): void {
  const placed = fields.filter((field) => problem.fields?.[field] !== undefined);
  for (const field of placed)
    form.setError(field, { message: problem.fields?.[field] }, { shouldFocus: field === placed[0] });
  if (placed.length === 0) form.setError("root", { message: sentenceOf(problem) });
}

/** The problem in one or two sentences. */
export function sentenceOf(problem: Problem): string {
  const title = /[.!?]$/.test(problem.title) ? problem.title : `${problem.title}.`;
  const until = typeof problem.values?.until === "string" ? ` Open again at ${clock(problem.values.until)}.` : "";
  return `${title}${problem.detail === undefined ? "" : ` ${problem.detail}`}${until}`;
}

function clock(instant: string): string {
  return `${new Date(instant).toISOString().slice(11, 16)} UTC`;
}
