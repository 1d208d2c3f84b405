"use server";
import { closePerson, grantRole, revokeRole } from "../../../../db/people.ts";
import { beginResetFor, invite } from "../../../_server/account.ts";
import { answer } from "../../../_server/answer.ts";
import { invitation, overPerson, roleChange } from "./schema.ts";

export async function invitePerson(raw: unknown) {
  return answer(invitation, raw, (actor, input, db) => invite(db, actor, input));
}

export async function giveRole(raw: unknown) {
  return answer(roleChange, raw, (actor, input, db) => grantRole(db, actor, input));
}

export async function takeRole(raw: unknown) {
  return answer(roleChange, raw, (actor, input, db) => revokeRole(db, actor, input));
}

export async function closeAccount(raw: unknown) {
  return answer(overPerson, raw, (actor, input, db) => closePerson(db, actor, input));
}

export async function startReset(raw: unknown) {
  return answer(overPerson, raw, (actor, input, db) => beginResetFor(db, actor, input));
}
