"use server";
import { addMember, createNotebook, removeMember } from "../../../../db/notebooks.ts";
import { answer } from "../../../_server/answer.ts";
import { membership, notebookInput } from "./schema.ts";

export async function makeNotebook(raw: unknown) {
  return answer(notebookInput, raw, (actor, input, db) => createNotebook(db, actor, input));
}

export async function takeIn(raw: unknown) {
  return answer(membership, raw, (actor, input, db) => addMember(db, actor, input));
}

export async function takeOut(raw: unknown) {
  return answer(membership, raw, (actor, input, db) => removeMember(db, actor, input));
}
