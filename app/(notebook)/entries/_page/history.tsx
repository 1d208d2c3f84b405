import { formatDateTime } from "../../../../components/format.ts";
import { listEvents } from "../../../../db/audit.ts";
import type { Db } from "../../../../db/client.ts";
import type { Actor } from "../../../../db/policy.ts";

const SHOWN = 200;

/** What happened to the entry, as plain sentences, newest first. */
export async function History({ db, actor, entryId }: { db: Db; actor: Actor; entryId: string }) {
  const { events, next } = await listEvents(db, actor, { filters: { entryId }, limit: SHOWN });
  return (
    <details>
      <summary>
        {events.length}
        {next === null ? "" : " newest"} events
      </summary>
      <ol className="history" reversed>
        {events.map(({ seq, at, sentence }) => (
          <li key={seq}>
            {sentence} <time dateTime={at.toISOString()}>{formatDateTime(at, "UTC", { seconds: true })}</time>
          </li>
        ))}
      </ol>
    </details>
  );
}
