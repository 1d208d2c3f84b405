// How it stands with what was typed, in one value and in words.

export type SaveStatus = {
  kind: "saved" | "saving" | "offline" | "refused" | "signed-out";
  /** changes that the server has not acknowledged */
  waiting: number;
  /** fields with text that is not committed yet */
  unsavedFields: number;
  detail?: string;
};

export const SAVED: SaveStatus = { kind: "saved", waiting: 0, unsavedFields: 0 };

/** The status in the product's words: "Saved", "Saving", "Offline, 3 changes kept on this device". */
export function wordsOfStatus(status: SaveStatus): string {
  const kept = status.waiting === 0 ? "" : `, ${countOf(status.waiting, "change")} kept on this device`;
  const fields = status.unsavedFields === 0 ? "" : `; ${countOf(status.unsavedFields, "field")} not entered yet`;
  switch (status.kind) {
    case "saved":
      return `Saved${fields}`;
    case "saving":
      return `Saving${fields}`;
    case "offline":
      return `Offline${kept}${fields}`;
    case "signed-out":
      return `Signed out${kept}${fields}`;
    case "refused":
      return `Not taken${kept}${fields}`;
  }
}

function countOf(count: number, noun: string): string {
  return `${count} ${noun}${count === 1 ? "" : "s"}`;
}
