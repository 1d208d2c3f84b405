"use client";
import { useRouter } from "next/navigation";
import { useState } from "react";
import { Button } from "../../../../components/ui/button.tsx";
import { FieldError } from "../../../../components/ui/field-parts.tsx";
import { type Answered, sentenceOf } from "../../../_components/answered.ts";

type Props = { words: string; sessionId?: string; end: (raw: unknown) => Promise<Answered<unknown>> };

export function EndSession({ words, sessionId, end }: Props) {
  const router = useRouter();
  const [pending, setPending] = useState(false);
  const [fault, setFault] = useState<string | null>(null);
  const press = async () => {
    setPending(true);
    const answered = await end(sessionId === undefined ? undefined : { sessionId });
    setPending(false);
    if (answered.ok) router.refresh();
    else setFault(sentenceOf(answered.problem));
  };
  return (
    <>
      <Button kind="quiet-stop" pending={pending} onClick={press}>
        {words}
      </Button>
      {fault === null ? null : <FieldError heard>{fault}</FieldError>}
    </>
  );
}
