import { keptSolves } from "../../../../db/results.ts";
import { route } from "../../../_server/answer.ts";
import { parseQuery } from "../../../_server/request.ts";
import { keptQuery } from "./schema.ts";

export const GET = route(async (actor, { request, db }) => {
  const { revision, block } = parseQuery(keptQuery, request.url);
  return { solves: await keptSolves(db, actor, { revisionId: revision, blockId: block }) };
});
