"use server";
import { beginEntry } from "../../../../db/entries.ts";
import { answer } from "../../../_server/answer.ts";
import { beginInput } from "../../../_components/begin-schema.ts";

export async function begin(raw: unknown) {
  return answer(beginInput, raw, (actor, input, db) => beginEntry(db, actor, input));
}
