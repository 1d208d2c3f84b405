import { strikeAttachment } from "../../../../../db/attachments.ts";
import { route } from "../../../../_server/answer.ts";
import { pathId, readJson } from "../../../../_server/request.ts";
import { strikeInput } from "./schema.ts";

export const POST = route(async (actor, { request, params, db }) => {
  const attachmentId = pathId(params, "attachment.not-found");
  await strikeAttachment(db, actor, { attachmentId, ...(await readJson(request, strikeInput)) });
  return { struck: true };
});
