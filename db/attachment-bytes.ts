// The bytes of a file, in rows of 1 MiB. Each row is one short statement, so that a long file keeps nobody waiting.
import { createHash } from "node:crypto";
import { and, eq } from "drizzle-orm";
import type { Db } from "./client.ts";
import { attachmentChunks } from "./schema/records.ts";

export const CHUNK_BYTES = 1024 * 1024;

/** The chunks in order, each read when it is asked for. */
export async function* readChunks(db: Db, attachmentId: string): AsyncGenerator<Uint8Array, void, undefined> {
  for (let index = 0; ; index += 1) {
    const [chunk] = await db
      .select({ bytes: attachmentChunks.bytes })
      .from(attachmentChunks)
      .where(and(eq(attachmentChunks.attachmentId, attachmentId), eq(attachmentChunks.index, index)));
    if (chunk === undefined) return;
    yield chunk.bytes;
  }
}

/** The hash and the length of the bytes as they are stored now; null when there are none. */
export async function fileSha256(db: Db, attachmentId: string): Promise<{ sha256: string; size: number } | null> {
  const hash = createHash("sha256");
  let size = 0;
  for await (const bytes of readChunks(db, attachmentId)) {
    hash.update(bytes);
    size += bytes.length;
  }
  return size === 0 ? null : { sha256: hash.digest("hex"), size };
}

/** Cuts a stream of pieces of any length into chunks of 1 MiB, the last one shorter. */
export async function* inChunks(stream: AsyncIterable<Uint8Array>): AsyncGenerator<Uint8Array, void, undefined> {
  let chunk = new Uint8Array(CHUNK_BYTES);
  let filled = 0;
  for await (const piece of stream) {
    for (let from = 0; from < piece.length; ) {
      const count = Math.min(piece.length - from, CHUNK_BYTES - filled);
      chunk.set(piece.subarray(from, from + count), filled);
      filled += count;
      from += count;
      if (filled === CHUNK_BYTES) {
        yield chunk;
        chunk = new Uint8Array(CHUNK_BYTES);
        filled = 0;
      }
    }
  }
  if (filled > 0) yield chunk.subarray(0, filled);
}
