// What is known of a file without fetching it: name, length and fingerprint stand in the head of its answer.
import { queryOptions } from "@tanstack/react-query";
import { problemOf } from "./http.ts";

export type AttachmentMeta = {
  id: string;
  name: string;
  size: number;
  sha256: string;
  /** a checked raster picture, which may be shown on the page */
  isPicture: boolean;
};

export const attachmentPath = (id: string) => `/api/attachments/${encodeURIComponent(id)}`;

/** Name, length and SHA-256 of a stored file. A file never changes, so this is asked once. */
export const attachmentQuery = (id: string) =>
  queryOptions({
    queryKey: ["attachment", id],
    queryFn: async ({ signal }): Promise<AttachmentMeta> => {
      const response = await fetch(attachmentPath(id), { method: "HEAD", signal });
      if (!response.ok) throw await problemOf(response);
      const disposition = response.headers.get("content-disposition") ?? "";
      return {
        id,
        name: nameIn(disposition),
        size: Number(response.headers.get("content-length")),
        sha256: hexIn(response.headers.get("repr-digest") ?? ""),
        isPicture:
          disposition.startsWith("inline") && (response.headers.get("content-type") ?? "").startsWith("image/"),
      };
    },
    enabled: id !== "",
    staleTime: Number.POSITIVE_INFINITY,
  });

/** The exact name of RFC 8187 (filename*), else the plain one. */
function nameIn(disposition: string): string {
  const exact = /filename\*=UTF-8''([^;]+)/i.exec(disposition)?.[1];
  if (exact !== undefined) {
    try {
      return decodeURIComponent(exact);
    } catch {
      // A name that is not well formed: the plain one stands beside it.
    }
  }
  return /filename="([^"]*)"/i.exec(disposition)?.[1] ?? "file";
}

/** The SHA-256 of a Repr-Digest field (RFC 9530), in hexadecimal digits. */
function hexIn(digest: string): string {
  const base64 = /sha-256=:([A-Za-z0-9+/=]+):/.exec(digest)?.[1];
  if (base64 === undefined) return "";
  return [...atob(base64)].map((letter) => letter.charCodeAt(0).toString(16).padStart(2, "0")).join("");
}
