// Who may do what: one pure table. A global role qualifies, membership of the notebook grants; the role of administrator
// alone reads and writes no entry, and nobody decides over themselves.
import { Refused, type RefusedCode } from "./errors.ts";
import type { State } from "./states.ts";

export const ROLES = ["researcher", "witness", "supervisor", "administrator"] as const;
export type Role = (typeof ROLES)[number];

/** The person who asks, as the database knows them at this moment. */
export type Actor = {
  id: string;
  printedName: string;
  email: string;
  roles: Role[];
  /** ids of the notebooks whose member the person is */
  memberOf: string[];
  sessionId: string;
  decimalSign: "." | ",";
  timeZone: string;
  /** a reset that an administrator began waits for a second person */
  signingHeld: boolean;
};

export type NotebookSubject = { notebookId: string };
/** A revision of an entry as the policy needs it: the state is the revision's, the rest is the entry's. */
export type EntrySubject = {
  notebookId: string;
  state: State;
  authorId: string;
  /** everybody whose change was ever accepted on any revision */
  contributorIds: readonly string[];
  /** assigned by a supervisor; null: any witness of the notebook */
  witnessId: string | null;
};
/** The person over whom somebody decides. */
export type PersonSubject = { personId: string };
export type HeldPersonSubject = {
  personId: string /** who began a reset since signing is held */;
  begunBy: readonly string[];
};

type Subjects = {
  "preferences.set": null;
  "sessions.manage": null;
  "compounds.search": null;
  "entries.search": null;
  "block.solve": NotebookSubject;
  "notebook.read": NotebookSubject;
  "entry.begin": NotebookSubject;
  "entry.read": NotebookSubject;
  "entry.write": EntrySubject;
  "entry.sign": EntrySubject;
  "entry.open": EntrySubject;
  "entry.countersign": EntrySubject;
  "entry.return": EntrySubject;
  "witness.assign": EntrySubject;
  "attachment.read": NotebookSubject;
  "attachment.store": EntrySubject;
  "attachment.strike": EntrySubject;
  "oversight.read": null;
  "people.list": null;
  "person.invite": null;
  "person.close": PersonSubject;
  "role.change": PersonSubject;
  "reset.begin": PersonSubject;
  "identity.confirm": HeldPersonSubject;
  "notebook.create": null;
  "notebooks.list": null;
  "membership.change": null;
  "outbox.read": null;
  "audit.read": null;
  "audit.entry": NotebookSubject;
};

export type Action = keyof Subjects;
export type SubjectOf<A extends Action> = Subjects[A];

/** A condition and the code with which it refuses. Conditions are asked in order; the first that does not hold answers. */
type Need<S> = readonly [holds: (actor: Actor, subject: S) => boolean, otherwise: RefusedCode];

const READING_ROLES: readonly Role[] = ["researcher", "witness", "supervisor"];

const reads = (actor: Actor, subject: NotebookSubject) => readableNotebooks(actor).includes(subject.notebookId);
const has = (role: Role) => (actor: Actor) => actor.roles.includes(role);
const isIn = (state: State) => (_: Actor, subject: EntrySubject) => subject.state === state;
const isAuthor = (actor: Actor, subject: EntrySubject) => subject.authorId === actor.id;
const isNotAuthor = (actor: Actor, subject: EntrySubject) => subject.authorId !== actor.id;
const isNoContributor = (actor: Actor, subject: EntrySubject) => !subject.contributorIds.includes(actor.id);
const isWitnessOrOpen = (actor: Actor, subject: EntrySubject) =>
  subject.witnessId === null || subject.witnessId === actor.id;
const isNotHeld = (actor: Actor) => !actor.signingHeld;
const isAnother = (actor: Actor, subject: PersonSubject) => subject.personId !== actor.id;
const isWaiting = (_: Actor, subject: EntrySubject) => subject.state === "draft" || subject.state === "signed";

const readsPage: Need<NotebookSubject> = [reads, "entry.not-found"];
const writes: readonly Need<EntrySubject>[] = [
  readsPage,
  [has("researcher"), "revision.forbidden"],
  [isIn("draft"), "revision.not-draft"],
];
const witnesses: readonly Need<EntrySubject>[] = [
  readsPage,
  [has("witness"), "revision.forbidden"],
  [isNotAuthor, "revision.author"],
  [isNoContributor, "revision.contributor"],
  [isIn("signed"), "revision.not-signed"],
  [isWitnessOrOpen, "revision.assigned-to-another"],
];
const administers: readonly Need<unknown>[] = [[has("administrator"), "administration.forbidden"]];

