// What was typed and is not acknowledged yet, kept on this device until it is: one record an update, under the person who typed it
// and the revision it belongs to, so that nobody else who signs in on the same device is offered it.
import { openDevice } from "./device.ts";

export type Waiting = {
  /** the id under which it is posted; a repeat is answered with the first one's number */
  id: string;
  bytes: Uint8Array;
  /** the tab that typed it */
  tab: string;
  /** order within the owner's records, and device time, for nothing but order */
  at: number;
};

export type Outbox = {
  /** All that waits for this person and revision, oldest first. */
  list(): Promise<Waiting[]>;
  put(update: Waiting): Promise<void>;
  remove(ids: readonly string[]): Promise<void>;
  close(): void;
};

/** Opens this person's records of one revision in IndexedDB. Rejects when the device refuses to keep anything. */
export async function openOutbox(personId: string, revisionId: string): Promise<Outbox> {
  const store = await openDevice("waiting", personId, revisionId);
  return {
    async list() {
      return (await store.all()).filter(isWaiting).sort((a, b) => a.at - b.at);
    },
    put: (update) => store.put(update),
    async remove(ids) {
      for (const id of ids) await store.remove(id);
    },
    close: () => store.close(),
  };
}

/** The same in memory: where the device keeps nothing, and in tests. */
export function memoryOutbox(records = new Map<string, Waiting>()): Outbox {
  return {
    list: async () => [...records.values()].sort((a, b) => a.at - b.at),
    put: async (update) => {
      records.set(update.id, update);
    },
    remove: async (ids) => {
      for (const id of ids) records.delete(id);
    },
    close: () => undefined,
  };
}

function isWaiting(value: unknown): value is Waiting {
  return (
    typeof value === "object" &&
    value !== null &&
    "id" in value &&
    typeof value.id === "string" &&
    "bytes" in value &&
    value.bytes instanceof Uint8Array &&
    "tab" in value &&
    typeof value.tab === "string" &&
    "at" in value &&
    typeof value.at === "number"
  );
}
