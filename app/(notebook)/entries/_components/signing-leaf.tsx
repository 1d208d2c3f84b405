"use client";
// The frame of both signing leaves: opens the revision in this session, follows the reading, and tells the server when the
// whole of it has passed. Only then is what `children` make of it offered.
import { useRouter } from "next/navigation";
import { type ReactNode, useEffect, useState } from "react";
import { Counterfoil, StubHead, StubSection } from "../../../../components/leaf/counterfoil.tsx";
import { Fingerprint } from "../../../../components/leaf/fingerprint.tsx";
import { Leaf } from "../../../../components/leaf/leaf.tsx";
import { FieldError } from "../../../../components/ui/field-parts.tsx";
import { sentenceOf } from "../../../_components/answered.ts";
import { ReadingProgress, useReading } from "./read-whole.tsx";
import type { Act } from "./vouching.ts";

type Props = {
  label: string;
  of: string;
  state: ReactNode;
  revisionId: string;
  hash: string;
  /** said over the hash */
  hashTitle: string;
  open: Act<{ contentSha256: string; wholeAt: Date | null }>;
  readToTheEnd: Act;
  page: ReactNode;
  /** in the counterfoil under the decision */
  sections: ReactNode;
  /** what can be done once the whole was opened */
  children: (isWhole: boolean) => ReactNode;
};

export function SigningLeaf({
  label,
  of,
  state,
  revisionId,
  hash,
  hashTitle,
  open,
  readToTheEnd,
  page,
  sections,
  children,
}: Props) {
  const router = useRouter();
  const { root, reading } = useReading(false);
  const [opened, setOpened] = useState(false);
  const [noted, setNoted] = useState(false);
  const [fault, setFault] = useState<string | null>(null);

  useEffect(() => {
    let isCurrent = true;
    void open({ revisionId }).then((answered) => {
      if (!isCurrent) return;
      if (!answered.ok) return setFault(sentenceOf(answered.problem));
      // Somebody typed between the rendering and now: what is shown would not be what is signed.
      if (answered.value.contentSha256 !== hash) return router.refresh();
      setOpened(true);
      if (answered.value.wholeAt !== null) setNoted(true);
    });
    return () => {
      isCurrent = false;
    };
  }, [open, revisionId, hash, router]);

  useEffect(() => {
    if (!opened || noted || !reading.isWhole) return;
    void readToTheEnd({ revisionId, contentSha256: hash }).then((answered) => {
      if (answered.ok) setNoted(true);
      else setFault(sentenceOf(answered.problem));
    });
  }, [opened, noted, reading.isWhole, readToTheEnd, revisionId, hash]);

  return (
    <Leaf
      counterfoil={
        <Counterfoil head={<StubHead number={label} of={of} state={state} />}>
          <StubSection title="Before you decide">
            <ReadingProgress reading={{ ...reading, isWhole: noted }} />
            {fault === null ? null : <FieldError heard>{fault}</FieldError>}
          </StubSection>
          {children(noted)}
          <StubSection title={hashTitle}>
            <Fingerprint hex={hash} label={hashTitle} />
          </StubSection>
          {sections}
        </Counterfoil>
      }
    >
      <div ref={root}>{page}</div>
    </Leaf>
  );
}
