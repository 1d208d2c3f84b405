import type { Metadata } from "next";
import Link from "next/link";
import { z } from "zod";
import { formatDateTime } from "../../../../components/format.ts";
import { Leaf, LeafTitle } from "../../../../components/leaf/leaf.tsx";
import { buttonClass } from "../../../../components/ui/button-class.ts";
import { EmptyState } from "../../../../components/ui/empty-state.tsx";
import { PlainTable } from "../../../../components/ui/plain-table.tsx";
import { type EventFilters, listEvents } from "../../../../db/audit.ts";
import { listPeople } from "../../../../db/people.ts";
import { EVENT_ACTIONS } from "../../../../db/sentences.ts";
import { settings } from "../../../_server/env.ts";
import { readForPage } from "../../../_server/page-read.ts";
import { Parts } from "../_components/parts.tsx";
import { AuditForm } from "./_components/audit-form.tsx";

export const metadata: Metadata = { title: "Audit trail" };

const asked = z.object({
  person: z.string().max(64).catch(""),
  action: z.string().max(64).catch(""),
  from: z.iso.date().or(z.literal("")).catch(""),
  to: z.iso.date().or(z.literal("")).catch(""),
  after: z.coerce.number().int().positive().optional().catch(undefined),
});

type Props = { searchParams: Promise<Record<string, string | string[] | undefined>> };

export default async function AuditPage({ searchParams }: Props) {
  const { after, ...address } = asked.parse(await searchParams);
  const filters: EventFilters = {
    ...(address.person === "" ? {} : { personId: address.person }),
    ...(address.action === "" ? {} : { action: address.action }),
    ...(address.from === "" ? {} : { from: new Date(`${address.from}T00:00:00Z`) }),
    ...(address.to === "" ? {} : { to: new Date(Date.parse(`${address.to}T00:00:00Z`) + 86_400_000) }),
  };
  const { read } = await readForPage(async (actor, db) => ({
    page: await listEvents(db, actor, { filters, ...(after === undefined ? {} : { after }) }),
    people: await listPeople(db, actor),
  }));
  const { events, next } = read.page;
  return (
    <Leaf className="wide">
      <LeafTitle under="Append-only; each event carries the hash of the one before it. Times are the server's, in UTC. What a page says stays with those who may read it.">
        Audit trail
      </LeafTitle>
      <Parts isDemo={settings().demo} />
      <AuditForm
        asked={address}
        people={read.people.map(({ id, printedName }) => ({ id, name: printedName }))}
        actions={EVENT_ACTIONS}
      />
      {events.length === 0 ? (
        <EmptyState finding="No event fits.">Take a filter away.</EmptyState>
      ) : (
        <PlainTable
          caption="Events, newest first"
          captionHidden
          columns={[
            { id: "seq", head: "Number", kind: "number" },
            { id: "at", head: "Server time" },
            { id: "what", head: "What happened", names: true },
          ]}
          rows={events.map(({ seq, at, sentence }) => ({
            key: String(seq),
            cells: [String(seq), formatDateTime(at, "UTC", { seconds: true }), sentence],
          }))}
        />
      )}
      {next === null ? null : (
        <p>
          <Link
            className={buttonClass("plain")}
            href={`/administration/audit?${new URLSearchParams({ ...address, after: String(next) })}`}
          >
            Show earlier events
          </Link>
        </p>
      )}
    </Leaf>
  );
}
