// For pages: the person, the store, and a refusal to read turned into the page "nothing here".
import "server-only";
import { notFound, redirect } from "next/navigation";
import type { Db } from "../../db/client.ts";
import { Refused } from "../../db/errors.ts";
import type { Actor } from "../../db/policy.ts";
import { pageActor } from "./actor.ts";
import { database } from "./database.ts";

/** Reads for a page. What may not be read and what does not exist are answered alike. */
export async function readForPage<T>(read: (actor: Actor, db: Db) => Promise<T>): Promise<{ actor: Actor; read: T }> {
  const actor = await pageActor();
  if (actor === null) redirect("/sign-in");
  try {
    return { actor, read: await read(actor, await database()) };
  } catch (error) {
    if (error instanceof Refused && /[.](not-found|forbidden)$/.test(error.code)) notFound();
    throw error;
  }
}
