"use client";
// A draft whose writer is here: the editor on the leaf, and on the counterfoil how it stands with what was typed.
import { useQuery } from "@tanstack/react-query";
import Link from "next/link";
import { useRouter } from "next/navigation";
import { type ReactNode, useState } from "react";
import { Counterfoil, StubHead, StubSection } from "../../../../components/leaf/counterfoil.tsx";
import { Leaf } from "../../../../components/leaf/leaf.tsx";
import { PrintStub, PrintWatermark } from "../../../../components/leaf/print-stub.tsx";
import { StateMark, type StateName } from "../../../../components/leaf/state-mark.tsx";
import { formatDateTime } from "../../../../components/format.ts";
import { strayQuery } from "../../../../components/query/revisions.ts";
import { Button, buttonClass } from "../../../../components/ui/button.tsx";
import { Says } from "../../../../components/ui/says.tsx";
import { PageEditor } from "../../../../editor/editor.tsx";
import { SAVED, type SaveStatus, wordsOfStatus } from "../../../../editor/save-status.ts";
import type { Answered } from "../../../_components/answered.ts";
import { SignInOver } from "../../../_components/sign-in-over.tsx";

type Props = {
  label: string;
  of: string;
  revisionId: string;
  person: { id: string; name: string };
  decimalSign: "." | ",";
  timeZone: string;
  head: { title: string; doneOn: string; lateReason: string };
  recordedAt: string | null;
  maySign: boolean;
  /** a sentence, when the person may not */
  whyNot: string | null;
  notice: ReactNode;
  sections: ReactNode;
  enter: (raw: unknown) => Promise<Answered<unknown>>;
};

const MARKS: Record<SaveStatus["kind"], StateName> = { saved: "saved", saving: "saving", offline: "offline", refused: "offline", "signed-out": "offline" };

export function DraftLeaf({ label, of, revisionId, person, decimalSign, timeZone, head, recordedAt, maySign, whyNot, notice, sections, enter }: Props) {
  const router = useRouter();
  const [status, setStatus] = useState<SaveStatus>(SAVED);
  const isSettled = status.kind === "saved" && status.unsavedFields === 0;
  return (
    <Leaf
      counterfoil={
        <Counterfoil
          head={
            <StubHead
              number={label}
              of={of}
              state={<StateMark state="draft" />}
              saved={<StateMark state={MARKS[status.kind]}>{wordsOfStatus(status)}</StateMark>}
              act={
                maySign ? (
                  isSettled ? (
                    <Link className={buttonClass("first")} href={`/entries/${label}/sign`} prefetch={false}>
                      Sign as author
                    </Link>
                  ) : (
                    <Button kind="first" notYet="Not yet: first everything has to be saved.">
                      Sign as author
                    </Button>
                  )
                ) : (
                  <p className="note">{whyNot}</p>
                )
              }
            />
          }
        >
          {sections}
          <Strays revisionId={revisionId} timeZone={timeZone} />
        </Counterfoil>
      }
      print={
        <>
          <PrintWatermark>Draft, not signed</PrintWatermark>
          <PrintStub number={label} of={`${of}, draft, not signed`}>
            {null}
          </PrintStub>
        </>
      }
    >
      {notice}
      {status.kind === "refused" ? (
        <Says
          kind="stop"
          finding="What you typed last was not taken."
          urgent
          actions={
            <Button kind="quiet" onClick={() => window.location.reload()}>
              Load the page anew
            </Button>
          }
        >
          {status.detail ?? ""} Your words are kept for you: copy them from here before you load the page anew.
        </Says>
      ) : null}
      <PageEditor
        revisionId={revisionId}
        person={person}
        decimalSign={decimalSign}
        timeZone={timeZone}
        head={head}
        recordedAt={recordedAt}
        onStatus={setStatus}
        onClosed={() => router.refresh()}
      />
      <SignInOver open={status.kind === "signed-out"} person={person.name} enter={enter} />
    </Leaf>
  );
}

/** What this person sent when the revision was no longer a draft: refused, kept, theirs to copy. */
function Strays({ revisionId, timeZone }: { revisionId: string; timeZone: string }) {
  const { data = [] } = useQuery(strayQuery(revisionId));
  if (data.length === 0) return null;
  return (
    <StubSection title="Kept for you">
      {data.map(({ id, at, text }) => (
        <p key={id} className="note">
          {formatDateTime(at, timeZone)}: “{text}”
        </p>
      ))}
    </StubSection>
  );
}
