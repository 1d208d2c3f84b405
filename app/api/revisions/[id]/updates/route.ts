import { appendUpdate } from "../../../../../db/updates.ts";
import { route } from "../../../../_server/answer.ts";
import { parse, pathId, readOctets } from "../../../../_server/request.ts";
import { UPDATE_LIMIT_BYTES, updateId } from "./schema.ts";

export const POST = route(async (actor, { request, params, db }) =>
  appendUpdate(db, actor, {
    revisionId: pathId(params, "entry.not-found"),
    updateId: parse(updateId, request.headers.get("x-update-id")),
    bytes: await readOctets(request, UPDATE_LIMIT_BYTES),
  }),
);
