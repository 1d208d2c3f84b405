"use client";
// The filters stand in the address, so a link gives the same search to a colleague, with the colleague's rights.
import { useQuery } from "@tanstack/react-query";
import { useState } from "react";
import { FormulaText } from "../../../../components/chem/formula-text.tsx";
import { compoundsQuery } from "../../../../components/query/compounds.ts";
import { Button } from "../../../../components/ui/button.tsx";
import { CheckField } from "../../../../components/ui/check-field.tsx";
import { ComboField } from "../../../../components/ui/combo-field.tsx";
import { SelectField } from "../../../../components/ui/select-field.tsx";
import { TextField } from "../../../../components/ui/text-field.tsx";

type Props = {
  asked: Record<string, string>;
  /** the compound of the address, by its name */
  compound: { id: string; name: string } | null;
  choices: { notebooks: { id: string; code: string; title: string }[]; authors: { id: string; name: string }[] };
  states: readonly string[];
  faults: Record<string, string>;
};

export function SearchForm({ asked, compound, choices, states, faults }: Props) {
  const [picked, setPicked] = useState(compound);
  const [typed, setTyped] = useState(compound?.name ?? "");
  const [withForms, setWithForms] = useState((asked.narrow ?? "") === "");
  const [withMentions, setWithMentions] = useState((asked.role ?? "") === "");
  const [chosen, setChosen] = useState({
    notebook: asked.notebook ?? "",
    author: asked.author ?? "",
    state: asked.state ?? "",
    pHOf: asked.pHOf ?? "",
    date: asked.date ?? "",
  });
  const choose = (name: keyof typeof chosen) => (value: string) =>
    setChosen((before) => ({ ...before, [name]: value }));
  const unresolved = typed.trim() !== "" && picked === null;
  const { data, isFetching } = useQuery(compoundsQuery(picked?.name === typed ? "" : typed));
  return (
    <form
      className="search-form"
      action="/search"
      method="get"
      onSubmit={(event) => {
        const [first] = data?.items ?? [];
        if (!unresolved) return;
        // What was typed and not chosen is taken as the best hit, and shown as what it was read as.
        event.preventDefault();
        if (first !== undefined) {
          setPicked(first);
          setTyped(first.name);
        }
      }}
    >
      <div className="search-first">
        <ComboField
          label="Compound"
          aside="name, synonym, CAS RN, formula in any order"
          input={typed}
          value={picked?.id ?? ""}
          onInput={(text) => {
            setTyped(text);
            if (text !== picked?.name) setPicked(null);
          }}
          onPick={(item) => {
            setPicked({ id: item.id, name: item.text });
            setTyped(item.text);
          }}
          allowsOwnText
          loading={isFetching}
          columns="minmax(0,1fr) 130px 110px"
          items={(data?.items ?? []).map((item) => ({
            id: item.id,
            text: item.name,
            columns: [item.name, <FormulaText key="formula" formula={item.formula} />, item.cas ?? ""],
          }))}
          error={
            faults.compound ??
            (data?.casCheck
              ? `The check digit of ${data.casCheck.given} does not fit; it would be ${data.casCheck.corrected}.`
              : undefined)
          }
          hint={unresolved ? "Choose one from the list." : undefined}
        />
        <input type="hidden" name="compound" value={picked?.id ?? ""} />
        <input type="hidden" name="narrow" value={withForms ? "" : (picked?.id ?? "")} />
        <input type="hidden" name="role" value={withMentions ? "" : "component"} />
        <Button type="submit" kind="first">
          Find entries
        </Button>
      </div>
      <div className="row-of">
        <CheckField checked={withForms} onChange={setWithForms}>
          with salts, hydrates and other forms
        </CheckField>
        <CheckField checked={withMentions} onChange={setWithMentions}>
          also where it is only mentioned
        </CheckField>
      </div>
      <div className="search-more">
        <TextField label="Words" name="words" defaultValue={asked.words} maxLength={400} error={faults.words} />
        <SelectField
          label="Notebook"
          choices={[
            { value: "any", label: "all that you may read" },
            ...choices.notebooks.map(({ id, code, title }) => ({ value: id, label: `${code} ${title}` })),
          ]}
          unchosen="all that you may read"
          value={chosen.notebook}
          onChange={choose("notebook")}
        />
        <SelectField
          label="Author"
          choices={[
            { value: "any", label: "anybody" },
            ...choices.authors.map(({ id, name }) => ({ value: id, label: name })),
          ]}
          unchosen="anybody"
          value={chosen.author}
          onChange={choose("author")}
        />
        <SelectField
          label="State"
          choices={[{ value: "any", label: "any" }, ...states.map((state) => ({ value: state, label: state }))]}
          unchosen="any"
          value={chosen.state}
          onChange={choose("state")}
        />
        <SelectField
          label="Day of"
          choices={[
            { value: "recorded", label: "recording" },
            { value: "done", label: "doing" },
            { value: "signed", label: "signing" },
          ]}
          unchosen="recording"
          value={chosen.date}
          onChange={choose("date")}
        />
        <TextField label="From" name="from" type="date" defaultValue={asked.from} error={faults.from} />
        <TextField label="To" name="to" type="date" defaultValue={asked.to} error={faults.to} />
        <SelectField
          label="pH"
          choices={[
            { value: "any", label: "of no matter" },
            { value: "calculated", label: "calculated" },
            { value: "measured", label: "measured" },
          ]}
          unchosen="of no matter"
          value={chosen.pHOf}
          onChange={choose("pHOf")}
          error={faults.pHOf}
        />
        <TextField
          label="from pH"
          name="pHFrom"
          inputMode="decimal"
          defaultValue={asked.pHFrom}
          error={faults.pHFrom}
        />
        <TextField label="to pH" name="pHTo" inputMode="decimal" defaultValue={asked.pHTo} error={faults.pHTo} />
      </div>
      {Object.entries(chosen).map(([name, value]) => (
        <input key={name} type="hidden" name={name} value={value === "any" ? "" : value} />
      ))}
    </form>
  );
}
