// Text that stands in a field and was not entered yet, kept on this device under its writer and its revision until it is entered
// or left, and offered again in the same field.
import { openDevice } from "./device.ts";

export type FieldKeep = {
  /** what was typed into the field and not entered, or null */
  textOf(field: string): string | null;
  /** keeps the field's text; null forgets it */
  keep(field: string, text: string | null): void;
  close(): void;
};

/** Opens what this device has of one person's fields of one revision. Rejects when the device refuses to keep anything. */
export async function openFieldKeep(personId: string, revisionId: string): Promise<FieldKeep> {
  const store = await openDevice("fields", personId, revisionId);
  const texts = new Map((await store.all()).filter(isKept).map(({ field, text }) => [field, text]));
  return {
    textOf: (field) => texts.get(field) ?? null,
    keep(field, text) {
      if ((texts.get(field) ?? null) === text) return;
      if (text === null) texts.delete(field);
      else texts.set(field, text);
      // A device that is full keeps it no longer than the page is open; it is still in the field.
      (text === null ? store.remove(field) : store.put({ field, text })).catch(() => undefined);
    },
    close: () => store.close(),
  };
}

function isKept(value: unknown): value is { field: string; text: string } {
  return (
    typeof value === "object" &&
    value !== null &&
    "field" in value &&
    typeof value.field === "string" &&
    "text" in value &&
    typeof value.text === "string"
  );
}
