// An entry as a leaf: the editor for whoever writes on its draft, the frozen page for everybody else and every other state.
import Link from "next/link";
import type { ReactNode } from "react";
import { formatDateTime, relativeDay } from "../../../../components/format.ts";
import { Counterfoil, StubHead, StubSection } from "../../../../components/leaf/counterfoil.tsx";
import { Leaf } from "../../../../components/leaf/leaf.tsx";
import { PrintStub, PrintWatermark } from "../../../../components/leaf/print-stub.tsx";
import { Seal } from "../../../../components/leaf/seal-print.tsx";
import { StateMark } from "../../../../components/leaf/state-mark.tsx";
import { buttonClass } from "../../../../components/ui/button-class.ts";
import { Notice } from "../../../../components/ui/says.tsx";
import { eligibleWitnesses } from "../../../../db/eligible-witnesses.ts";
import { type EntryRead, readEntry } from "../../../../db/entries.ts";
import type { Actor } from "../../../../db/policy.ts";
import { strayUpdates } from "../../../../db/updates.ts";
import { StaticPage } from "../../../../editor/read/static-page.tsx";
import { readForPage } from "../../../_server/page-read.ts";
import { enter } from "../../../(auth)/sign-in/actions.ts";
import { AssignWitness } from "../_components/assign-witness.tsx";
import { DraftLeaf } from "../_components/draft-leaf.tsx";
import { assign } from "./actions.ts";
import { type Frozen, frozenContent, frozenDraft } from "./frozen.ts";
import { History } from "./history.tsx";
import { DaysSection, FilesSection, PeopleSections, RevisionsSection, SealsSection } from "./stub.tsx";

export async function EntryLeaf({ label, revision }: { label: string; revision?: number }) {
  const { actor, read } = await readForPage(async (person, db) => {
    const entry = await readEntry(db, person, label, revision);
    const writes = entry.may.write;
    const frozen = writes
      ? null
      : entry.signed === null
        ? await frozenDraft(db, person, entry.revision.id)
        : await frozenContent(db, entry.signed.content);
    const witnesses = entry.may.assignWitness ? await eligibleWitnesses(db, person, { entryId: entry.id }) : [];
    return { entry, frozen, db, witnesses, strays: await strayUpdates(db, person, entry.revision.id) };
  });
  const { entry, frozen, db, witnesses, strays } = read;
  const sections = (
    <>
      {strays.length === 0 ? null : (
        <StubSection title="Kept for you">
          <p className="note">
            You sent this when the revision was no longer a draft. It was not added; it is yours to copy into the next
            one.
          </p>
          <p>
            “
            {strays
              .map(({ text }) => text)
              .join("")
              .trim()}
            ” <span className="faint">until {formatDateTime(strays.at(-1)?.at ?? new Date(), actor.timeZone)}</span>
          </p>
        </StubSection>
      )}
      <SealsSection entry={entry} timeZone={actor.timeZone} />
      <PeopleSections entry={entry} />
      <DaysSection entry={entry} timeZone={actor.timeZone} />
      {entry.may.assignWitness ? (
        <StubSection title="Assign a witness">
          <AssignWitness entryId={entry.id} now={entry.witness?.id ?? null} witnesses={witnesses} assign={assign} />
        </StubSection>
      ) : null}
      <FilesSection files={frozen?.files ?? entry.attachments} />
      <RevisionsSection entry={entry} timeZone={actor.timeZone} />
      <StubSection title="What happened">
        <History db={db} actor={actor} entryId={entry.id} />
      </StubSection>
    </>
  );
  if (frozen === null) return <Draft entry={entry} actor={actor} sections={sections} />;
  return <FrozenLeaf entry={entry} actor={actor} frozen={frozen} sections={sections} />;
}

