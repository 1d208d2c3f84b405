import type { Metadata } from "next";
import Link from "next/link";
import { notFound } from "next/navigation";
import { formatCount, formatDate } from "../../../../components/format.ts";
import { Counterfoil, StubHead, StubSection } from "../../../../components/leaf/counterfoil.tsx";
import { Leaf, LeafTitle } from "../../../../components/leaf/leaf.tsx";
import { StateMark } from "../../../../components/leaf/state-mark.tsx";
import { buttonClass } from "../../../../components/ui/button-class.ts";
import { EmptyState } from "../../../../components/ui/empty-state.tsx";
import { PlainTable } from "../../../../components/ui/plain-table.tsx";
import { type EntryLine, readNotebook } from "../../../../db/notebooks.ts";
import { BeginEntry } from "../../../_components/begin-entry.tsx";
import { readForPage } from "../../../_server/page-read.ts";
import { begin } from "../../actions.ts";

type Props = { params: Promise<{ code: string }>; searchParams: Promise<{ below?: string | string[] }> };

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: (await params).code };
}

export default async function NotebookPage({ params, searchParams }: Props) {
  const { code } = await params;
  const { below } = await searchParams;
  const after = typeof below === "string" && /^\d{1,9}$/.test(below) ? Number(below) : undefined;
  if (!/^[A-Z][A-Z0-9]{1,7}$/.test(code)) notFound();
  const { actor, read } = await readForPage((actor, db) => readNotebook(db, actor, { code, after }));
  const { notebook, entries, next, mayBegin } = read;
  return (
    <Leaf
      counterfoil={
        <Counterfoil
          head={
            <StubHead
              number={code}
              of={`${formatCount(notebook.entries)} ${notebook.entries === 1 ? "entry" : "entries"}`}
              act={mayBegin ? <BeginEntry notebooks={[notebook]} begin={begin} /> : undefined}
            />
          }
        >
          <StubSection title="Members">
            <ul className="plain">
              {notebook.members.map(({ personId, printedName, roles }) => (
                <li key={personId}>
                  <b>{printedName}</b> <span className="faint">{roles.join(", ") || "no role"}</span>
                </li>
              ))}
            </ul>
          </StubSection>
        </Counterfoil>
      }
    >
      <LeafTitle under={notebook.about}>{notebook.title}</LeafTitle>
      {entries.length === 0 ? (
        <EmptyState
          finding={after === undefined ? "Nothing is written in this notebook yet." : "There are no older entries."}
        >
          {mayBegin ? "Begin the first entry at the right." : "Researchers who are members begin entries."}
        </EmptyState>
      ) : (
        <PlainTable
          className="tight"
          caption={after === undefined ? "Entries, newest first" : `Entries below number ${after}`}
          columns={[
            { id: "label", head: "Entry", kind: "mono" },
            { id: "title", head: "Title", names: true },
            { id: "author", head: "Author" },
            { id: "done", head: "Done on" },
            { id: "begun", head: "Recorded since" },
            { id: "state", head: "State" },
          ]}
          rows={entries.map((entry) => ({ key: entry.id, cells: cellsOf(entry, actor.timeZone) }))}
        />
      )}
      {next === null ? null : (
        <p>
          <Link className={buttonClass("plain")} href={`/notebooks/${code}?below=${next}`}>
            Show older entries
          </Link>
        </p>
      )}
    </Leaf>
  );
}

function cellsOf(entry: EntryLine, timeZone: string) {
  const address = `/entries/${entry.label}`;
  return [
    <Link key="label" href={address}>
      {entry.label}
    </Link>,
    <Link key="title" href={address} className={entry.state === "voided" ? "written struck" : "written"}>
      {entry.title || "Without a title"}
    </Link>,
    entry.author,
    entry.doneOn === null ? (
      <span key="done" className="faint">
        not given
      </span>
    ) : (
      formatDate(entry.doneOn)
    ),
    formatDate(entry.createdAt, timeZone),
    <StateMark key="state" state={entry.state} />,
  ];
}
