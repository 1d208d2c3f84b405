import { route } from "../../_server/answer.ts";
import { settings } from "../../_server/env.ts";
import { parseQuery, refuseLong } from "../../_server/request.ts";
import { sdkHandler } from "../../_server/uploads.ts";
import { UPLOAD_REQUEST_LIMIT_BYTES, uploadQuery } from "./schema.ts";

export const GET = route(async (_actor, { request }) => sdkHandler(settings().url)(request));

export const POST = route(async (_actor, { request }) => {
  parseQuery(uploadQuery, request.url);
  return sdkHandler(request.headers.get("origin") ?? settings().url)(
    await refuseLong(request, UPLOAD_REQUEST_LIMIT_BYTES),
  );
});
