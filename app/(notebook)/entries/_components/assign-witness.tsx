"use client";
import { useRouter } from "next/navigation";
import { useState } from "react";
import { FieldError } from "../../../../components/ui/field-parts.tsx";
import { SelectField } from "../../../../components/ui/select-field.tsx";
import { type Answered, sentenceOf } from "../../../_components/answered.ts";

type Props = {
  entryId: string;
  now: string | null;
  /** members with the role who wrote nothing in the entry */
  witnesses: { id: string; printedName: string }[];
  assign: (raw: unknown) => Promise<Answered<unknown>>;
};

const ANY = "any";

export function AssignWitness({ entryId, now, witnesses, assign }: Props) {
  const router = useRouter();
  const [fault, setFault] = useState<string | null>(null);
  const choose = async (chosen: string) => {
    setFault(null);
    const answered = await assign({ entryId, witnessId: chosen === ANY ? null : chosen });
    if (answered.ok) router.refresh();
    else setFault(sentenceOf(answered.problem));
  };
  return (
    <>
      <SelectField
        label="Witness"
        choices={[
          { value: ANY, label: "any witness of the notebook" },
          ...witnesses.map(({ id, printedName }) => ({ value: id, label: printedName })),
        ]}
        value={now ?? ANY}
        onChange={choose}
      />
      {fault === null ? null : <FieldError heard>{fault}</FieldError>}
    </>
  );
}
