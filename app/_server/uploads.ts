// Files come through the upload SDK; its hosted service is played by this process. The SDK hands the browser a signed address of
// ours, the browser sends the file there, the bytes go into the database, and the SDK's own callback tells the browser the rest.
// What the service would be told over HTTP it is told by a function call, so no address of another host is ever asked.
//
// Nothing is remembered between the two requests: what matters stands in the signed address, so any server may take the file.
import "server-only";
import { createHmac, hkdfSync, timingSafeEqual } from "node:crypto";
import { createRouteHandler, createUploadthing, UploadThingError, UTFiles } from "uploadthing/server";
import { z } from "zod";
import { LARGEST_FILE_BYTES, type StoredFile } from "../../db/attachments.ts";
import { Refused } from "../../db/errors.ts";
import { demand } from "../../db/policy.ts";
import { findRevision } from "../../db/subjects.ts";
import { requireActor } from "./actor.ts";
import { database } from "./database.ts";
import { settings } from "./env.ts";
import { problemOf } from "./problem.ts";

export const UPLOAD_PATH = "/api/uploadthing";
export const INGEST_PATH = "/api/ingest";
const APP_ID = "counterleaf";
const LINK_SECONDS = 600;

/** What a signed address says. */
export type UploadTicket = {
  key: string;
  name: string;
  size: number;
  type: string;
  revisionId: string;
  personId: string;
  text: string;
};

const builder = createUploadthing({ errorFormatter: (error) => ({ message: error.message }) });

const router = {
  attachment: builder(
    { blob: { maxFileSize: "32MB", maxFileCount: 1 } },
    { presignedURLTTL: LINK_SECONDS, awaitServerData: true },
  )
    .input(z.strictObject({ revisionId: z.uuid() }))
    .middleware(async ({ req, input, files }) => {
      try {
        const actor = await requireActor(req.headers);
        const [file] = files;
        if (file === undefined || files.length > 1) throw new Refused("attachment.too-many");
        if (file.size > LARGEST_FILE_BYTES) throw new Refused("attachment.too-large", { limit: LARGEST_FILE_BYTES });
        if (file.size === 0) throw new Refused("attachment.empty");
        const { revision, actor: now } = await findRevision(await database(), actor, input.revisionId);
        demand(now, "attachment.store", revision.subject);
        return { [UTFiles]: [{ ...file, customId: `${input.revisionId}.${actor.id}` }], revisionId: input.revisionId };
      } catch (error) {
        throw error instanceof Refused ? spoken(error) : error;
      }
    })
    // The stand-in has stored the bytes before it calls; what it found is handed through to the browser.
    .onUploadComplete(({ metadata }) => storedShape.parse(metadata)),
};

const storedShape = z.object({
  id: z.string(),
  name: z.string(),
  size: z.number(),
  sha256: z.string(),
  type: z.string().nullable(),
});
type Stored = z.infer<typeof storedShape>;

const handlers = new Map<string, (request: Request) => Promise<Response>>();
const results = new Map<string, Stored>();

/** The SDK's own route, for pages that were opened under this origin. */
export function sdkHandler(origin: string): (request: Request) => Promise<Response> {
  const known = handlers.get(origin);
  if (known !== undefined) return known;
  const token = Buffer.from(JSON.stringify({ apiKey: apiKey(), appId: APP_ID, regions: ["here"] })).toString("base64");
  const made = createRouteHandler({
    router,
    config: {
      token,
      ingestUrl: origin + INGEST_PATH,
      callbackUrl: origin + UPLOAD_PATH,
      isDev: false,
      handleDaemonPromise: "await",
      logLevel: "None",
      fetch: playService,
    },
  });
  handlers.set(origin, made);
  return made;
}

