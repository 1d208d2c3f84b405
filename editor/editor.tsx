"use client";
// The whole editable body of a leaf: fields above the page, toolbar, page, blocks. It saves and solves through HTTP alone.
import { useEffect, useRef, useState } from "react";
import { type FieldKeep, openFieldKeep } from "./field-keep.ts";
import { openOutbox } from "./outbox.ts";
import type { Outline } from "./outline.ts";
import { Page } from "./page.tsx";
import { UnsavedFields } from "./page-context.tsx";
import { openProvider, type PageLine, type Provider } from "./provider.ts";
import type { SaveStatus } from "./save-status.ts";

export type PageEditorProps = {
  revisionId: string;
  person: { id: string; name: string };
  decimalSign: "." | ",";
  timeZone: string;
  /** when the server recorded the entry's first revision, ISO 8601 in UTC */
  head: { recordedAt: string };
  onStatus?: (status: SaveStatus) => void;
  onOutline?: (outline: Outline) => void;
  /** called when the revision's state changes while the page is open, e.g. "signed" */
  onState?: (state: string) => void;
};

export function PageEditor(props: PageEditorProps) {
  // Another person begins anew. The same one who has signed in again goes on where they were (ADM-01).
  return <OpenPage key={`${props.revisionId} ${props.person.id}`} {...props} />;
}

type Opened = { provider: Provider; keep: FieldKeep | null; line: PageLine };

function OpenPage({ revisionId, person, onStatus, onState, ...rest }: PageEditorProps) {
  const [opened, setOpened] = useState<Opened | null>(null);
  const [unsavedFields, setUnsavedFields] = useState(0);
  const { id, name } = person;

  useEffect(() => {
    let isGone = false;
    let provider: Provider | null = null;
    // Without a store the page still saves; the status says that this device keeps nothing.
    const device = [
      openOutbox(id, revisionId).catch(() => null),
      openFieldKeep(id, revisionId).catch(() => null),
    ] as const;
    void Promise.all(device).then(([outbox, keep]) => {
      if (isGone) {
        outbox?.close();
        keep?.close();
        return;
      }
      let first: PageLine | null = null;
      const opening = openProvider({
        revisionId,
        person: { id, name },
        outbox,
        onChange: (line) => {
          first = line;
          if (provider !== null) setOpened({ provider, keep, line });
        },
      });
      provider = opening;
      if (first !== null) setOpened({ provider: opening, keep, line: first });
    });
    return () => {
      isGone = true;
      provider?.destroy();
      setOpened(null);
    };
  }, [revisionId, id, name]);

  const line = opened?.line;
  const heard = useRef({ onStatus, onState });
  useEffect(() => {
    heard.current = { onStatus, onState };
  });
  useEffect(() => {
    if (line === undefined) return;
    const { kind, waiting, detail } = line;
    heard.current.onStatus?.({ kind, waiting, unsavedFields, ...(detail !== undefined && { detail }) });
  }, [line, unsavedFields]);
  const state = line?.state;
  useEffect(() => {
    if (state !== undefined && state !== "draft") heard.current.onState?.(state);
  }, [state]);

  // Where the device keeps nothing, what is typed into a field and not entered yet is nowhere but in the field.
  const isNowhereElse = opened !== null && opened.keep === null && unsavedFields > 0;
  useEffect(() => {
    if (!isNowhereElse) return;
    const ask = (event: BeforeUnloadEvent) => event.preventDefault();
    window.addEventListener("beforeunload", ask);
    return () => window.removeEventListener("beforeunload", ask);
  }, [isNowhereElse]);

  if (opened === null || !opened.line.isLoaded) {
    return (
      <p className="note" role="status">
        {opened?.line.kind === "offline" || opened?.line.kind === "signed-out" || opened?.line.kind === "refused"
          ? "The page cannot be reached at the moment. It opens by itself when the line is back."
          : "Opening the page …"}
      </p>
    );
  }
  return (
    <UnsavedFields keep={opened.keep} onCount={setUnsavedFields}>
      <Page revisionId={revisionId} person={person} provider={opened.provider} line={opened.line} {...rest} />
    </UnsavedFields>
  );
}
