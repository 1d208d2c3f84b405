import { route } from "../../../_server/answer.ts";
import { answerRange, answerSdk, takeFile } from "../../../_server/ingest.ts";

export const dynamic = "force-dynamic";

const take = route(takeFile);

export const HEAD = route(async (actor, asked) => answerRange(actor, asked));
export const PUT: typeof take = async (request, context) => answerSdk(request, await take(request, context));
