import { createHash } from "node:crypto";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { disposition } from "../../app/_server/download.ts";
import { GET as download } from "../../app/api/attachments/[id]/route.ts";
import { POST as strike } from "../../app/api/attachments/[id]/strike/route.ts";
import { HEAD as head, PUT as put } from "../../app/api/ingest/[...key]/route.ts";
import { POST as begin, GET as configuration } from "../../app/api/uploadthing/route.ts";
import { listAttachments } from "../../db/attachments.ts";
import { ask, type House, ORIGIN, openHouse, type Visitor } from "./house.ts";

let house: House;
let author: Visitor;
let colleague: Visitor;
let witness: Visitor;
let outsider: Visitor;
let revisionId: string;

beforeAll(async () => {
  house = await openHouse();
  author = await house.visitor("R. Okafor", ["researcher"], true);
  colleague = await house.visitor("L. Brandt", ["researcher"], true);
  witness = await house.visitor("M. Ferrante", ["witness"], true);
  outsider = await house.visitor("K. Amsel", ["researcher"], false);
  revisionId = (await house.draft(author)).revisionId;
});
afterAll(() => house.close());

// A PNG of one pixel, from memory of the format: signature, IHDR, IDAT, IEND.
const PNG = Buffer.from(
  "iVBORw0KGgoAAAANSUhEUgAAAAEAAAABCAYAAAAfFcSJAAAADUlEQVR42mNk+M9QDwADhgGAWjR9awAAAABJRU5ErkJggg==",
  "base64",
);
type File = { name: string; type: string; bytes: Buffer; size?: number };

/** As the SDK's browser half does: asks for an address. */
async function announce(visitor: Visitor, { name, type, bytes, size = bytes.length }: File, revision = revisionId) {
  const answer = await ask(begin, "/api/uploadthing?actionType=upload&slug=attachment", {
    cookie: visitor.cookie,
    json: { input: { revisionId: revision }, files: [{ name, type, size, lastModified: 1 }] },
  });
  return { status: answer.status, body: await answer.json() };
}

function form({ name, type, bytes }: File): FormData {
  const data = new FormData();
  data.append("file", new File([new Uint8Array(bytes)], name, { type }));
  return data;
}

async function send(visitor: Visitor, url: string, file: File) {
  const answer = await ask(put, url.slice(ORIGIN.length), { cookie: visitor.cookie, method: "PUT", body: form(file) });
  return { status: answer.status, body: await answer.json() };
}

async function upload(file: File) {
  const { body } = await announce(author, file);
  return send(author, body[0].url, file);
}

const kept = async () => (await listAttachments(house.store.db, author.actor, revisionId)).map((file) => file.name);
const fetchFile = (visitor: Visitor, id: string) =>
  ask(download, `/api/attachments/${id}`, { cookie: visitor.cookie, params: { id } });

