"use client";
// Begins an entry in one of the person's notebooks and goes there. Presses while it is on its way begin no second one.
import { useRouter } from "next/navigation";
import { useState } from "react";
import { Button } from "../../components/ui/button.tsx";
import { FieldError } from "../../components/ui/field-parts.tsx";
import { SelectField } from "../../components/ui/select-field.tsx";
import { type Answered, sentenceOf } from "./answered.ts";

type Props = {
  notebooks: { id: string; code: string; title: string }[];
  begin: (raw: unknown) => Promise<Answered<{ label: string }>>;
};

export function BeginEntry({ notebooks, begin }: Props) {
  const router = useRouter();
  const [first] = notebooks;
  const [chosen, setChosen] = useState(first?.id ?? "");
  const [pending, setPending] = useState(false);
  const [fault, setFault] = useState<string | null>(null);
  if (first === undefined) return null;
  const press = async () => {
    setPending(true);
    setFault(null);
    const answered = await begin({ notebookId: chosen });
    if (answered.ok) return router.push(`/entries/${answered.value.label}`);
    setPending(false);
    setFault(sentenceOf(answered.problem));
  };
  return (
    <>
      {notebooks.length === 1 ? null : (
        <SelectField
          label="Begin an entry in"
          choices={notebooks.map(({ id, code, title }) => ({ value: id, label: `${code} ${title}` }))}
          value={chosen}
          onChange={setChosen}
        />
      )}
      <Button kind="first" pending={pending} pendingWords="Beginning it" onClick={press}>
        Begin an entry
      </Button>
      {fault === null ? null : <FieldError heard>{fault}</FieldError>}
    </>
  );
}
