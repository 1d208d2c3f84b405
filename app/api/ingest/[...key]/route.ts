import { route } from "../../../_server/answer.ts";
import { answerRange, takeFile } from "../../../_server/ingest.ts";

export const dynamic = "force-dynamic";

export const HEAD = route(async (actor, asked) => answerRange(actor, asked));
export const PUT = route(takeFile);
