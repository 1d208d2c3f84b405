"use server";
import { z } from "zod";
import { setPreferences } from "../../../db/people.ts";
import { endOtherSessions, endSession } from "../../../db/sessions.ts";
import { changePassword } from "../../_server/account.ts";
import { answer } from "../../_server/answer.ts";
import { passwordChange, preferences, sessionChoice } from "./schema.ts";

export async function savePassword(raw: unknown) {
  return answer(passwordChange, raw, (actor, input, db) => changePassword(db, actor, input));
}

export async function savePreferences(raw: unknown) {
  return answer(preferences, raw, (actor, input, db) => setPreferences(db, actor, input));
}

export async function endOne(raw: unknown) {
  return answer(sessionChoice, raw, (actor, { sessionId }, db) => endSession(db, actor, sessionId));
}

export async function endOthers() {
  return answer(z.undefined(), undefined, (actor, _input, db) => endOtherSessions(db, actor));
}