const TABLE: { readonly [A in Action]: readonly Need<SubjectOf<A>>[] } = {
  "preferences.set": [],
  "sessions.manage": [],
  "compounds.search": [],
  // Whoever reads no notebook finds nothing: what may be read is part of the query.
  "entries.search": [],
  "block.solve": [readsPage],
  "notebook.read": [[reads, "notebook.not-found"]],
  "entry.begin": [
    [reads, "notebook.not-found"],
    [has("researcher"), "notebook.forbidden"],
  ],
  "entry.read": [readsPage],
  "entry.write": writes,
  "entry.sign": [...writes, [isAuthor, "revision.not-author"], [isNotHeld, "signing.held"]],
  "entry.open": [readsPage],
  "entry.countersign": [...witnesses, [isNotHeld, "signing.held"]],
  "entry.return": witnesses,
  "witness.assign": [
    readsPage,
    [has("supervisor"), "entry.forbidden"],
    [isNotAuthor, "entry.author"],
    [isNoContributor, "entry.contributor"],
    [isWaiting, "entry.not-open"],
  ],
  "attachment.read": [[reads, "attachment.not-found"]],
  "attachment.store": writes,
  "attachment.strike": writes,
  "oversight.read": [[has("supervisor"), "oversight.forbidden"]],
  "people.list": administers,
  "person.invite": administers,
  "person.close": [...administers, [isAnother, "person.self"]],
  "role.change": [...administers, [isAnother, "person.self"]],
  "reset.begin": [...administers, [isAnother, "person.self"]],
  "identity.confirm": [
    [
      (actor) => actor.roles.includes("supervisor") || actor.roles.includes("administrator"),
      "administration.forbidden",
    ],
    [isAnother, "person.self"],
    [(actor, subject) => !subject.begunBy.includes(actor.id), "person.began-reset"],
  ],
  "notebook.create": administers,
  "notebooks.list": administers,
  "membership.change": administers,
  "outbox.read": administers,
  "audit.read": administers,
  "audit.entry": [readsPage],
};

/** Every action there is, for tests that walk them all. */
export const ACTIONS: readonly Action[] = Object.keys(TABLE).filter((name): name is Action => name in TABLE);

/** The code with which the policy refuses, or null when the actor may. */
export function refusal<A extends Action>(actor: Actor, action: A, subject: SubjectOf<A>): RefusedCode | null {
  const needs: readonly Need<SubjectOf<A>>[] = TABLE[action];
  for (const [holds, otherwise] of needs) if (!holds(actor, subject)) return otherwise;
  return null;
}

export function may<A extends Action>(actor: Actor, action: A, subject: SubjectOf<A>): boolean {
  return refusal(actor, action, subject) === null;
}

/** Throws `Refused` unless the actor may: not-found for what they may not read, forbidden or the reason for the rest. */
export function demand<A extends Action>(actor: Actor, action: A, subject: SubjectOf<A>): void {
  const code = refusal(actor, action, subject);
  if (code !== null) throw new Refused(code);
}

/** The notebooks whose entries the actor may read: for the `where` of every read. */
export function readableNotebooks(actor: Pick<Actor, "roles" | "memberOf">): string[] {
  return actor.roles.some((role) => READING_ROLES.includes(role)) ? actor.memberOf : [];
}

/** Whether a person may be assigned as witness, and if not, why. */
export function witnessRefusal(
  candidate: Pick<Actor, "id" | "roles" | "memberOf">,
  entry: EntrySubject,
): RefusedCode | null {
  if (!candidate.roles.includes("witness") || !candidate.memberOf.includes(entry.notebookId))
    return "witness.not-eligible";
  if (entry.authorId === candidate.id) return "witness.author";
  if (entry.contributorIds.includes(candidate.id)) return "witness.contributor";
  return null;
}

export function isRole(text: string): text is Role {
  return ROLES.some((role) => role === text);
}