/** What a signed address names, when the signature is ours and its time is not over. */
export function readTicket(address: string, origins: readonly string[]): UploadTicket {
  const { pathname, search } = new URL(address);
  const [, signed, signature] = /^(\?.*)&signature=([^&]+)$/.exec(search) ?? [];
  if (signed === undefined || signature === undefined) throw new Refused("request.not-found");
  const given = Buffer.from(decodeURIComponent(signature));
  const isOurs = origins.some((origin) => sameBytes(given, Buffer.from(sign(origin + pathname + signed))));
  const named = new URLSearchParams(signed);
  if (!isOurs || Number(named.get("expires")) < Date.now()) throw new Refused("request.not-found");
  // The SDK escapes each value once more than the address itself needs.
  const value = (name: string) => decodeURIComponent(named.get(name) ?? "");
  const [revisionId = "", personId = ""] = value("x-ut-custom-id").split(".");
  return {
    key: decodeURIComponent(pathname.slice(INGEST_PATH.length + 1)),
    name: value("x-ut-file-name"),
    size: Number(value("x-ut-file-size")),
    type: value("x-ut-file-type"),
    revisionId,
    personId,
    text: value("x-ut-custom-id"),
  };
}

/** Tells the SDK that the file is here, as the service would, and answers what the browser's upload waits for. */
export async function finishUpload(origin: string, ticket: UploadTicket, stored: StoredFile): Promise<object> {
  const url = `${origin}/api/attachments/${stored.id}`;
  const file = {
    key: ticket.key,
    name: ticket.name,
    size: ticket.size,
    type: ticket.type,
    customId: ticket.text,
    url,
    appUrl: url,
    ufsUrl: url,
    fileHash: stored.sha256,
  };
  const metadata: Stored = {
    id: stored.id,
    name: stored.name,
    size: stored.size,
    sha256: stored.sha256,
    type: stored.type,
  };
  const body = JSON.stringify({ status: "uploaded", metadata, file, origin: origin + INGEST_PATH });
  const answer = await sdkHandler(origin)(
    new Request(`${origin}${UPLOAD_PATH}?slug=attachment`, {
      method: "POST",
      headers: {
        "content-type": "application/json",
        "uploadthing-hook": "callback",
        "x-uploadthing-signature": sign(body),
      },
      body,
    }),
  );
  const serverData = results.get(ticket.key);
  results.delete(ticket.key);
  if (!answer.ok || serverData === undefined) throw new Error("The upload SDK did not take the callback.");
  return { url, appUrl: url, ufsUrl: url, fileHash: stored.sha256, serverData };
}

const callbackResult = z.object({ fileKey: z.string(), callbackData: storedShape });

/** The hosted service as the SDK sees it: it registers what is to come, and takes the answer of a callback. */
const playService: typeof fetch = async (input, init) => {
  const request = new Request(input, init);
  const { pathname } = new URL(request.url);
  const key = Buffer.from(request.headers.get("x-uploadthing-api-key") ?? "");
  if (request.method !== "POST" || !sameBytes(key, Buffer.from(apiKey()))) return new Response(null, { status: 403 });
  if (pathname === `${INGEST_PATH}/callback-result`) {
    const told = callbackResult.parse(await request.json());
    results.set(told.fileKey, told.callbackData);
  } else if (pathname !== `${INGEST_PATH}/route-metadata`) return new Response(null, { status: 404 });
  return Response.json({ ok: true });
};

/** The SDK's errors carry one sentence: the problem's own. */
function spoken(refused: Refused): UploadThingError {
  const { title, detail, status } = problemOf(refused.code, "");
  const code =
    status === 404
      ? "NOT_FOUND"
      : status === 413
        ? "TOO_LARGE"
        : status === 401 || status === 403
          ? "FORBIDDEN"
          : "BAD_REQUEST";
  return new UploadThingError({ code, message: detail === undefined ? `${title}.` : `${title}. ${detail}` });
}

function apiKey(): string {
  return `sk_live_${Buffer.from(hkdfSync("sha256", settings().secret, "", "counterleaf uploads 1", 32)).toString("hex")}`;
}

function sign(text: string): string {
  return `hmac-sha256=${createHmac("sha256", apiKey()).update(text).digest("hex")}`;
}

function sameBytes(a: Buffer, b: Buffer): boolean {
  return a.length === b.length && timingSafeEqual(a, b);
}
