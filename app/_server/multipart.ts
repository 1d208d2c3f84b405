// The one file of a form body, as a stream (RFC 7578). Nothing is held but the bytes that may be the beginning of the boundary.
import "server-only";

export class MalformedForm extends Error {
  override name = "MalformedForm";
}

export type FilePart = { type: string; bytes: AsyncGenerator<Uint8Array<ArrayBuffer>, void, void> };

const HEADER_LIMIT = 16_384;
const CRLF = Buffer.from("\r\n");
const BLANK_LINE = Buffer.from("\r\n\r\n");

/**
 * Reads the part named `file`, which has to be the only one. The generator throws `MalformedForm` when the closing boundary is
 * missing (the sender stopped half-way) or when another part follows.
 */
export async function readFilePart(body: ReadableStream<Uint8Array>, contentType: string | null): Promise<FilePart> {
  const boundary = /^multipart\/form-data\s*;(?:.*;)?\s*boundary=(?:"([^"]{1,70})"|([^\s;"]{1,70}))\s*(?:;.*)?$/i.exec(
    contentType ?? "",
  );
  const mark = boundary?.[1] ?? boundary?.[2];
  if (mark === undefined) throw new MalformedForm("not a form with a boundary");
  const source = new Window(body.getReader());
  const opening = Buffer.from(`--${mark}\r\n`);
  if (!(await source.atLeast(opening.length)) || !source.take(opening.length).equals(opening)) {
    throw new MalformedForm("the form does not begin with its boundary");
  }
  const headers = await readHeaders(source);
  if (!/^form-data\s*;(?:.*;)?\s*name="file"\s*(?:;|$)/i.test(headers.get("content-disposition") ?? "")) {
    throw new MalformedForm("the form's part is not named file");
  }
  return { type: headers.get("content-type") ?? "", bytes: untilBoundary(source, Buffer.from(`\r\n--${mark}`)) };
}

async function readHeaders(source: Window): Promise<Map<string, string>> {
  for (;;) {
    const end = source.held.indexOf(BLANK_LINE);
    if (end >= 0) {
      const lines = source.take(end).toString("utf8").split("\r\n");
      source.take(BLANK_LINE.length);
      return new Map(
        lines.map((line) => [
          line.slice(0, line.indexOf(":")).trim().toLowerCase(),
          line.slice(line.indexOf(":") + 1).trim(),
        ]),
      );
    }
    if (source.held.length > HEADER_LIMIT) throw new MalformedForm("the part's headers are too long");
    if (!(await source.more())) throw new MalformedForm("the form ends in its headers");
  }
}

async function* untilBoundary(source: Window, boundary: Buffer): AsyncGenerator<Uint8Array<ArrayBuffer>, void, void> {
  try {
    for (;;) {
      const at = source.held.indexOf(boundary);
      if (at >= 0) {
        if (at > 0) yield copy(source.take(at));
        source.take(boundary.length);
        await expectEnd(source);
        return;
      }
      const certain = source.held.length - boundary.length;
      if (certain > 0) yield copy(source.take(certain));
      if (!(await source.more())) throw new MalformedForm("the form ends before its closing boundary");
    }
  } finally {
    await source.close();
  }
}

/** `--` and at most a line end: one file is one request. */
async function expectEnd(source: Window): Promise<void> {
  if (!(await source.atLeast(2)) || source.take(2).toString("latin1") !== "--") {
    throw new MalformedForm("the form has more than one part");
  }
  while (await source.more()) if (source.held.length > CRLF.length) break;
  if (source.held.length > 0 && !source.held.equals(CRLF)) throw new MalformedForm("something follows the form");
}

function copy(bytes: Buffer): Uint8Array<ArrayBuffer> {
  return new Uint8Array(bytes);
}

/** The bytes that have come and are not used yet. */
class Window {
  held: Buffer = Buffer.alloc(0);
  constructor(private readonly reader: ReadableStreamDefaultReader<Uint8Array>) {}

  async more(): Promise<boolean> {
    const { done, value } = await this.reader.read();
    if (done) return false;
    this.held = this.held.length === 0 ? Buffer.from(value) : Buffer.concat([this.held, value]);
    return true;
  }

  async atLeast(count: number): Promise<boolean> {
    while (this.held.length < count) if (!(await this.more())) return false;
    return true;
  }

  take(count: number): Buffer {
    const taken = this.held.subarray(0, count);
    this.held = this.held.subarray(count);
    return taken;
  }

  async close(): Promise<void> {
    await this.reader.cancel().catch(() => undefined);
  }
}
