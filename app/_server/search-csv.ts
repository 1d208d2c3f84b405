// A search as a file. That it left the house is an event (RECORDS.md, "Audit trail").
import "server-only";
import { record } from "../../db/audit.ts";
import type { Db } from "../../db/client.ts";
import { csvText } from "../../db/csv.ts";
import type { Actor } from "../../db/policy.ts";
import { CSV_HEADER, csvCells, type SearchQuery, searchRows } from "../../db/search.ts";

/** Everything that the search finds for this person, as CSV. */
export async function searchCsv(db: Db, actor: Actor, query: SearchQuery, asked: string): Promise<Response> {
  const rows: ReturnType<typeof csvCells>[] = [];
  for await (const hit of searchRows(db, actor, query)) rows.push(csvCells(hit));
  await db.transaction((tx) =>
    record(tx, actor, "search.downloaded", {
      objectKind: "person",
      objectId: actor.id,
      detail: { count: rows.length, query: asked.slice(0, 500) },
    }),
  );
  return new Response(csvText(CSV_HEADER, rows), {
    headers: {
      "content-type": "text/csv; charset=utf-8; header=present",
      "content-disposition": 'attachment; filename="counterleaf-search.csv"',
    },
  });
}
