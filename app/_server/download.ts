// A stored file on its way out: byte for byte, as data, in a policy under which a browser runs none of it (FIL-03).
import "server-only";
import type { FileToRead } from "../../db/attachments.ts";
import { FILE_POLICY } from "./security-headers.ts";

/** Raster pictures that browsers draw without running anything; their content was checked when they came. */
const SHOWN = new Set(["image/png", "image/jpeg", "image/gif", "image/webp"]);

/** Whether a page may draw the file: by what its content says, never by its name. */
export function isPicture({ sniffedType }: { sniffedType: string | null }): boolean {
  return sniffedType !== null && SHOWN.has(sniffedType);
}

/** The answer with the file. Chunks are read from the store as the browser takes them. */
export function fileResponse(file: FileToRead): Response {
  const isShown = isPicture(file);
  return new Response(streamOf(file.chunks), {
    headers: {
      "content-type": isShown && file.sniffedType !== null ? file.sniffedType : "application/octet-stream",
      "content-length": String(file.size),
      "content-disposition": disposition(isShown ? "inline" : "attachment", file.name),
      "content-security-policy": FILE_POLICY,
      "repr-digest": `sha-256=:${Buffer.from(file.sha256, "hex").toString("base64")}:`,
      // A fingerprinted file never changes, but the right to read it may: it is asked for again each time.
      "cache-control": "private, no-cache",
      etag: `"${file.sha256}"`,
    },
  });
}

/** The name as RFC 6266 and RFC 8187 write it: plain letters for old readers, all of it for the rest; never a path, never a quote. */
export function disposition(kind: "inline" | "attachment", name: string): string {
  const plain =
    name
      .normalize("NFKD")
      .replace(/[^\x20-\x7e]/g, "")
      .replace(/["\\%/;]/g, "_")
      .trim() || "file";
  const exact = encodeURIComponent(name.replace(/\p{Cs}/gu, "_")).replace(
    /['()*]/g,
    (character) => `%${character.charCodeAt(0).toString(16).toUpperCase()}`,
  );
  return `${kind}; filename="${plain}"; filename*=UTF-8''${exact}`;
}

function streamOf(chunks: AsyncGenerator<Uint8Array, void, undefined>): ReadableStream<Uint8Array> {
  return new ReadableStream<Uint8Array>(
    {
      async pull(controller) {
        const { done, value } = await chunks.next();
        if (done === true) controller.close();
        else controller.enqueue(value);
      },
      async cancel() {
        await chunks.return();
      },
    },
    { highWaterMark: 1 },
  );
}
