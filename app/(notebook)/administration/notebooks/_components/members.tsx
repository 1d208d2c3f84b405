"use client";
import { useState } from "react";
import { SelectField } from "../../../../../components/ui/select-field.tsx";
import type { Answered } from "../../../../_components/answered.ts";
import { ReasonedAct } from "../../../../_components/reasoned-act.tsx";

type Act = (raw: unknown) => Promise<Answered<unknown>>;
type Notebook = { id: string; title: string };

type MembersProps = {
  notebook: Notebook;
  members: { personId: string; printedName: string; roles: string[] }[];
  takeOut: Act;
};

export function Members({ notebook, members, takeOut }: MembersProps) {
  if (members.length === 0) return <p className="note">Nobody is a member yet.</p>;
  return (
    <ul className="plain">
      {members.map(({ personId, printedName, roles }) => (
        <li key={personId}>
          <b>{printedName}</b> <span className="faint">{roles.join(", ") || "no role"}</span>{" "}
          <ReasonedAct
            words="end the membership"
            kind="quiet-stop"
            title={`End the membership of ${printedName} in ${notebook.title}?`}
            doWords="End it"
            stops
            act={(reason) => takeOut({ notebookId: notebook.id, personId, reason })}
          >
            <p>Open pages of this notebook close for them within seconds. What they wrote and signed stays.</p>
          </ReasonedAct>
        </li>
      ))}
    </ul>
  );
}

type AddProps = { notebook: Notebook; people: { id: string; name: string; roles: string }[]; takeIn: Act };

export function AddMember({ notebook, people, takeIn }: AddProps) {
  const [chosen, setChosen] = useState("");
  const person = people.find(({ id }) => id === chosen);
  if (people.length === 0) return <p className="note">Everybody is a member.</p>;
  return (
    <div className="row-of">
      <SelectField
        label={`A new member of ${notebook.title}`}
        choices={people.map(({ id, name, roles }) => ({ value: id, label: name, aside: roles }))}
        value={person?.id ?? ""}
        onChange={setChosen}
      />
      {person === undefined ? null : (
        <ReasonedAct
          key={person.id}
          words={`Make ${person.name} a member`}
          kind="plain"
          title={`Make ${person.name} a member of ${notebook.title}?`}
          doWords="Make a member"
          act={(reason) => takeIn({ notebookId: notebook.id, personId: person.id, reason })}
        >
          <p>They read every entry of the notebook, earlier ones too, and do there what their roles allow.</p>
        </ReasonedAct>
      )}
    </div>
  );
}
