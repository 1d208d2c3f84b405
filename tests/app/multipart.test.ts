import { expect, it } from "vitest";
import { MalformedForm, readFilePart } from "../../app/_server/multipart.ts";

const TYPE = "multipart/form-data; boundary=----mark";

function streamOf(bytes: Uint8Array, step: number): ReadableStream<Uint8Array> {
  let at = 0;
  return new ReadableStream({
    pull(controller) {
      if (at >= bytes.length) return controller.close();
      controller.enqueue(bytes.slice(at, at + step));
      at += step;
    },
  });
}

async function gather(body: Uint8Array, step = 7): Promise<Uint8Array> {
  const part = await readFilePart(streamOf(body, step), TYPE);
  const chunks: Uint8Array[] = [];
  for await (const chunk of part.bytes) chunks.push(chunk);
  return Buffer.concat(chunks);
}

const form = (content: Buffer | string, end = "\r\n------mark--\r\n") =>
  Buffer.concat([
    Buffer.from(
      '------mark\r\nContent-Disposition: form-data; name="file"; filename="a.txt"\r\nContent-Type: text/plain\r\n\r\n',
    ),
    Buffer.from(content),
    Buffer.from(end),
  ]);

it("returns the file's bytes whatever the pieces in which they come (FIL-01)", async () => {
  const content = Buffer.from("a\r\n------mar\r\n--b\r\n\r\n------markless? no: \r\n-----mark\0\xff", "latin1");
  const tricky = Buffer.from(content.toString("latin1").replace("------markless", "-----markless"), "latin1");
  for (const step of [1, 2, 3, 5, 17, 10_000]) expect(await gather(form(tricky), step)).toEqual(tricky);
});

it("returns what the platform's own form encoder wrote", async () => {
  const bytes = Uint8Array.from({ length: 100_000 }, (_, index) => (index * 31) % 256);
  const data = new FormData();
  data.set("file", new Blob([bytes], { type: "application/pdf" }), 'na"me\r\n.pdf');
  const response = new Response(data);
  const part = await readFilePart(response.body ?? new ReadableStream(), response.headers.get("content-type"));
  const chunks: Uint8Array[] = [];
  for await (const chunk of part.bytes) chunks.push(chunk);
  expect(part.type).toBe("application/pdf");
  expect(Buffer.concat(chunks).equals(Buffer.from(bytes))).toBe(true);
});

it("keeps an empty file empty", async () => {
  expect(await gather(form(""))).toHaveLength(0);
});

it.each([
  ["a form that stops half-way", form("abc", "")],
  [
    "a second part",
    form("abc", '\r\n------mark\r\nContent-Disposition: form-data; name="file"\r\n\r\nx\r\n------mark--\r\n'),
  ],
  ["something after the form", form("abc", "\r\n------mark--\r\nmore")],
  [
    "another field",
    Buffer.from('------mark\r\nContent-Disposition: form-data; name="files"\r\n\r\nabc\r\n------mark--\r\n'),
  ],
  ["headers without end", Buffer.concat([Buffer.from("------mark\r\n"), Buffer.alloc(40_000, "x")])],
  ["no boundary at its beginning", Buffer.from("abc")],
  ["nothing", Buffer.alloc(0)],
])("refuses %s", async (_, body) => {
  await expect(gather(body, 11)).rejects.toThrow(MalformedForm);
});

it("refuses a body that is not a form", async () => {
  await expect(readFilePart(streamOf(form("abc"), 5), "application/octet-stream")).rejects.toThrow(MalformedForm);
  await expect(readFilePart(streamOf(form("abc"), 5), null)).rejects.toThrow(MalformedForm);
});
