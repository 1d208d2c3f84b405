"use server";
import { assignWitness } from "../../../../db/entries.ts";
import { answer } from "../../../_server/answer.ts";
import { assignment } from "./schema.ts";

export async function assign(raw: unknown) {
  return answer(assignment, raw, (actor, input, db) => assignWitness(db, actor, input));
}
