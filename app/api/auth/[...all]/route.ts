// Of the sign-in library's own paths none is open: sign-in would pass by the failure counter, and others would tell or do more
// than a page needs. What a page needs is here.
import { Refused } from "../../../../db/errors.ts";
import { findActor, requireActor } from "../../../_server/actor.ts";
import { openRoute } from "../../../_server/answer.ts";
import { readJson } from "../../../_server/request.ts";
import { signIn, signOut } from "../../../_server/sign-in.ts";
import { signInInput } from "./schema.ts";

export const dynamic = "force-dynamic";

export const GET = openRoute(async ({ request, params }) => {
  if (pathOf(params) !== "session") throw new Refused("request.not-found");
  const actor = await findActor(request.headers, "none");
  return { person: actor === null ? null : { id: actor.id, printedName: actor.printedName } };
});

export const POST = openRoute(async ({ request, params, db }) => {
  const path = pathOf(params);
  if (path === "sign-in") {
    const { person, cookies } = await signIn(db, request.headers, await readJson(request, signInInput));
    return withCookies({ person }, cookies);
  }
  if (path === "sign-out") {
    const { cookies } = await signOut(db, request.headers, await requireActor(request.headers));
    return withCookies({ person: null }, cookies);
  }
  throw new Refused("request.not-found");
});

function pathOf(params: Record<string, string | string[]>): string {
  return [params.all ?? ""].flat().join("/");
}

function withCookies(value: object, cookies: string[]): Response {
  const response = Response.json(value);
  for (const cookie of cookies) response.headers.append("set-cookie", cookie);
  return response;
}
