"use server";
// Acts that are offered in more than one place.
import { headers } from "next/headers";
import { z } from "zod";
import { beginEntry } from "../../db/entries.ts";
import { confirmIdentity } from "../../db/people.ts";
import { answer } from "../_server/answer.ts";
import { signOut } from "../_server/sign-in.ts";
import { beginInput, identityWords } from "./schema.ts";

export async function leave() {
  return answer(z.undefined(), undefined, async (actor, _input, db) => {
    await signOut(db, await headers(), actor);
  });
}

export async function begin(raw: unknown) {
  return answer(beginInput, raw, (actor, input, db) => beginEntry(db, actor, input));
}

export async function confirmPerson(raw: unknown) {
  return answer(identityWords, raw, (actor, input, db) => confirmIdentity(db, actor, input));
}
