"use server";
import { requestReset } from "../../_server/account.ts";
import { answerStranger } from "../../_server/answer.ts";
import { forgottenInput } from "./schema.ts";

export async function askForLink(raw: unknown) {
  return answerStranger(forgottenInput, raw, (input, db) => requestReset(db, input));
}
