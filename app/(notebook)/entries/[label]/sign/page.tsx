import type { Metadata } from "next";
import { redirect } from "next/navigation";
import { Notice } from "../../../../../components/ui/says.tsx";
import { readEntry } from "../../../../../db/entries.ts";
import { MEANINGS } from "../../../../../db/manifest.ts";
import { contentToSign } from "../../../../../db/signatures.ts";
import { StaticPage } from "../../../../../editor/read/static-page.tsx";
import { readForPage } from "../../../../_server/page-read.ts";
import { SignAsAuthor } from "../../_components/sign-as-author.tsx";
import { frozenContent } from "../../_page/frozen.ts";
import { open, readToTheEnd, signNow } from "../../_page/signing-actions.ts";
import { DaysSection, FilesSection, PeopleSections } from "../../_page/stub.tsx";

type Props = { params: Promise<{ label: string }> };

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: `Sign ${(await params).label}` };
}

/** The whole draft as it will be signed, with its hash. Only its author has such a page. */
export default async function SignPage({ params }: Props) {
  const { label } = await params;
  const { actor, read } = await readForPage(async (person, db) => {
    const entry = await readEntry(db, person, label);
    if (!entry.may.sign && entry.because.sign !== "signing.held") redirect(`/entries/${label}`);
    if (!entry.may.sign) return { entry, toSign: null, frozen: null };
    const toSign = await contentToSign(db, person, entry.revision.id);
    return { entry, toSign, frozen: await frozenContent(db, toSign.view.content) };
  });
  const { entry, toSign, frozen } = read;
  if (toSign === null) {
    return (
      <Notice kind="warn" finding="Signing is held.">
        Your password was reset by an administrator. A second authorised person has to confirm who you are first.
      </Notice>
    );
  }
  const { content, hindrances } = toSign.view;
  return (
    <SignAsAuthor
      key={toSign.sha256}
      label={label}
      of={`${entry.notebook.title}, revision ${entry.revision.number}`}
      revisionId={entry.revision.id}
      hash={toSign.sha256}
      meaning={MEANINGS.author}
      signer={{ name: actor.printedName, email: actor.email }}
      hindrances={hindrances}
      open={open}
      readToTheEnd={readToTheEnd}
      sign={signNow}
      page={
        <>
          <Notice kind="info" finding="This is the page exactly as it will be signed.">
            Read it to its end; then the form at the counterfoil opens.
          </Notice>
          <StaticPage {...frozen} decimalSign={actor.decimalSign} />
        </>
      }
      sections={
        <>
          <PeopleSections entry={entry} />
          <DaysSection entry={entry} timeZone={actor.timeZone} />
          <FilesSection files={content.attachments} />
        </>
      }
    />
  );
}
