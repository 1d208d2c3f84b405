"use client";
// A draft whose writer is here: the editor on the leaf, and on the counterfoil how it stands with what was typed.
import Link from "next/link";
import { type ReactNode, useState } from "react";
import { Counterfoil, StubHead } from "../../../../components/leaf/counterfoil.tsx";
import { Leaf } from "../../../../components/leaf/leaf.tsx";
import { PrintStub, PrintWatermark } from "../../../../components/leaf/print-stub.tsx";
import { StateMark, type StateName } from "../../../../components/leaf/state-mark.tsx";
import { Button } from "../../../../components/ui/button.tsx";
import { buttonClass } from "../../../../components/ui/button-class.ts";
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
  recordedAt: string;
  maySign: boolean;
  /** a sentence, when the person may not */
  whyNot: string | null;
  notice: ReactNode;
  sections: ReactNode;
  enter: (raw: unknown) => Promise<Answered<unknown>>;
};

const MARKS: Record<SaveStatus["kind"], StateName> = {
  saved: "saved",
  saving: "saving",
  offline: "offline",
  refused: "offline",
  "signed-out": "offline",
};

export function DraftLeaf({
  label,
  of,
  revisionId,
  person,
  decimalSign,
  timeZone,
  recordedAt,
  maySign,
  whyNot,
  notice,
  sections,
  enter,
}: Props) {
  const [status, setStatus] = useState<SaveStatus>(SAVED);
  const [state, setState] = useState<string>("draft");
  const isSettled = status.kind === "saved" && status.unsavedFields === 0;
  return (
    <Leaf
      counterfoil={
        <Counterfoil
          head={
            <StubHead
              number={label}
              of={of}
              state={<StateMark state={state === "signed" ? "signed" : "draft"} />}
              saved={<StateMark state={MARKS[status.kind]}>{wordsOfStatus(status)}</StateMark>}
              act={
                state !== "draft" ? undefined : maySign ? (
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
      <PageEditor
        revisionId={revisionId}
        person={person}
        decimalSign={decimalSign}
        timeZone={timeZone}
        head={{ recordedAt }}
        onStatus={setStatus}
        onState={setState}
      />
      <SignInOver open={status.kind === "signed-out"} person={person.name} enter={enter} />
    </Leaf>
  );
}
