// The demo laboratory, set up once by the same verbs as everything else, so that its entries carry real updates, signatures and
// events. All its times are the server's: nothing is dated back, so no entry is overdue on the first day.
import { eq } from "drizzle-orm";
import * as Y from "yjs";
import { z } from "zod";
import { openState, stateOfPage } from "../../editor/schema/index.ts";
import type { Db } from "../client.ts";
import { compoundItems } from "../compounds.ts";
import { deriveRevision } from "../derive.ts";
import { beginEntry } from "../entries.ts";
import { newId } from "../ids.ts";
import { enrolPerson } from "../invitations.ts";
import { MEANINGS, type Seal } from "../manifest.ts";
import { addMember, createNotebook } from "../notebooks.ts";
import { actorOfPerson } from "../people.ts";
import { type Actor, ROLES } from "../policy.ts";
import { settings } from "../schema/people.ts";
import { contentToSign, signAsAuthor } from "../signatures.ts";
import { appendUpdate, pageState } from "../updates.ts";
import { checkRevision, countersign, markWhole, openRevision, returnToAuthor } from "../witnessing.ts";
import { compoundsOfPage, DEMO_PAGES, type DemoPage, demoPageJson } from "./demo-pages.ts";
import peopleFile from "./demo-people.json" with { type: "json" };
import { importLibrary } from "./library.ts";

export type DemoTools = {
  /** how the sign-in library keeps a password */
  hashPassword: (password: string) => Promise<string>;
  /** seals manifests; it is called inside a transaction, so it must not ask the database */
  seal: Seal;
};

const KEY = "demo";
const DAY_MS = 86_400_000;
const NOTEBOOKS = [
  {
    code: "DSB",
    title: "Descaling baths",
    about: "Acid baths that take milk stone off heat exchangers. A made-up laboratory.",
  },
  { code: "RNB", title: "Rinse baths", about: "Rinses before and after the acid bath. A made-up laboratory." },
  { code: "PLT", title: "Pilot line", about: "Another group's notebook. A made-up laboratory." },
] as const;

const peopleShape = z.array(
  z.object({
    printedName: z.string(),
    email: z.string(),
    password: z.string(),
    roles: z.array(z.enum(ROLES)),
    notebooks: z.array(z.enum(["DSB", "RNB", "PLT"])),
  }),
);

/** Sets the demo laboratory up, whole or not at all. A second start finds it there and changes nothing. */
export async function seedDemo(db: Db, tools: DemoTools): Promise<"seeded" | "same"> {
  await importLibrary(db);
  const people = await Promise.all(
    peopleShape
      .parse(peopleFile)
      .map(async (person) => ({ ...person, passwordHash: await tools.hashPassword(person.password) })),
  );
  return db.transaction(async (tx) => {
    const taken = await tx
      .insert(settings)
      .values({ key: KEY, value: "set up" })
      .onConflictDoNothing()
      .returning({ key: settings.key });
    if (taken.length === 0) return "same";
    const actors = await settle(tx, people);
    await writePages(tx, actors, tools.seal);
    return "seeded";
  });
}

/** Whether this store holds the demo laboratory. */
export async function isDemo(db: Db): Promise<boolean> {
  const rows = await db.select({ key: settings.key }).from(settings).where(eq(settings.key, KEY));
  return rows.length > 0;
}

type Laboratory = { actor: (printedName: string) => Actor; notebook: (code: string) => string };
type Enrolled = z.infer<typeof peopleShape>[number] & { passwordHash: string };

async function settle(tx: Db, people: readonly Enrolled[]): Promise<Laboratory> {
  const ids = new Map<string, string>();
  for (const { printedName, email, roles, passwordHash } of people) {
    const { personId } = await enrolPerson(tx, null, { printedName, email, roles, passwordHash });
    ids.set(printedName, personId);
  }
  const actorOf = async (name: string): Promise<Actor> => {
    // A session of the set-up's own: what is opened and signed here counts for no session of the browser.
    const actor = await actorOfPerson(tx, ids.get(name) ?? "", `demo-${newId()}`);
    if (actor === null) throw new Error(`The demo has no ${name}.`);
    return actor;
  };
  const administrator = await actorOf(
    people.find((person) => person.roles.includes("administrator"))?.printedName ?? "",
  );
  const notebooks = new Map<string, string>();
  for (const notebook of NOTEBOOKS)
    notebooks.set(notebook.code, (await createNotebook(tx, administrator, notebook)).id);
  for (const person of people) {
    for (const code of person.notebooks) {
      const membership = { notebookId: notebooks.get(code) ?? "", personId: ids.get(person.printedName) ?? "" };
      await addMember(tx, administrator, { ...membership, reason: "Works in this notebook (demo)." });
    }
  }
  const actors = new Map<string, Actor>();
  for (const { printedName } of people) actors.set(printedName, await actorOf(printedName));
  return {
    actor: (name) => found(actors.get(name), name),
    notebook: (code) => found(notebooks.get(code), code),
  };
}

function found<T>(value: T | undefined, name: string): T {
  if (value === undefined) throw new Error(`The demo has no ${name}.`);
  return value;
}

