import type { Metadata } from "next";
import { Counterfoil, StubHead, StubSection } from "../../../../components/leaf/counterfoil.tsx";
import { Leaf, LeafTitle } from "../../../../components/leaf/leaf.tsx";
import { SideRow } from "../../../../components/leaf/side-row.tsx";
import { EmptyState } from "../../../../components/ui/empty-state.tsx";
import { listAllNotebooks } from "../../../../db/notebooks.ts";
import { listPeople } from "../../../../db/people.ts";
import { settings } from "../../../_server/env.ts";
import { readForPage } from "../../../_server/page-read.ts";
import { Parts } from "../_components/parts.tsx";
import { AddMember, Members } from "./_components/members.tsx";
import { NotebookForm } from "./_components/notebook-form.tsx";
import { makeNotebook, takeIn, takeOut } from "./actions.ts";

export const metadata: Metadata = { title: "Notebooks and members" };

export default async function AdministeredNotebooksPage() {
  const { read } = await readForPage(async (actor, db) => ({
    notebooks: await listAllNotebooks(db, actor),
    people: (await listPeople(db, actor)).filter(({ closedAt }) => closedAt === null),
  }));
  return (
    <Leaf
      counterfoil={
        <Counterfoil head={<StubHead number={String(read.notebooks.length)} of="notebooks" />}>
          <StubSection title="Make a notebook">
            <NotebookForm make={makeNotebook} />
          </StubSection>
        </Counterfoil>
      }
    >
      <LeafTitle under="Who is a member reads the notebook, and does there what their roles allow. Administration opens no entry.">
        Notebooks and members
      </LeafTitle>
      <Parts isDemo={settings().demo} />
      {read.notebooks.length === 0 ? (
        <EmptyState finding="There is no notebook yet.">Make the first one at the right.</EmptyState>
      ) : null}
      {read.notebooks.map(({ id, code, title, about, entries, members }) => (
        <SideRow key={id} label={code} note={`${entries} ${entries === 1 ? "entry" : "entries"}`} level={2}>
          <p>
            <b>{title}</b> <span className="faint">{about}</span>
          </p>
          <Members notebook={{ id, title }} members={members} takeOut={takeOut} />
          <AddMember
            notebook={{ id, title }}
            people={read.people
              .filter((person) => members.every(({ personId }) => personId !== person.id))
              .map((person) => ({ id: person.id, name: person.printedName, roles: person.roles.join(", ") }))}
            takeIn={takeIn}
          />
        </SideRow>
      ))}
    </Leaf>
  );
}