describe("an upload", () => {
  it("goes through the SDK and its stand-in, and answers length and SHA-256 of what came (FIL-01)", async () => {
    const file = { name: "print-out 3 µm.png", type: "image/png", bytes: PNG };
    const announced = await announce(author, file);
    expect(announced.status).toBe(200);
    const [{ url }] = announced.body;
    expect(url).toMatch(/^https:\/\/notebook[.]example\/api\/ingest\/[^?]+[?]expires=\d+&.*&signature=/);
    const range = await ask(head, url.slice(ORIGIN.length), { cookie: author.cookie, method: "HEAD" });
    expect([range.status, range.headers.get("x-ut-range-start")]).toEqual([200, "0"]);
    const { status, body } = await send(author, url, file);
    expect(status, JSON.stringify(body)).toBe(200);
    const sha256 = createHash("sha256").update(PNG).digest("hex");
    expect(body).toMatchObject({
      fileHash: sha256,
      serverData: { name: file.name, size: PNG.length, sha256, type: "image/png" },
    });
    const back = await fetchFile(colleague, body.serverData.id);
    expect(Buffer.from(await back.arrayBuffer()).equals(PNG)).toBe(true);
    expect(await kept()).toContain(file.name);
  });

  it("takes 5 MiB in rows and gives them back byte for byte (FIL-05)", async () => {
    const bytes = Buffer.alloc(5 * 1024 * 1024 + 17);
    for (let at = 0; at < bytes.length; at += 4)
      bytes.writeUInt32LE((at * 2654435761) >>> 0, Math.min(at, bytes.length - 4));
    const { body } = await upload({ name: "curve.dat", type: "application/octet-stream", bytes });
    const back = await fetchFile(author, body.serverData.id);
    expect(back.headers.get("content-length")).toBe(String(bytes.length));
    expect(Buffer.from(await back.arrayBuffer()).equals(bytes)).toBe(true);
  });

  it("is refused before a byte is sent: 40 MiB, nothing, two at once, and whoever may not write (FIL-06)", async () => {
    const file = { name: "a.txt", type: "text/plain", bytes: Buffer.from("a") };
    const large = await announce(author, { ...file, size: 40 * 1024 * 1024 });
    expect(large).toMatchObject({ status: 413, body: { message: expect.stringContaining("32 MiB") } });
    expect((await announce(author, { ...file, size: 0 })).status).toBe(400);
    expect((await announce(witness, file)).status).toBe(403);
    expect((await announce(outsider, file)).status).toBe(404);
    expect((await announce(author, file, "not-an-id")).status).toBe(400);
    const two = await ask(begin, "/api/uploadthing?actionType=upload&slug=attachment", {
      cookie: author.cookie,
      json: {
        input: { revisionId },
        files: [1, 2].map((lastModified) => ({ name: "a", type: "", size: 1, lastModified })),
      },
    });
    expect(two.status).toBe(400);
    const stranger = await ask(begin, "/api/uploadthing?actionType=upload&slug=attachment", { json: {} });
    expect(stranger.status).toBe(401);
  });

  it("leaves nothing when it is cut off, longer or shorter than announced, a renamed program, or cancelled (FIL-02, FIL-06)", async () => {
    const before = await kept();
    const text = { name: "a.txt", type: "text/plain", bytes: Buffer.from("twelve bytes") };
    const longer = await announce(author, { ...text, size: 5 });
    expect(await send(author, longer.body[0].url, text)).toMatchObject({
      status: 422,
      body: { code: "attachment.length-differs" },
    });
    const shorter = await announce(author, { ...text, size: 50 });
    expect(await send(author, shorter.body[0].url, text)).toMatchObject({
      status: 422,
      body: { code: "attachment.length-differs" },
    });
    const program = {
      name: "reading.pdf",
      type: "application/pdf",
      bytes: Buffer.concat([Buffer.from("MZ\x90\0\x03\0\0\0"), Buffer.alloc(200)]),
    };
    expect(await upload(program)).toMatchObject({ status: 422, body: { code: "attachment.type-refused" } });

    const again = await announce(author, program);
    const bySdk = await ask(put, again.body[0].url.slice(ORIGIN.length), {
      cookie: author.cookie,
      method: "PUT",
      body: form(program),
      headers: { "x-uploadthing-version": "7.7.4" },
    });
    expect(bySdk.status).toBe(200);
    expect(await bySdk.json()).toMatchObject({
      error: expect.stringContaining("Nothing was kept"),
      problem: { code: "attachment.type-refused" },
    });

    const { body } = await announce(author, text);
    const whole = new Response(form(text));
    const bytes = new Uint8Array(await whole.clone().arrayBuffer());
    const type = whole.headers.get("content-type") ?? "";
    const path = body[0].url.slice(ORIGIN.length);
    const cut = await ask(put, path, {
      cookie: author.cookie,
      method: "PUT",
      body: bytes.slice(0, bytes.length - 20),
      headers: { "content-type": type },
    });
    expect(cut.status).toBe(422);
    expect(await kept()).toEqual(before);
  });

  it("is taken only at the signed address, from the person it was made for, from our own page, while it lasts", async () => {
    const file = { name: "a.txt", type: "text/plain", bytes: Buffer.from("twelve bytes") };
    const { body } = await announce(author, file);
    const url = new URL(body[0].url);
    const before = await kept();
    const forged = new URL(url);
    forged.searchParams.set("x-ut-file-size", "33554432");
    const late = new URL(url);
    late.searchParams.set("expires", String(Date.now() + 9e9));
    for (const address of [forged, late, new URL(url.pathname, ORIGIN)]) {
      expect((await send(author, address.href, file)).status).toBe(404);
    }
    expect((await send(colleague, url.href, file)).status).toBe(404);
    const cross = await ask(put, url.pathname + url.search, {
      cookie: author.cookie,
      method: "PUT",
      body: form(file),
      origin: "https://evil.example",
    });
    expect(cross.status).toBe(403);
    expect(await kept()).toEqual(before);
  });

  it("takes no callback over HTTP", async () => {
    const hook = await ask(begin, "/api/uploadthing?slug=attachment", {
      cookie: author.cookie,
      json: { status: "uploaded" },
      headers: { "uploadthing-hook": "callback", "x-uploadthing-signature": "hmac-sha256=00" },
    });
    expect(hook.status).toBe(400);
    expect((await ask(configuration, "/api/uploadthing", { cookie: author.cookie })).status).toBe(200);
    expect((await ask(configuration, "/api/uploadthing")).status).toBe(401);
  });
});

