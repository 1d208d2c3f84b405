import { readHead } from "../../../db/audit.ts";
import { openRoute } from "../../_server/answer.ts";

export const dynamic = "force-dynamic";

/** Whether the store answers. Says nothing about what is in it. */
export const GET = openRoute(async ({ db }) => {
  await readHead(db);
  return { status: "ok" };
});
