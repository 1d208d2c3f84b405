// Who wrote it (REC-12), from the server's record and never from what a browser claims: a typed value from the row that its
// accepted update left, running text from the Yjs client that every character carries and the person to whom it belongs.
import { and, asc, eq } from "drizzle-orm";
import * as Y from "yjs";
import type { Db } from "./client.ts";
import { namesOfPeople } from "./content.ts";
import { readPage } from "./pages.ts";
import { type Actor, demand } from "./policy.ts";
import { user } from "./schema/people.ts";
import { typedValues, updates, yjsClients } from "./schema/records.ts";
import { findRevision } from "./subjects.ts";

export type Writer = { personId: string; printedName: string; at: Date; value: string; label: string };

/** Who set the typed value that stands at a path, e.g. `block.<id>.row.<id>.amount`; null when none stands there. */
export async function writerOf(
  db: Db,
  asked: Actor,
  { revisionId, path }: { revisionId: string; path: string },
): Promise<Writer | null> {
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "entry.read", revision.subject);
  const [writer] = await db
    .select({
      personId: typedValues.personId,
      printedName: user.name,
      at: typedValues.at,
      value: typedValues.value,
      label: typedValues.label,
    })
    .from(typedValues)
    .innerJoin(user, eq(user.id, typedValues.personId))
    .where(and(eq(typedValues.revisionId, revisionId), eq(typedValues.path, path)));
  return writer ?? null;
}

export type Passage = {
  text: string;
  /** struck text is no longer on the page, and stays answerable */
  struck: boolean;
  /** null: the server's own first state */
  personId: string | null;
  printedName: string | null;
  /** when it was accepted; null when it came with the copy of an earlier revision */
  at: Date | null;
};

/** The running text of a page, line by line in its order, in passages of one writer each. */
export async function writersOfText(db: Db, asked: Actor, revisionId: string): Promise<Passage[][]> {
  const { revision, actor } = await findRevision(db, asked, revisionId);
  demand(actor, "entry.read", revision.subject);
  const owners = await db
    .select({ clientId: yjsClients.clientId, personId: yjsClients.personId })
    .from(yjsClients)
    .where(eq(yjsClients.revisionId, revisionId));
  const ownerOf = new Map(owners.map((row) => [row.clientId, row.personId]));
  const names = await namesOfPeople(
    db,
    owners.flatMap((row) => (row.personId === null ? [] : [row.personId])),
  );
  const acceptedAt = await acceptances(db, revisionId);
  return readPage(db, revision, (doc) =>
    linesOf(doc.getXmlFragment("page")).map((line) =>
      passagesOf(line, (item) => {
        const personId = ownerOf.get(item.id.client) ?? null;
        const printedName = personId === null ? null : (names.get(personId) ?? null);
        return { personId, printedName, at: acceptedAt(item.id.client, item.id.clock) };
      }),
    ),
  );
}

type Origin = Pick<Passage, "personId" | "printedName" | "at">;

function linesOf(parent: Y.XmlFragment): Y.XmlText[] {
  return parent.toArray().flatMap((child) => {
    if (child instanceof Y.XmlText) return [child];
    return child instanceof Y.XmlFragment ? linesOf(child) : [];
  });
}

function passagesOf(line: Y.XmlText, originOf: (item: Y.Item) => Origin): Passage[] {
  const passages: Passage[] = [];
  for (let item = line._start; item !== null; item = item.right) {
    if (!(item.content instanceof Y.ContentString)) continue;
    const origin = originOf(item);
    const last = passages.at(-1);
    const goesOn =
      last !== undefined &&
      last.struck === item.deleted &&
      last.personId === origin.personId &&
      last.at?.getTime() === origin.at?.getTime();
    if (goesOn) last.text += item.content.str;
    else passages.push({ text: item.content.str, struck: item.deleted, ...origin });
  }
  return passages;
}

/** For a client's clock the time at which the update that brought it was accepted. */
async function acceptances(db: Db, revisionId: string): Promise<(client: number, clock: number) => Date | null> {
  const rows = await db
    .select({ bytes: updates.bytes, personId: updates.personId, at: updates.at })
    .from(updates)
    .where(eq(updates.revisionId, revisionId))
    .orderBy(asc(updates.seq));
  const spans = new Map<number, { end: number; at: Date | null }[]>();
  for (const row of rows) {
    for (const struct of Y.decodeUpdate(row.bytes).structs) {
      const { client, clock } = struct.id;
      const own = spans.get(client) ?? [];
      spans.set(client, own);
      const end = clock + struct.length;
      // An update may repeat what was there: the first that brought it counts.
      if (end > (own.at(-1)?.end ?? 0)) own.push({ end, at: row.personId === null ? null : row.at });
    }
  }
  return (client, clock) => spans.get(client)?.find((span) => clock < span.end)?.at ?? null;
}
