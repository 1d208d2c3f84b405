import { strayUpdates } from "../../../../../db/updates.ts";
import { route } from "../../../../_server/answer.ts";
import { pathId } from "../../../../_server/request.ts";

export const GET = route(async (actor, { params, db }) => ({
  updates: await strayUpdates(db, actor, pathId(params, "entry.not-found")),
}));
