import { compoundItems, searchCompounds } from "../../../db/compounds.ts";
import { route } from "../../_server/answer.ts";
import { parseQuery } from "../../_server/request.ts";
import { compoundsQuery } from "./schema.ts";

export const GET = route(async (_actor, { request, db }) => {
  const query = parseQuery(compoundsQuery, request.url);
  return "ids" in query ? { items: await compoundItems(db, query.ids) } : searchCompounds(db, query.q, query.limit);
});
