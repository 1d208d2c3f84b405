import { tellPresence } from "../../../../../db/presence.ts";
import { route } from "../../../../_server/answer.ts";
import { namePresence } from "../../../../_server/presence.ts";
import { pathId, readJson } from "../../../../_server/request.ts";
import { presenceInput } from "./schema.ts";

// A tab renews its presence by itself, so it does not keep a session awake.
export const POST = route(async (actor, { request, params, db }) => {
  const id = pathId(params, "entry.not-found");
  const { bytes } = await readJson(request, presenceInput);
  const told = namePresence(actor, Buffer.from(bytes, "base64"));
  await tellPresence(db, actor, { revisionId: id, key: `${actor.sessionId}:${told.tab}`, bytes: told.bytes });
  return { told: true };
}, "none");
