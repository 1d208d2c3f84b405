// The stand-in's receiving end: a signed address, the form with one file, the bytes into the store, the SDK told.
import "server-only";
import { z } from "zod";
import { storeAttachment } from "../../db/attachments.ts";
import { Refused } from "../../db/errors.ts";
import type { Actor } from "../../db/policy.ts";
import type { Asked } from "./answer.ts";
import { settings } from "./env.ts";
import { MalformedForm, readFilePart } from "./multipart.ts";
import { demandRate } from "./rate.ts";
import { finishUpload, readTicket, type UploadTicket } from "./uploads.ts";

const TRIES_A_LINK = 5;
/** What a form adds to its file: boundary, headers, the name. */
const FORM_BYTES = 16_384;

/** Takes the file that a signed address was given for. The answer is what the SDK's browser half waits for. */
export async function takeFile(actor: Actor, { request, db }: Pick<Asked, "request" | "db">): Promise<object> {
  const ticket = ticketOf(actor, request);
  await demandRate(db, `upload:${ticket.key}`, TRIES_A_LINK, 3_600_000);
  const announced = request.headers.get("content-length");
  if (announced !== null && Number(announced) > ticket.size + FORM_BYTES)
    throw new Refused("attachment.length-differs", { announced: ticket.size });
  if (request.body === null) throw new Refused("attachment.empty");
  try {
    const part = await readFilePart(request.body, request.headers.get("content-type"));
    const stored = await storeAttachment(db, actor, {
      revisionId: ticket.revisionId,
      name: ticket.name,
      announcedType: ticket.type,
      announcedSize: ticket.size,
      stream: part.bytes,
    });
    return finishUpload(request.headers.get("origin") ?? settings().url, ticket, stored);
  } catch (error) {
    if (error instanceof MalformedForm) throw new Refused("attachment.length-differs", { announced: ticket.size });
    throw error;
  }
}

/** Nothing of a file is kept half, so a file always begins at its beginning. */
export function answerRange(actor: Actor, { request }: Pick<Asked, "request">): Response {
  ticketOf(actor, request);
  return new Response(null, { headers: { "x-ut-range-start": "0" } });
}

/**
 * A refusal as the SDK's browser half can pass it on. Of another status it keeps only the number, so what it sent itself (it
 * says its version) is answered with `error`, the sentence, under 200; anybody else gets the problem as it is.
 */
export async function answerSdk(request: Request, answer: Response): Promise<Response> {
  if (answer.ok || !request.headers.has("x-uploadthing-version")) return answer;
  const problem = problemWords.parse(await answer.json());
  const headers = new Headers(answer.headers);
  headers.set("content-type", "application/json");
  return new Response(
    JSON.stringify({
      error: problem.detail === undefined ? problem.title : `${problem.title}. ${problem.detail}`,
      problem,
    }),
    { headers },
  );
}

const problemWords = z.looseObject({ title: z.string(), detail: z.string().optional() });

function ticketOf(actor: Actor, request: Request): UploadTicket {
  const ticket = readTicket(request.url, settings().origins);
  // The address was made for one person: in another's hands it is good for nothing.
  if (ticket.personId !== actor.id) throw new Refused("request.not-found");
  return ticket;
}