describe("a download", () => {
  it.each([
    ["page.html", "text/html", "<!doctype html><script>alert(1)</script>"],
    ["picture.svg", "image/svg+xml", '<svg xmlns="http://www.w3.org/2000/svg"><script>alert(1)</script></svg>'],
    ["list.xml", "application/xml", '<?xml version="1.0"?><readings/>'],
    ["notes.txt", "text/plain", "plain words"],
  ])("gives %s as data in a sandbox, never as a page (FIL-03)", async (name, type, text) => {
    const { status, body } = await upload({ name, type, bytes: Buffer.from(text) });
    expect(status, JSON.stringify(body)).toBe(200);
    const answer = await fetchFile(author, body.serverData.id);
    expect(answer.headers.get("content-type")).toBe("application/octet-stream");
    expect(answer.headers.get("content-disposition")).toMatch(/^attachment; /);
    expect(answer.headers.get("x-content-type-options")).toBe("nosniff");
    expect(answer.headers.get("content-security-policy")).toMatch(/default-src 'none'.*; sandbox$/);
    expect(answer.headers.get("cross-origin-resource-policy")).toBe("same-origin");
    expect(await answer.text()).toBe(text);
  });

  it("shows checked raster pictures only, and only to members; missing and hidden are one answer", async () => {
    const { body } = await upload({ name: "a.png", type: "image/png", bytes: PNG });
    const { id } = body.serverData;
    const shown = await fetchFile(witness, id);
    expect(shown.headers.get("content-type")).toBe("image/png");
    expect(shown.headers.get("content-disposition")).toMatch(/^inline; /);
    await shown.arrayBuffer();
    const hidden = await fetchFile(outsider, id);
    const missing = await fetchFile(author, "01890000-0000-7000-8000-000000000000");
    const nothing = await fetchFile(author, "..%2f..%2fetc%2fpasswd");
    expect([hidden.status, missing.status, nothing.status]).toEqual([404, 404, 404]);
    const [first, second, third] = await Promise.all(
      [hidden, missing, nothing].map(async (answer) => (await answer.json()).code),
    );
    expect([second, third]).toEqual([first, first]);
  });

  it("struck off a page asks a reason, and stays readable", async () => {
    const { body } = await upload({ name: "wrong.png", type: "image/png", bytes: PNG });
    const { id } = body.serverData;
    const striking = (visitor: Visitor, reason: string) =>
      ask(strike, `/api/attachments/${id}/strike`, {
        cookie: visitor.cookie,
        json: { revisionId, reason },
        params: { id },
      });
    expect(await (await striking(author, "  ")).json()).toMatchObject({
      status: 400,
      fields: { reason: expect.any(String) },
    });
    expect((await striking(witness, "not mine")).status).toBe(403);
    expect((await striking(author, "the wrong picture")).status).toBe(200);
    expect((await striking(author, "the wrong picture")).status).toBe(409);
    expect((await fetchFile(author, id)).status).toBe(200);
  });
});

describe("disposition (FIL-07)", () => {
  it.each([
    ["a.pdf", "attachment; filename=\"a.pdf\"; filename*=UTF-8''a.pdf"],
    ['q"u\\o;te.txt', "attachment; filename=\"q_u_o_te.txt\"; filename*=UTF-8''q%22u%5Co%3Bte.txt"],
    [
      "pH – Ä 10 %.csv",
      "attachment; filename=\"pH  A 10 _.csv\"; filename*=UTF-8''pH%20%E2%80%93%20%C3%84%2010%20%25.csv",
    ],
    ["it's (1)*.txt", "attachment; filename=\"it's (1)*.txt\"; filename*=UTF-8''it%27s%20%281%29%2A.txt"],
    ["π", "attachment; filename=\"file\"; filename*=UTF-8''%CF%80"],
  ])("writes %s for headers", (name, header) => {
    expect(disposition("attachment", name)).toBe(header);
  });
});
