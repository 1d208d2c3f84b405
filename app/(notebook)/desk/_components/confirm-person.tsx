"use client";
import type { Answered } from "../../../_components/answered.ts";
import { ReasonedAct } from "../../../_components/reasoned-act.tsx";

type Props = { personId: string; name: string; confirm: (raw: unknown) => Promise<Answered<unknown>> };

export function ConfirmPerson({ personId, name, confirm }: Props) {
  return (
    <ReasonedAct
      words="Confirm who it is"
      title={`Confirm that this is ${name}?`}
      doWords="Confirm"
      label="How do you know?"
      act={(how) => confirm({ personId, how })}
    >
      <p>
        Confirm only after you have seen or spoken to the person. Until then nothing can be signed with the new
        password.
      </p>
    </ReasonedAct>
  );
}
