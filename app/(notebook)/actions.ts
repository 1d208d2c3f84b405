"use server";
import { headers } from "next/headers";
import { z } from "zod";
import { answer } from "../_server/answer.ts";
import { signOut } from "../_server/sign-in.ts";

export async function leave() {
  return answer(z.undefined(), undefined, async (actor, _input, db) => {
    await signOut(db, await headers(), actor);
  });
}
