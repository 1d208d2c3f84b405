"use client";
import { useState } from "react";
import { Button } from "../../../../../components/ui/button.tsx";
import { SelectField } from "../../../../../components/ui/select-field.tsx";
import { TextField } from "../../../../../components/ui/text-field.tsx";

type Props = {
  asked: { person: string; action: string; from: string; to: string };
  people: { id: string; name: string }[];
  actions: readonly string[];
};

/** The filters stand in the address. */
export function AuditForm({ asked, people, actions }: Props) {
  const [person, setPerson] = useState(asked.person || "any");
  const [action, setAction] = useState(asked.action || "any");
  return (
    <form className="search-more" action="/administration/audit" method="get">
      <SelectField
        label="Person"
        choices={[{ value: "any", label: "anybody" }, ...people.map(({ id, name }) => ({ value: id, label: name }))]}
        value={person}
        onChange={setPerson}
      />
      <SelectField
        label="Kind of event"
        choices={[{ value: "any", label: "any" }, ...actions.map((each) => ({ value: each, label: each }))]}
        value={action}
        onChange={setAction}
      />
      <TextField label="From" aside="UTC" type="date" name="from" defaultValue={asked.from} />
      <TextField label="To" aside="UTC" type="date" name="to" defaultValue={asked.to} />
      <input type="hidden" name="person" value={person === "any" ? "" : person} />
      <input type="hidden" name="action" value={action === "any" ? "" : action} />
      <Button type="submit">Show these</Button>
    </form>
  );
}
