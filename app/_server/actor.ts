// Request → the person who acts. Authority ends with the session: idle too long, too old, ended elsewhere, account closed.
import "server-only";
import { headers } from "next/headers";
import { cache } from "react";
import { Refused } from "../../db/errors.ts";
import { actorOf } from "../../db/people.ts";
import type { Actor } from "../../db/policy.ts";
import { auth, sessionHeaders } from "./auth.ts";
import { database } from "./database.ts";
import { settings } from "./env.ts";

/** Whether what is asked counts as somebody being there. What a page does by itself (presence, streams) does not. */
export type Activity = "touch" | "none";

const TOUCH_EVERY_MS = 60_000;

/** The person behind these headers, or null. */
export async function findActor(asked: Headers, activity: Activity = "touch"): Promise<Actor | null> {
  const found = await (await auth()).api.getSession({
    headers: sessionHeaders(asked),
    query: { disableRefresh: true },
  });
  if (found === null) return null;
  const idleMs = Date.now() - found.session.updatedAt.getTime();
  if (idleMs > settings().sessionIdleMinutes * 60_000) {
    await (await (await auth()).$context).internalAdapter.deleteSession(found.session.token);
    return null;
  }
  const actor = await actorOf(await database(), { personId: found.user.id, sessionId: found.session.id });
  if (actor !== null && activity === "touch" && idleMs > TOUCH_EVERY_MS) {
    await (await (await auth()).$context).internalAdapter.updateSession(found.session.token, { updatedAt: new Date() });
  }
  return actor;
}

export async function requireActor(asked: Headers, activity: Activity = "touch"): Promise<Actor> {
  const actor = await findActor(asked, activity);
  if (actor === null) throw new Refused("session.ended");
  return actor;
}

/** For pages: who is signed in, asked once for each page. */
export const pageActor = cache(async (): Promise<Actor | null> => findActor(await headers()));
