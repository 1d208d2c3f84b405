"use server";
import { join } from "../../_server/account.ts";
import { answerStranger } from "../../_server/answer.ts";
import { joinInput } from "./schema.ts";

export async function takePlace(raw: unknown) {
  return answerStranger(joinInput, raw, async (input, db, asked) => (await join(db, asked, input)).person);
}
