// What the counterfoil of an entry holds in every state: who, when, which files, which revisions, what happened.
import Link from "next/link";
import { formatBytes, formatDate, formatDateTime } from "../../../../components/format.ts";
import { StubSection } from "../../../../components/leaf/counterfoil.tsx";
import { Fingerprint } from "../../../../components/leaf/fingerprint.tsx";
import { Sealed } from "../../../../components/leaf/seal-print.tsx";
import { StateMark } from "../../../../components/leaf/state-mark.tsx";
import type { SignedContent } from "../../../../db/content.ts";
import type { EntryRead } from "../../../../db/entries.ts";

type Props = { entry: EntryRead; timeZone: string };

export function PeopleSections({ entry }: { entry: EntryRead }) {
  const others = entry.contributors.filter(({ id }) => id !== entry.author.id);
  return (
    <StubSection title="Author">
      <p>
        <b>{entry.author.printedName}</b>
      </p>
      {others.length === 0 ? null : (
        <>
          <h3>Contributors</h3>
          <p>{others.map(({ printedName }) => printedName).join(", ")}</p>
        </>
      )}
      {entry.witness === null ? null : (
        <>
          <h3>Witness assigned</h3>
          <p>{entry.witness.printedName}</p>
        </>
      )}
    </StubSection>
  );
}

export function FilesSection({ files }: { files: SignedContent["attachments"] }) {
  if (files.length === 0) return null;
  return (
    <StubSection title="Attachments, SHA-256">
      <ul className="plain">
        {files.map(({ id, name, size, sha256, struck }) => (
          <li key={id}>
            <a href={`/api/attachments/${id}`} className={struck === null ? undefined : "struck"}>
              {name}
            </a>{" "}
            <span className="faint">{formatBytes(size)}</span>
            <Fingerprint hex={sha256} label={`SHA-256 of ${name}`} />
            {struck === null ? null : (
              <p className="note">
                Struck by {struck.by.printedName}: {struck.reason}
              </p>
            )}
          </li>
        ))}
      </ul>
    </StubSection>
  );
}

/** The seals of the revision, and the full hash that decides, unless that stands on the leaf already. */
export function SealsSection({ entry, timeZone, withoutHash }: Props & { withoutHash?: boolean }) {
  const [first] = entry.signatures;
  if (first === undefined) return null;
  return (
    <>
      {entry.signatures.map(({ id, kind, printedName, at, meaning, contentSha256, acknowledgement }) => (
        <StubSection key={id}>
          <Sealed
            hash={contentSha256}
            by={kind}
            name={printedName}
            capacity={kind}
            when={formatDateTime(at, timeZone, { seconds: true })}
            meaning={meaning}
            withoutHash
          >
            {acknowledgement ? <p className="note">About what differs: “{acknowledgement}”</p> : null}
          </Sealed>
        </StubSection>
      ))}
      {withoutHash ? null : (
        <StubSection title="Signed content, SHA-256">
          <Fingerprint hex={first.contentSha256} label="SHA-256 of the signed content" />
          {entry.signatures.length > 1 ? (
            <p className="note">Two like figures: author and witness signed the same SHA-256.</p>
          ) : null}
        </StubSection>
      )}
    </>
  );
}

export function RevisionsSection({ entry, timeZone }: Props) {
  if (entry.revisions.length < 2) return null;
  return (
    <StubSection title="Revisions">
      <ul className="plain">
        {entry.revisions.map((line) => (
          <li key={line.id}>
            {line.id === entry.revision.id ? (
              <b>Revision {line.number}</b>
            ) : (
              <Link href={`/entries/${entry.label}/${line.number}`}>Revision {line.number}</Link>
            )}{" "}
            <StateMark state={line.state} />
            {line.returned === null ? null : (
              <p className="note">
                Returned by {line.returned.by}, {formatDateTime(line.returned.at, timeZone)}: “{line.returned.reason}”
              </p>
            )}
          </li>
        ))}
      </ul>
    </StubSection>
  );
}

/** Done and recorded, side by side: a day typed, and the server's clock. */
export function DaysSection({ entry, timeZone }: Props) {
  const { head, recorded, revision } = entry;
  return (
    <StubSection title="Done and recorded">
      <p>
        Done on {head.doneOn === "" ? "a day not given" : formatDate(head.doneOn)}
        <br />
        Recorded {recorded.at === null ? "not yet" : formatDateTime(recorded.at, timeZone)}
      </p>
      {recorded.isLate ? (
        <p>
          <StateMark state="overdue">Recorded late</StateMark>
          {head.lateReason === "" ? null : <span className="note"> {head.lateReason}</span>}
        </p>
      ) : null}
      <p className="note">
        Revision {revision.number} begun {formatDateTime(revision.createdAt, timeZone)}
      </p>
    </StubSection>
  );
}
