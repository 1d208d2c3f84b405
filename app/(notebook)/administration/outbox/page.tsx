import type { Metadata } from "next";
import Link from "next/link";
import { notFound } from "next/navigation";
import { formatDateTime } from "../../../../components/format.ts";
import { Leaf, LeafTitle } from "../../../../components/leaf/leaf.tsx";
import { SideRow } from "../../../../components/leaf/side-row.tsx";
import { buttonClass } from "../../../../components/ui/button-class.ts";
import { EmptyState } from "../../../../components/ui/empty-state.tsx";
import { listOutbox } from "../../../../db/mail.ts";
import { settings } from "../../../_server/env.ts";
import { readForPage } from "../../../_server/page-read.ts";
import { Parts } from "../_components/parts.tsx";

export const metadata: Metadata = { title: "Mail sent" };

/** Only in the demo: elsewhere a mail holds links that are its receiver's alone. */
export default async function OutboxPage({ searchParams }: { searchParams: Promise<{ after?: string | string[] }> }) {
  if (!settings().demo) notFound();
  const { after } = await searchParams;
  const { actor, read } = await readForPage((person, db) =>
    listOutbox(db, person, typeof after === "string" ? { after } : {}),
  );
  return (
    <Leaf className="wide">
      <LeafTitle under="The demo posts nothing: what would have been mailed stands here.">Mail sent</LeafTitle>
      <Parts isDemo />
      {read.mails.length === 0 ? (
        <EmptyState finding="No mail yet.">
          Invitations, forgotten passwords, signatures and returns bring some.
        </EmptyState>
      ) : null}
      {read.mails.map(({ id, to, subject, text, createdAt }) => (
        <SideRow key={id} label={formatDateTime(createdAt, actor.timeZone)} level={2}>
          <p>
            <b>{subject}</b> <span className="faint">to {to}</span>
          </p>
          <p className="mail-text">{text}</p>
        </SideRow>
      ))}
      {read.next === null ? null : (
        <p>
          <Link className={buttonClass("plain")} href={`/administration/outbox?after=${read.next}`}>
            Show older mail
          </Link>
        </p>
      )}
    </Leaf>
  );
}
