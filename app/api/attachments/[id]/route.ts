import { readAttachment } from "../../../../db/attachments.ts";
import { route } from "../../../_server/answer.ts";
import { fileResponse } from "../../../_server/download.ts";
import { pathId } from "../../../_server/request.ts";

export const GET = route(async (actor, { params, db }) =>
  fileResponse(await readAttachment(db, actor, pathId(params, "attachment.not-found"))),
);
