"use server";
import { resetPassword } from "../../_server/account.ts";
import { answerStranger } from "../../_server/answer.ts";
import { resetInput } from "./schema.ts";

export async function setPassword(raw: unknown) {
  return answerStranger(resetInput, raw, (input, db) => resetPassword(db, input));
}
