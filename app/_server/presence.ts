// A tab's word about itself. Who it is, is not left to it: the name and the id are put in here.
import "server-only";
import { modifyAwarenessUpdate } from "y-protocols/awareness";
import { z } from "zod";
import { Refused } from "../../db/errors.ts";
import type { Actor } from "../../db/policy.ts";

const state = z.record(z.string(), z.unknown()).nullable();
const user = z.record(z.string(), z.unknown());

/** The same word in the actor's name, with the number of the tab that it is about. Refuses what speaks for more than one tab. */
export function namePresence(
  actor: Pick<Actor, "id" | "printedName">,
  bytes: Uint8Array,
): { tab: number; bytes: Uint8Array } {
  const [count, afterCount] = readNumber(bytes, 0);
  const [tab] = readNumber(bytes, afterCount);
  if (count !== 1) throw new Refused("update.invalid", { reason: "A tab speaks for itself only." });
  try {
    return { tab, bytes: modifyAwarenessUpdate(bytes, (told: unknown) => named(actor, state.parse(told))) };
  } catch {
    throw new Refused("update.invalid", { reason: "The presence cannot be read." });
  }
}

function named(
  actor: Pick<Actor, "id" | "printedName">,
  told: Record<string, unknown> | null,
): Record<string, unknown> | null {
  if (told === null) return null;
  const given = user.safeParse(told.user);
  return { ...told, user: { ...(given.success ? given.data : {}), id: actor.id, name: actor.printedName } };
}

/** A variable-length number as the protocol writes it: seven bits a byte, the lowest first. */
function readNumber(bytes: Uint8Array, from: number): [number, number] {
  let value = 0;
  for (let at = from; at < Math.min(bytes.length, from + 8); at += 1) {
    const byte = bytes[at] ?? 0;
    value += (byte & 0x7f) * 2 ** (7 * (at - from));
    if (byte < 0x80) return [value, at + 1];
  }
  throw new Refused("update.invalid", { reason: "The presence cannot be read." });
}
