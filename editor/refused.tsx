"use client";
// What was typed and could not be taken: said, kept, and offered to be copied. Nothing is thrown away without a press.
import { useQuery } from "@tanstack/react-query";
import { useEffect } from "react";
import { strayQuery } from "../components/query/revisions.ts";
import { Button } from "../components/ui/button.tsx";
import { useAnnounce } from "../components/ui/live-region.tsx";
import { Notice } from "../components/ui/says.tsx";
import { isClosedToTyping, type PageLine } from "./provider.ts";

type RefusedProps = {
  revisionId: string;
  line: PageLine;
  /** the words of the page as this browser has them */
  wordsOfPage: () => string;
  onDiscard: () => Promise<void>;
};

export function Refused({ revisionId, line, wordsOfPage, onDiscard }: RefusedProps) {
  const isClosed = isClosedToTyping(line);
  const stray = useQuery({ ...strayQuery(revisionId), enabled: isClosed });
  // That the revision is closed may be heard before one's own late changes have reached the server: it is asked again after them.
  const { refetch } = stray;
  const { waiting } = line;
  useEffect(() => {
    if (isClosed && waiting === 0) void refetch();
  }, [isClosed, waiting, refetch]);
  const copy = useCopy();
  // One change may hold half a word: what was typed in one go reads as it was typed.
  const kept = (stray.data ?? [])
    .map((update) => update.text)
    .join("")
    .trim();
  if (line.kind !== "refused" && !isClosed) return null;
  if (isClosed) {
    return (
      <Notice
        kind="warn"
        finding="This revision is no longer a draft."
        actions={
          <>
            {kept !== "" ? <Button onClick={() => void copy(kept)}>Copy what was not added</Button> : null}
            <Button onClick={() => window.location.reload()}>Show the page as it stands now</Button>
          </>
        }
      >
        <p>
          {line.waiting > 0
            ? `${line.waiting} of your changes came too late and were not added. They are kept on this device.`
            : "Nothing more is added to it."}
        </p>
        {kept !== "" ? (
          <>
            <p>These words of yours came too late. They are kept for you, and can be put into the next revision:</p>
            <blockquote className="reason">{kept}</blockquote>
          </>
        ) : null}
      </Notice>
    );
  }
  return (
    <Notice
      kind="stop"
      urgent
      finding="A change was not taken, and what came after it waits."
      actions={
        <>
          <Button onClick={() => void copy(wordsOfPage())}>Copy the page’s words</Button>
          <Button kind="stop" onClick={() => void onDiscard().then(() => window.location.reload())}>
            Go on without these changes
          </Button>
        </>
      }
    >
      <p>
        {line.detail} {line.waiting === 1 ? "1 change is" : `${line.waiting} changes are`} kept on this device. The text
        stays yours to copy.
      </p>
    </Notice>
  );
}

function useCopy(): (text: string) => Promise<void> {
  const announce = useAnnounce();
  return async (text) => {
    try {
      await navigator.clipboard.writeText(text);
      announce("Copied.");
    } catch {
      announce("The browser did not allow copying. Select the words and copy them by hand.");
    }
  };
}
