"use client";
// Files on their way to the server, through the upload SDK: progress, cancel, retry. A file is on the page only when it is stored.
import { generateReactHelpers } from "@uploadthing/react";
import { useCallback, useRef, useState } from "react";
import type { FileRouter } from "uploadthing/types";
import { z } from "zod";
import { newName } from "./tabs.ts";

export type Upload = {
  id: string;
  file: File;
  /** per cent */
  done: number;
  state: "going" | "failed" | "cancelled";
  /** why it failed, in words */
  reason: string;
};

/** As the server limits it; said before the file is sent. */
export const LARGEST_FILE_BYTES = 32 * 1024 * 1024;

const storedShape = z.array(z.object({ serverData: z.object({ id: z.string() }) })).min(1);

/** The server's upload route as the browser sees it: what it is sent beside the file. What it answers is checked, not believed. */
type PageFiles = FileRouter & {
  attachment: { $types: { input: { revisionId: string }; output: unknown; errorShape: { message: string } } };
};

export type Uploads = {
  uploads: readonly Upload[];
  add: (files: readonly File[]) => void;
  cancel: (id: string) => void;
  retry: (id: string) => void;
  /** takes a failed or cancelled one off the list */
  dismiss: (id: string) => void;
};

/** `onStored` is called once for each file that the server has stored, with the attachment's id. */
export function useUploads(revisionId: string, onStored: (attachmentId: string) => void): Uploads {
  const [uploads, setUploads] = useState<readonly Upload[]>([]);
  const aborts = useRef(new Map<string, AbortController>());

  const change = useCallback((id: string, changed: Partial<Upload>) => {
    setUploads((before) => before.map((each) => (each.id === id ? { ...each, ...changed } : each)));
  }, []);

  const send = useCallback(
    async (id: string, file: File) => {
      const objection = objectionTo(file);
      if (objection !== null) return change(id, { state: "failed", reason: objection });
      const abort = new AbortController();
      aborts.current.set(id, abort);
      try {
        // Made here, not with the module: it asks for the page's own address.
        const { uploadFiles } = generateReactHelpers<PageFiles>();
        const answer: unknown = await uploadFiles("attachment", {
          files: [file],
          input: { revisionId },
          signal: abort.signal,
          onUploadProgress: ({ progress }) => change(id, { done: Math.round(progress) }),
        });
        const [stored] = storedShape.parse(answer);
        setUploads((before) => before.filter((each) => each.id !== id));
        if (stored !== undefined) onStored(stored.serverData.id);
      } catch (error) {
        if (abort.signal.aborted) change(id, { state: "cancelled", reason: "Cancelled. Nothing of it was kept." });
        else change(id, { state: "failed", reason: reasonOf(error) });
      } finally {
        aborts.current.delete(id);
      }
    },
    [change, onStored, revisionId],
  );

  return {
    uploads,
    add: useCallback(
      (files) => {
        const added = files.map((file): Upload => ({ id: newName(), file, done: 0, state: "going", reason: "" }));
        setUploads((before) => [...before, ...added]);
        for (const { id, file } of added) void send(id, file);
      },
      [send],
    ),
    cancel: useCallback((id) => aborts.current.get(id)?.abort(), []),
    retry: useCallback(
      (id) => {
        const upload = uploads.find((each) => each.id === id);
        if (upload === undefined || upload.state === "going") return;
        change(id, { state: "going", done: 0, reason: "" });
        void send(id, upload.file);
      },
      [change, send, uploads],
    ),
    dismiss: useCallback((id) => setUploads((before) => before.filter((each) => each.id !== id)), []),
  };
}

function objectionTo(file: File): string | null {
  if (file.size === 0) return "The file is empty.";
  if (file.size > LARGEST_FILE_BYTES) {
    return "The file is longer than 32 MiB. Attach a part of it, or a compressed copy.";
  }
  return null;
}

function reasonOf(error: unknown): string {
  const words = error instanceof Error && error.message !== "" ? error.message : "The file did not arrive.";
  return /[.!?]$/.test(words) ? words : `${words}.`;
}
