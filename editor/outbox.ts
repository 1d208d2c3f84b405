// What was typed and is not acknowledged yet, kept on this device until it is: one record an update, under the person who typed it
// and the revision it belongs to, so that nobody else who signs in on the same device is offered it.

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

const DATABASE = "counterleaf";
const STORE = "waiting";

/** Opens this person's records of one revision in IndexedDB. Rejects when the device refuses to keep anything. */
export async function openOutbox(personId: string, revisionId: string): Promise<Outbox> {
  const database = await openDatabase();
  const owner = JSON.stringify([personId, revisionId]);
  const inStore = <T>(mode: IDBTransactionMode, act: (store: IDBObjectStore) => IDBRequest<T>): Promise<T> =>
    new Promise((resolve, reject) => {
      const transaction = database.transaction(
        STORE,
        mode,
        mode === "readwrite" ? { durability: "strict" } : undefined,
      );
      const request = act(transaction.objectStore(STORE));
      transaction.oncomplete = () => resolve(request.result);
      transaction.onabort = () => reject(transaction.error ?? new Error("The device did not keep the change."));
    });
  return {
    async list() {
      const range = IDBKeyRange.bound([owner], [owner, []]);
      const records: unknown[] = await inStore("readonly", (store) => store.getAll(range));
      return records.filter(isWaiting).sort((a, b) => a.at - b.at);
    },
    async put(update) {
      await inStore("readwrite", (store) => store.put({ owner, ...update }));
    },
    async remove(ids) {
      for (const id of ids) await inStore("readwrite", (store) => store.delete([owner, id]));
    },
    close: () => database.close(),
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

function openDatabase(): Promise<IDBDatabase> {
  return new Promise((resolve, reject) => {
    const request = indexedDB.open(DATABASE, 1);
    request.onupgradeneeded = () => request.result.createObjectStore(STORE, { keyPath: ["owner", "id"] });
    request.onsuccess = () => {
      // A later version of the program may want to change the store: it need not wait for this tab.
      request.result.onversionchange = () => request.result.close();
      resolve(request.result);
    };
    request.onerror = () => reject(request.error ?? new Error("The device's store cannot be opened."));
    request.onblocked = () => reject(new Error("The device's store is held by an older tab."));
  });
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
