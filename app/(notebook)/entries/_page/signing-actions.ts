"use server";
import { checkRevision, markWhole, openRevision, returnToAuthor } from "../../../../db/witnessing.ts";
import { answer } from "../../../_server/answer.ts";
import { countersignAs, sign } from "../../../_server/vouching.ts";
import { countersigning, opening, returning, signing, whole } from "./signing-schema.ts";

export async function open(raw: unknown) {
  return answer(opening, raw, (actor, input, db) => openRevision(db, actor, input));
}

export async function readToTheEnd(raw: unknown) {
  return answer(whole, raw, (actor, input, db) => markWhole(db, actor, input));
}

export async function signNow(raw: unknown) {
  return answer(signing, raw, (actor, input, db) => sign(db, actor, input));
}

export async function check(raw: unknown) {
  return answer(opening, raw, (actor, input, db) => checkRevision(db, actor, input));
}

export async function countersignNow(raw: unknown) {
  return answer(countersigning, raw, (actor, input, db) => countersignAs(db, actor, input));
}

export async function giveBack(raw: unknown) {
  return answer(returning, raw, (actor, input, db) => returnToAuthor(db, actor, input));
}