async function writePages(tx: Db, { actor, notebook }: Laboratory, seal: Seal): Promise<void> {
  const [okafor, brandt, ferrante, sato] = [
    actor("R. Okafor"),
    actor("L. Brandt"),
    actor("M. Ferrante"),
    actor("H. Sato"),
  ];
  const [baths, rinses] = [notebook("DSB"), notebook("RNB")];

  const first = await write(tx, okafor, baths, DEMO_PAGES.firstTrial);
  await sign(tx, okafor, first, seal);
  await witness(tx, ferrante, first, seal);

  const second = await write(tx, brandt, baths, DEMO_PAGES.secondBatch);
  await sign(tx, brandt, second, seal);

  const half = await write(tx, okafor, baths, DEMO_PAGES.halfPhosphoric);
  await sign(tx, okafor, half, seal);
  await openRevision(tx, sato, { revisionId: half });
  const next = await returnToAuthor(tx, sato, { revisionId: half, reason: "Which lot of phosphoric acid was this?" });
  await deriveRevision(tx, next.revisionId);

  const shared = await write(tx, okafor, baths, DEMO_PAGES.sharedDraft);
  await addParagraph(tx, brandt, shared, "Lot CA-0340 is still sealed; I will weigh it tomorrow. L. B.");

  await write(tx, okafor, baths, DEMO_PAGES.sulfamic);

  const buffered = await write(tx, brandt, baths, DEMO_PAGES.buffered);
  await sign(tx, brandt, buffered, seal);
  await witness(tx, sato, buffered, seal);

  await write(tx, brandt, baths, DEMO_PAGES.drain);

  const check = await write(tx, okafor, rinses, DEMO_PAGES.phosphateRinse);
  await sign(tx, okafor, check, seal);
  await witness(tx, ferrante, check, seal);

  const alkaline = await write(tx, okafor, rinses, DEMO_PAGES.alkalineRinse);
  await sign(tx, okafor, alkaline, seal);

  await write(tx, brandt, rinses, DEMO_PAGES.hypochloriteTrap);
  await write(tx, brandt, rinses, DEMO_PAGES.acetateRinse);

  await write(tx, actor("K. Amsel"), notebook("PLT"), DEMO_PAGES.pilot);
}

/** Begins an entry and types the page into it, as one update of its author; returns the revision's id. */
async function write(tx: Db, author: Actor, notebookId: string, page: DemoPage): Promise<string> {
  const { revisionId } = await beginEntry(tx, author, { notebookId });
  const items = await compoundItems(tx, compoundsOfPage(page));
  const constants = new Map(items.map((item) => [item.id, item.constants.join(" ")]));
  const doneOn = new Date(Date.now() - page.doneDaysAgo * DAY_MS).toISOString().slice(0, 10);
  const head = { title: page.title, doneOn, lateReason: page.lateReason ?? "" };
  const typed = stateOfPage(
    demoPageJson(page, (compound) => constants.get(compound) ?? ""),
    head,
  );
  await change(tx, author, revisionId, (doc) => {
    Y.applyUpdate(doc, typed);
    const fragment = doc.getXmlFragment("page");
    // The empty paragraph that every page begins with.
    const blank = fragment
      .toArray()
      .findIndex((node) => node instanceof Y.XmlElement && node.nodeName === "paragraph" && node.length === 0);
    if (blank >= 0) fragment.delete(blank, 1);
    for (const [name, value] of Object.entries(head)) doc.getMap<string>("head").set(name, value);
  });
  return revisionId;
}

function addParagraph(tx: Db, writer: Actor, revisionId: string, words: string): Promise<void> {
  return change(tx, writer, revisionId, (doc) => {
    const element = new Y.XmlElement("paragraph");
    element.insert(0, [new Y.XmlText(words)]);
    const fragment = doc.getXmlFragment("page");
    fragment.insert(fragment.length, [element]);
  });
}

async function change(tx: Db, writer: Actor, revisionId: string, edit: (doc: Y.Doc) => void): Promise<void> {
  const { state, vector } = await pageState(tx, writer, revisionId);
  const doc = openState(state);
  edit(doc);
  const bytes = Y.encodeStateAsUpdate(doc, vector);
  doc.destroy();
  await appendUpdate(tx, writer, { revisionId, updateId: newId(), bytes });
  await deriveRevision(tx, revisionId);
}

async function sign(tx: Db, author: Actor, revisionId: string, seal: Seal): Promise<void> {
  const { sha256, view } = await contentToSign(tx, author, revisionId);
  if (view.hindrances.length > 0)
    throw new Error(`The demo's "${view.content.head.title}": ${view.hindrances[0]?.text}`);
  await openRevision(tx, author, { revisionId });
  await markWhole(tx, author, { revisionId, contentSha256: sha256 });
  await signAsAuthor(tx, author, { revisionId, shownHash: sha256, meaning: MEANINGS.author, seal });
}

async function witness(tx: Db, reader: Actor, revisionId: string, seal: Seal): Promise<void> {
  const { contentSha256 } = await openRevision(tx, reader, { revisionId });
  await markWhole(tx, reader, { revisionId, contentSha256 });
  const finding = await checkRevision(tx, reader, { revisionId });
  const words = { findingId: finding.id, acknowledgement: "" };
  await countersign(tx, reader, { revisionId, shownHash: contentSha256, ...words, seal });
}
