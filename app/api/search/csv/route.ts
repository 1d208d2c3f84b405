import { route } from "../../../_server/answer.ts";
import { demandRate } from "../../../_server/rate.ts";
import { parseQuery } from "../../../_server/request.ts";
import { searchCsv } from "../../../_server/search-csv.ts";
import { searchAddress } from "./schema.ts";

const DOWNLOADS_A_MINUTE = 10;

export const GET = route(async (actor, { request, db }) => {
  const query = parseQuery(searchAddress, request.url);
  await demandRate(db, `csv:${actor.id}`, DOWNLOADS_A_MINUTE, 60_000);
  return searchCsv(db, actor, query, new URL(request.url).search);
});
