// This device's store of what is not with the server yet. Two lists: changes on their way, and text of fields that was not entered.

const DATABASE = "counterleaf";
const VERSION = 2;
const KEYS = { waiting: ["owner", "id"], fields: ["owner", "field"] } as const;
export type StoreName = keyof typeof KEYS;

/** One list as one writer sees it, for one revision: nobody else who signs in on the same device is offered it. */
export type DeviceStore = {
  readonly owner: string;
  all(): Promise<unknown[]>;
  put(record: object): Promise<void>;
  remove(key: string): Promise<void>;
  close(): void;
};

/** Opens this person's records of one revision. Rejects when the device refuses to keep anything. */
export async function openDevice(name: StoreName, personId: string, revisionId: string): Promise<DeviceStore> {
  const database = await openDatabase();
  const owner = JSON.stringify([personId, revisionId]);
  const inStore = <T>(mode: IDBTransactionMode, act: (store: IDBObjectStore) => IDBRequest<T>): Promise<T> =>
    new Promise((resolve, reject) => {
      const transaction = database.transaction(name, mode, mode === "readwrite" ? { durability: "strict" } : undefined);
      const request = act(transaction.objectStore(name));
      transaction.oncomplete = () => resolve(request.result);
      transaction.onabort = () => reject(transaction.error ?? new Error("The device did not keep the change."));
      // A page that is going does not live to see the request answered, and what is not committed by then is dropped.
      if (mode === "readwrite") transaction.commit();
    });
  return {
    owner,
    all: () => inStore<unknown[]>("readonly", (store) => store.getAll(IDBKeyRange.bound([owner], [owner, []]))),
    async put(record) {
      await inStore("readwrite", (store) => store.put({ owner, ...record }));
    },
    async remove(key) {
      await inStore("readwrite", (store) => store.delete([owner, key]));
    },
    close: () => database.close(),
  };
}

function openDatabase(): Promise<IDBDatabase> {
  return new Promise((resolve, reject) => {
    const request = indexedDB.open(DATABASE, VERSION);
    request.onupgradeneeded = () => {
      const { result } = request;
      if (!result.objectStoreNames.contains("waiting"))
        result.createObjectStore("waiting", { keyPath: [...KEYS.waiting] });
      if (!result.objectStoreNames.contains("fields"))
        result.createObjectStore("fields", { keyPath: [...KEYS.fields] });
    };
    request.onsuccess = () => {
      // A later version of the program may want to change the store: it need not wait for this tab.
      request.result.onversionchange = () => request.result.close();
      resolve(request.result);
    };
    request.onerror = () => reject(request.error ?? new Error("The device's store cannot be opened."));
    request.onblocked = () => reject(new Error("The device's store is held by an older tab."));
  });
}
