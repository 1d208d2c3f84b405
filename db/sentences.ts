// The actions of the audit trail and how each reads: one plain English sentence for a reviewer.
import type { Detail } from "./errors.ts";

export type EventToRead = {
  action: string;
  printedName: string | null;
  objectKind: string;
  objectId: string;
  detail: Detail;
};

/** What follows the name; `undefined` parts of the detail are left out of the sentence. */
type Words = (detail: Reader) => string;

const WORDS = {
  // notebooks and rights
  "notebook.created": (d) => `made the notebook ${d.text("code")}${d.dash("title")}`,
  "member.added": (d) => `made ${d.text("person")} a member of the notebook ${d.text("notebook")}${d.because()}`,
  "member.removed": (d) =>
    `ended the membership of ${d.text("person")} in the notebook ${d.text("notebook")}${d.because()}`,
  "person.invited": (d) => `invited ${d.text("person")} (${d.list("roles")})`,
  "person.joined": (d) => `joined as ${d.text("printedName")} (${d.list("roles")})`,
  "person.closed": (d) => `closed the account of ${d.text("person")}${d.because()}`,
  "role.granted": (d) =>
    `gave ${d.text("person")} the role ${d.text("role")}; before: ${d.list("old")}, now: ${d.list("new")}${d.because()}`,
  "role.revoked": (d) =>
    `took the role ${d.text("role")} from ${d.text("person")}; before: ${d.list("old")}, now: ${d.list("new")}${d.because()}`,
  "administrator.link-made": () => "made the one-time link for the first administrator",
  "preferences.changed": (d) => `changed the preference ${d.text("name")} ${d.change()}`,
  // sign-in
  "sign-in.succeeded": () => "signed in",
  "sign-in.failed": (d) => `had a failed sign-in${d.of("account", " for ")}`,
  "signing.failed": () => "gave a wrong password when signing",
  "account.locked": (d) =>
    `was locked out until ${d.text("until")} after ${d.text("failures")} failures${d.of("account", ": ")}`,
  "session.ended": (d) => (d.text("count") === "1" ? "ended a session" : `ended ${d.text("count")} sessions`),
  "session.closed": () => "signed out",
  "password.changed": () => "changed the password",
  "password.reset": () => "set a new password with a link sent by mail",
  "reset.requested": () => "asked for a link to set a new password",
  "reset.begun": (d) => `began a password reset for ${d.text("person")}; signing is held${d.because()}`,
  "identity.confirmed": (d) => `confirmed who ${d.text("person")} is (${d.text("how")}); signing is free again`,
  // entries
  "entry.begun": (d) => `began the entry ${d.text("label")}`,
  "contributor.added": (d) => `became a contributor${d.of("revision", " with revision ")}`,
  "value.set": (d) => `set ${d.text("label")} to “${d.text("new")}”`,
  "value.changed": (d) => `changed ${d.text("label")} ${d.change()}${d.because()}`,
  "value.cleared": (d) => `cleared ${d.text("label")}, which was “${d.text("old")}”${d.because()}`,
  "block.added": (d) => `put in the equilibrium block “${d.text("title")}”`,
  "block.removed": (d) => `took out the equilibrium block “${d.text("title")}”`,
  "block.solved": (d) => `solved ${d.text("title")}${d.of("pH", ": pH ")}`,
  "attachment.stored": (d) =>
    `attached the file ${d.text("name")} (${d.text("size")} bytes, SHA-256 ${d.text("sha256")})`,
  "attachment.struck": (d) => `struck the file ${d.text("name")}${d.because()}`,
  "update.kept-apart": (d) =>
    `sent text for revision ${d.text("revision")}, which is no longer a draft; it was kept apart`,
  "update.refused": (d) => `sent a change that was refused${d.of("why", ": ")}`,
  "revision.opened": (d) => `opened revision ${d.text("revision")}`,
  "revision.read-whole": (d) => `passed through the whole of revision ${d.text("revision")}`,
  "revision.signed": (d) => `signed revision ${d.text("revision")} as author: “${d.text("meaning")}”`,
  "revision.checked": (d) =>
    `had revision ${d.text("revision")} checked: ${d.text("reproduced")} of ${d.text("blocks")} blocks reproduce, ${d.text("fitting")} of ${d.text("files")} files fit`,
  "revision.countersigned": (d) => `countersigned revision ${d.text("revision")}: “${d.text("meaning")}”`,
  "revision.returned": (d) => `returned revision ${d.text("revision")} to its author${d.because()}`,
  "revision.begun": (d) => `began revision ${d.text("revision")}${d.because()}`,
  "revision.superseded": (d) => `made revision ${d.text("revision")} superseded`,
  "revision.voided": (d) => `voided revision ${d.text("revision")}${d.because()}`,
  "witness.assigned": (d) => `assigned ${d.text("person")} as witness${d.of("before", " in place of ")}`,
  "witness.unassigned": (d) => `left the witness open, which was ${d.text("before")}`,
  // the store
  "request.refused": (d) => `was refused: ${d.text("code")}${d.of("request", " at ")}`,
  "search.downloaded": (d) => `downloaded ${d.text("count")} search hits${d.of("query", " for ")}`,
  "entry.exported": (d) => `exported ${d.text("label")}`,
  "key.made": (d) => `made the signing key ${d.text("kid")}`,
  "key.retired": (d) => `retired the signing key ${d.text("kid")}`,
  "library.imported": (d) => `imported the library (${d.text("constants")} constants, ${d.text("reagents")} reagents)`,
  "demo.seeded": () => "set up the invented demo laboratory",
} as const satisfies Record<string, Words>;

export type EventAction = keyof typeof WORDS;
export const EVENT_ACTIONS: readonly EventAction[] = Object.keys(WORDS).filter(
  (name): name is EventAction => name in WORDS,
);

/** How the event reads: "R. Okafor changed mass of row 2 from “20.0” to “20.00” because: misread." */
export function sentence(event: EventToRead): string {
  const who = event.printedName ?? (event.objectKind === "account" ? "Somebody" : "The program");
  const words: Words | undefined = isEventAction(event.action) ? WORDS[event.action] : undefined;
  return `${who} ${words === undefined ? `did “${event.action}”` : words(reader(event.detail))}.`;
}

/** The same without anything that the page says, for a reader who may not read the entry. */
export function withheldSentence(event: Pick<EventToRead, "action" | "printedName">): string {
  return `${event.printedName ?? "The program"}: ${event.action.replace(/[.-]/g, " ")} (what it says is for members of the notebook).`;
}

export function isEventAction(text: string): text is EventAction {
  return text in WORDS;
}

type Reader = {
  text(name: string): string;
  list(name: string): string;
  /** `before` and the value; nothing when there is none */
  of(name: string, before: string): string;
  dash(name: string): string;
  change(): string;
  because(): string;
};

function reader(detail: Detail): Reader {
  const text = (name: string) => shown(detail[name]);
  const of = (name: string, before: string) => (isThere(detail[name]) ? `${before}${text(name)}` : "");
  return {
    text,
    of,
    list: text,
    dash: (name) => of(name, ", "),
    change: () => `from “${text("old")}” to “${text("new")}”`,
    because: () => of("reason", " because: "),
  };
}

function isThere(value: Detail[string]): boolean {
  return value !== undefined && value !== null && value !== "";
}

function shown(value: Detail[string]): string {
  if (value === undefined || value === null) return "nothing";
  if (Array.isArray(value)) return value.length === 0 ? "none" : value.map((each) => shown(each)).join(", ");
  return typeof value === "object" ? JSON.stringify(value) : String(value);
}
