"use server";
import { answerStranger } from "../../_server/answer.ts";
import { signIn } from "../../_server/sign-in.ts";
import { signInInput } from "./schema.ts";

export async function enter(raw: unknown) {
  return answerStranger(signInInput, raw, async (input, db, asked) => {
    const { person } = await signIn(db, asked, input);
    return person;
  });
}
