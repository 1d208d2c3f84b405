import type { Metadata } from "next";
import { redirect } from "next/navigation";
import { Notice } from "../../../../../components/ui/says.tsx";
import { readEntry } from "../../../../../db/entries.ts";
import { MEANINGS } from "../../../../../db/manifest.ts";
import { StaticPage } from "../../../../../editor/read/static-page.tsx";
import { readForPage } from "../../../../_server/page-read.ts";
import { Countersign } from "../../_components/countersign.tsx";
import { frozenContent } from "../../_page/frozen.ts";
import { check, countersignNow, giveBack, open, readToTheEnd } from "../../_page/signing-actions.ts";
import { DaysSection, FilesSection, PeopleSections, RevisionsSection, SealsSection } from "../../_page/stub.tsx";

type Props = { params: Promise<{ label: string }> };

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: `Countersign ${(await params).label}` };
}

/** The signed revision as its author signed it, for a witness who decides. */
export default async function CountersignPage({ params }: Props) {
  const { label } = await params;
  const { actor, read } = await readForPage(async (person, db) => {
    const entry = await readEntry(db, person, label);
    return { entry, frozen: entry.signed === null ? null : await frozenContent(db, entry.signed.content) };
  });
  const { entry, frozen } = read;
  const { signed, may } = entry;
  if (signed === null || frozen === null || !may.countersign) redirect(`/entries/${label}`);
  const { content, sha256 } = signed;
  return (
    <Countersign
      label={label}
      of={`${entry.notebook.title}, revision ${entry.revision.number}`}
      revisionId={entry.revision.id}
      hash={sha256}
      author={entry.author.printedName}
      meaning={MEANINGS.witness}
      signer={{ name: actor.printedName, email: actor.email }}
      counts={{ blocks: content.blocks.length, files: content.attachments.length }}
      decimalSign={actor.decimalSign}
      open={open}
      readToTheEnd={readToTheEnd}
      check={check}
      countersign={countersignNow}
      giveBack={giveBack}
      page={
        <>
          <Notice
            kind="info"
            finding={`You are reading revision ${entry.revision.number} exactly as ${entry.author.printedName} signed it.`}
          >
            It cannot be typed in any more.
          </Notice>
          <StaticPage {...frozen} decimalSign={actor.decimalSign} />
        </>
      }
      sections={
        <>
          <SealsSection entry={entry} timeZone={actor.timeZone} withoutHash />
          <PeopleSections entry={entry} />
          <DaysSection entry={entry} timeZone={actor.timeZone} />
          <FilesSection files={content.attachments} />
          <RevisionsSection entry={entry} timeZone={actor.timeZone} />
        </>
      }
    />
  );
}
