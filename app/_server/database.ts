// The one place that opens the database: once a process, never while Next builds.
import "server-only";
import { type Database, type Db, openDatabase } from "../../db/client.ts";
import { importLibrary } from "../../db/seed/library.ts";
import { settings } from "./env.ts";
import { onClose } from "./process-state.ts";

declare global {
  var counterleafStore: Promise<Database> | undefined;
}

/** The opened store, migrated, with the library in it. */
export function store(): Promise<Database> {
  if (process.env.NEXT_PHASE === "phase-production-build") {
    throw new Error("The database is not opened while the pages are built: the page has to be dynamic.");
  }
  globalThis.counterleafStore ??= open();
  return globalThis.counterleafStore;
}

export async function database(): Promise<Db> {
  return (await store()).db;
}

async function open(): Promise<Database> {
  const opened = await openDatabase(settings().databaseUrl);
  onClose(() => opened.close());
  try {
    await opened.migrate();
    await importLibrary(opened.db);
  } catch (fault) {
    await opened.close();
    throw fault;
  }
  return opened;
}
