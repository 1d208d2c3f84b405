import type { Metadata } from "next";
import { formatDate } from "../../../../components/format.ts";
import { Counterfoil, StubHead, StubSection } from "../../../../components/leaf/counterfoil.tsx";
import { Leaf, LeafTitle } from "../../../../components/leaf/leaf.tsx";
import { PlainTable } from "../../../../components/ui/plain-table.tsx";
import { listPeople, type PersonLine } from "../../../../db/people.ts";
import { ROLES } from "../../../../db/policy.ts";
import { settings } from "../../../_server/env.ts";
import { readForPage } from "../../../_server/page-read.ts";
import { confirmPerson } from "../../actions.ts";
import { Parts } from "../_components/parts.tsx";
import { InviteForm } from "./_components/invite-form.tsx";
import { PersonActs, RoleTicks } from "./_components/person-acts.tsx";
import { closeAccount, giveRole, invitePerson, startReset, takeRole } from "./actions.ts";

export const metadata: Metadata = { title: "People and roles" };

export default async function PeoplePage() {
  const { actor, read: people } = await readForPage((person, db) => listPeople(db, person));
  const there = people.filter(({ closedAt }) => closedAt === null);
  return (
    <Leaf
      counterfoil={
        <Counterfoil
          head={
            <StubHead
              number={String(there.length)}
              of={there.length === 1 ? "person has an account" : "people have an account"}
            />
          }
        >
          <StubSection title="Invite somebody">
            <InviteForm invite={invitePerson} />
          </StubSection>
        </Counterfoil>
      }
    >
      <LeafTitle under="A role says what somebody is qualified for; membership of a notebook says where. Every change is an event with its reason.">
        People and roles
      </LeafTitle>
      <Parts isDemo={settings().demo} />
      <PlainTable
        caption="Everybody who has or had an account"
        captionHidden
        columns={[
          { id: "name", head: "Printed name", names: true },
          { id: "email", head: "E-mail" },
          { id: "roles", head: "Roles" },
          { id: "notebooks", head: "Notebooks", kind: "mono" },
          { id: "acts", head: "Account" },
        ]}
        rows={people.map((person) => ({
          key: person.id,
          className: person.closedAt ? "faint" : undefined,
          cells: cellsOf(person, person.id === actor.id),
        }))}
      />
    </Leaf>
  );
}

function cellsOf(person: PersonLine, isSelf: boolean) {
  const { id, printedName, email, roles, notebooks, closedAt, signingHeldAt } = person;
  const isFixed = isSelf || closedAt !== null;
  return [
    printedName,
    email,
    isFixed ? (
      roles.join(", ") || "none"
    ) : (
      <RoleTicks
        key="roles"
        personId={id}
        name={printedName}
        held={roles}
        roles={ROLES}
        give={giveRole}
        take={takeRole}
      />
    ),
    notebooks.join(" "),
    closedAt !== null ? (
      `closed ${formatDate(closedAt)}`
    ) : isSelf ? (
      "yours: another administrator changes it"
    ) : (
      <PersonActs
        key="acts"
        personId={id}
        name={printedName}
        held={signingHeldAt !== null}
        close={closeAccount}
        reset={startReset}
        confirm={confirmPerson}
      />
    ),
  ];
}
