import { sweepBlock } from "../../../chem/index.ts";
import { resultFor } from "../../../db/results.ts";
import { route } from "../../_server/answer.ts";
import { readJson } from "../../_server/request.ts";
import { RESULT_LIMIT_BYTES, resultInput } from "./schema.ts";

// A page solves its blocks by itself when it is opened, so this alone does not keep a session awake.
export const POST = route(async (actor, { request, db }) => {
  const { sweeps, ...asked } = await readJson(request, resultInput, RESULT_LIMIT_BYTES);
  const { input, key, engine, outcome, cautions, hazards } = await resultFor(db, actor, asked);
  const drawn = sweeps && input !== null && outcome.ok ? sweepBlock(input, outcome.value) : null;
  return { key, engine, outcome, sweeps: drawn, cautions, hazards };
}, "none");
