import type { Metadata } from "next";
import Link from "next/link";
import type { ReactNode } from "react";
import { formatDate, formatDateTime, relativeDay } from "../../../components/format.ts";
import { Counterfoil, StubSection } from "../../../components/leaf/counterfoil.tsx";
import { Leaf, LeafTitle } from "../../../components/leaf/leaf.tsx";
import { SideRow } from "../../../components/leaf/side-row.tsx";
import { StateMark } from "../../../components/leaf/state-mark.tsx";
import { EmptyState } from "../../../components/ui/empty-state.tsx";
import { type DeskLine, desk } from "../../../db/desk.ts";
import { listNotebooks } from "../../../db/notebooks.ts";
import { listHeldPeople } from "../../../db/people.ts";
import { BeginEntry } from "../../_components/begin-entry.tsx";
import { readForPage } from "../../_server/page-read.ts";
import { begin, confirmPerson } from "../actions.ts";
import { ConfirmPerson } from "./_components/confirm-person.tsx";

export const metadata: Metadata = { title: "Desk" };

const WORDS_OF_COUNT = [
  "Nothing is",
  "One thing is",
  "Two things are",
  "Three things are",
  "Four things are",
  "Five things are",
  "Six things are",
];

export default async function DeskPage() {
  const { actor, read } = await readForPage(async (person, db) => ({
    lies: await desk(db, person),
    notebooks: person.roles.includes("researcher") ? await listNotebooks(db, person) : [],
    held: person.roles.some((role) => role === "supervisor" || role === "administrator")
      ? await listHeldPeople(db, person)
      : [],
  }));
  const { drafts, returned, toCountersign, signed } = read.lies;
  const held = read.held.filter(({ id }) => id !== actor.id);
  const count = drafts.length + returned.length + toCountersign.length + held.length;
  const now = new Date();
  const zone = actor.timeZone;
  return (
    <Leaf
      counterfoil={
        <Counterfoil>
          {read.notebooks.length === 0 ? null : (
            <StubSection title="Begin">
              <BeginEntry notebooks={read.notebooks} begin={begin} />
            </StubSection>
          )}
          <StubSection title="Signed by you, waiting for a witness">
            {signed.length === 0 ? <p className="note">None.</p> : null}
            <ul className="plain">
              {signed.map((line) => (
                <li key={line.entryId}>
                  <Link href={`/entries/${line.label}`}>{line.label}</Link> {line.title || "Without a title"}
                  <br />
                  <Age line={line} since={`signed ${relativeDay(line.since, now, zone)}`} />
                </li>
              ))}
            </ul>
          </StubSection>
        </Counterfoil>
      }
    >
      <LeafTitle under={formatDate(now, zone, { weekday: true })}>
        {WORDS_OF_COUNT[count] ?? `${count} things are`} yours to do
      </LeafTitle>
      {count === 0 ? (
        <EmptyState finding="Your desk is clear.">
          {read.notebooks.length > 0
            ? "Begin an entry at the right, or read in your notebooks."
            : "What waits for you will lie here."}
        </EmptyState>
      ) : null}
      <Pile label="Returned" note={`${returned.length}, with a reason`} lines={returned}>
        {(line) => (
          <Line key={line.entryId} line={line} go="Go on writing">
            {line.reason === null ? null : <blockquote className="reason">{line.reason}</blockquote>}
            <p className="note">
              Revision {line.revision} is open for you since {formatDateTime(line.since, zone)}.
            </p>
          </Line>
        )}
      </Pile>
      <Pile label="To countersign" note={`${toCountersign.length}, you are a witness`} lines={toCountersign}>
        {(line) => (
          <Line key={line.entryId} line={line} go="Read and decide" href={`/entries/${line.label}/countersign`}>
            <p className="note">
              <Age line={line} since={`Signed by ${line.author} ${relativeDay(line.since, now, zone)}`} />
            </p>
          </Line>
        )}
      </Pile>
      {held.length === 0 ? null : (
        <SideRow label="Signing held" note={`${held.length}, to confirm`} level={2} first>
          {held.map(({ id, printedName, signingHeldAt }) => (
            <div key={id} className="desk-line">
              <p>
                <b>{printedName}</b>’s password was reset by an administrator
                {signingHeldAt === null ? "" : `, ${relativeDay(signingHeldAt, now, zone)}`}.
              </p>
              <ConfirmPerson personId={id} name={printedName} confirm={confirmPerson} />
            </div>
          ))}
        </SideRow>
      )}
      <Pile label="Drafts" note={String(drafts.length)} lines={drafts}>
        {(line) => (
          <Line key={line.entryId} line={line} go="Go on writing">
            <p className="note">
              <Age line={line} since={`Last typed in ${relativeDay(line.since, now, zone)}`} unsigned />
            </p>
          </Line>
        )}
      </Pile>
    </Leaf>
  );
}

function Pile({
  label,
  note,
  lines,
  children,
}: {
  label: string;
  note: string;
  lines: DeskLine[];
  children: (line: DeskLine) => ReactNode;
}) {
  if (lines.length === 0) return null;
  return (
    <SideRow label={label} note={note} level={2}>
      {lines.map(children)}
    </SideRow>
  );
}

function Line({
  line,
  go,
  href = `/entries/${line.label}`,
  children,
}: {
  line: DeskLine;
  go: string;
  href?: string;
  children: ReactNode;
}) {
  return (
    <div className="desk-line">
      <span className="mono">{line.label}</span>
      <div>
        <p className="written">{line.title || "Without a title"}</p>
        {children}
      </div>
      <Link className="quiet" href={href} aria-label={`${go}: ${line.label}`}>
        {go}
      </Link>
    </div>
  );
}

const WAITING_DAYS = 7;
const OVERDUE_DAYS = 14;

/** From day 7 "waiting", from day 14 "overdue", in words and with a mark (SGN-17). */
function Age({ line, since, unsigned }: { line: DeskLine; since: string; unsigned?: boolean }) {
  const what = unsigned ? "unsigned" : "without a witness";
  if (line.days >= OVERDUE_DAYS)
    return <StateMark state="overdue">{`${since}; overdue, ${line.days} days ${what}`}</StateMark>;
  if (line.days >= WAITING_DAYS)
    return <StateMark state="waiting">{`${since}; waiting, ${line.days} days ${what}`}</StateMark>;
  return <>{since}</>;
}