function Draft({ entry, actor, sections }: { entry: EntryRead; actor: Actor; sections: ReactNode }) {
  const { label, notebook, revision, createdAt, may } = entry;
  const previous = entry.revisions.find(({ number }) => number === revision.number - 1);
  return (
    <DraftLeaf
      label={label}
      of={`${notebook.title}, revision ${revision.number}`}
      revisionId={revision.id}
      person={{ id: actor.id, name: actor.printedName }}
      decimalSign={actor.decimalSign}
      timeZone={actor.timeZone}
      recordedAt={createdAt.toISOString()}
      maySign={may.sign}
      whyNot={may.sign ? null : `${entry.author.printedName}, the author, signs.`}
      notice={
        previous?.returned ? (
          <Notice kind="warn" finding={`${previous.returned.by} returned revision ${previous.number}:`}>
            “{previous.returned.reason}” {formatDateTime(previous.returned.at, actor.timeZone)}
          </Notice>
        ) : null
      }
      sections={sections}
      enter={enter}
    />
  );
}

type FrozenProps = { entry: EntryRead; actor: Actor; frozen: Frozen; sections: ReactNode };

function FrozenLeaf({ entry, actor, frozen, sections }: FrozenProps) {
  const { label, notebook, revision, may } = entry;
  const isDraft = revision.state === "draft";
  const was = revision.state === "superseded" || revision.state === "voided" ? revision.state : undefined;
  return (
    <Leaf
      was={was}
      counterfoil={
        <Counterfoil
          head={
            <StubHead
              number={label}
              of={`${notebook.title}, revision ${revision.number}`}
              state={<StateMark state={revision.state}>{stateWords(entry)}</StateMark>}
              act={
                may.countersign ? (
                  <Link className={buttonClass("first")} href={`/entries/${label}/countersign`}>
                    Read and decide
                  </Link>
                ) : undefined
              }
            />
          }
        >
          {sections}
        </Counterfoil>
      }
      print={
        <>
          {isDraft ? <PrintWatermark>Draft, not signed</PrintWatermark> : null}
          <PrintStub number={label} of={`${notebook.title}, revision ${revision.number}, ${revision.state}`}>
            {entry.signatures.map(({ id, kind, printedName, at, meaning, contentSha256 }) => (
              <section key={id}>
                <Seal hash={contentSha256} by={kind} size={96} />
                <p>
                  {printedName}, {kind}
                  <br />
                  {formatDateTime(at, "UTC", { seconds: true })}
                  <br />“{meaning}”
                </p>
                <p className="print-of">{contentSha256}</p>
              </section>
            ))}
          </PrintStub>
        </>
      }
    >
      {noticeOf(entry)}
      <StaticPage
        page={frozen.page}
        head={frozen.head}
        names={frozen.names}
        blocks={frozen.blocks}
        attachments={frozen.attachments}
        decimalSign={actor.decimalSign}
      />
    </Leaf>
  );
}

function stateWords(entry: EntryRead): string | undefined {
  const { waiting } = entry;
  if (waiting === null) return undefined;
  const age = `Signed ${relativeDay(waiting.since, new Date())}`;
  if (waiting.days >= 14) return `${age}, overdue for a witness`;
  return waiting.days >= 7 ? `${age}, waiting for a witness` : age;
}

function noticeOf({ revision, revisions, label, because, may }: EntryRead) {
  const [newest] = revisions;
  if (!revision.isNewest && newest !== undefined) {
    return (
      <Notice kind="info" finding={`This is revision ${revision.number} as it was ${revision.state}.`}>
        <Link href={`/entries/${label}`}>Read revision {newest.number}</Link>, which is the newest.
      </Notice>
    );
  }
  if (revision.state === "signed" && !may.countersign && /contributor|author/.test(because.countersign ?? "")) {
    return (
      <Notice kind="info" finding="It waits for a witness.">
        Whoever wrote in an entry does not witness it; you did.
      </Notice>
    );
  }
  if (revision.state === "draft") {
    return (
      <Notice kind="info" finding="This is a draft.">
        You read it as it stands now; it may change. Reading makes nobody a contributor.
      </Notice>
    );
  }
  return null;
}
