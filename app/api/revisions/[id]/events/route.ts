import { route } from "../../../../_server/answer.ts";
import { openStream } from "../../../../_server/live.ts";
import { pathId } from "../../../../_server/request.ts";

export const dynamic = "force-dynamic";

// An open page alone does not keep a session awake.
export const GET = route(
  async (actor, { request, params }) => openStream(actor, pathId(params, "entry.not-found"), request),
  "none",
);
