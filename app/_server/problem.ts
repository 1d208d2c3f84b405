// Every refusal in words, in one table: code → RFC 9457 problem. A code without a row does not compile.
import "server-only";
import type { Detail, RefusedCode } from "../../db/errors.ts";

/** What went wrong as the reader gets it, over HTTP (application/problem+json) and from an action. */
export type ShownProblem = {
  type: string;
  title: string;
  status: number;
  code: string;
  /** what to do, in a sentence */
  detail?: string;
  /** the values that the words are about */
  values?: Detail;
  /** one sentence for each field that is wrong */
  fields?: Record<string, string>;
  requestId: string;
};

type Problem = { status: number; title: string; detail?: string };

const problems = {
  "request.invalid": {
    status: 400,
    title: "Something in what was sent is not as it should be",
    detail: "Look at the fields that are marked.",
  },
  "request.not-found": { status: 404, title: "There is nothing here" },
  "request.too-large": { status: 413, title: "What was sent is too long" },
  "request.too-many": { status: 429, title: "Too many at once", detail: "Wait a little, then try again." },
  "request.cross-site": {
    status: 403,
    title: "The request came from another site",
    detail: "Open Counterleaf at its own address and do it there.",
  },
  "request.unsupported": { status: 415, title: "What was sent is not of the expected type" },

  "session.ended": {
    status: 401,
    title: "You are signed out",
    detail: "Sign in again. What you typed is kept on this device.",
  },
  "session.not-found": { status: 404, title: "This session is not there any more" },
  "account.wrong-password": {
    status: 401,
    title: "E-mail or password is not right",
    detail: "Check both. After several failures the account closes for a while.",
  },
  "account.locked": {
    status: 429,
    title: "Closed for a while after several failures",
    detail:
      "Signing in and signing open again when the time is over. If it was not you who tried, tell your administrator.",
  },
  "signing.wrong-password": {
    status: 403,
    title: "The password is not right",
    detail: "Nothing was signed. After several failures signing and sign-in close for a while.",
  },
  "signing.locked": {
    status: 429,
    title: "Signing is closed for a while after several failures",
    detail: "Nothing was signed. Sign-in and signing open again when the time is over.",
  },
  "signing.held": {
    status: 403,
    title: "Signing is held",
    detail: "Your password was reset by an administrator. A second authorised person has to confirm who you are first.",
  },

  "entry.not-found": { status: 404, title: "There is no such entry, or it is not open to you" },
  "entry.forbidden": { status: 403, title: "This is not open to you in this entry" },
  "entry.author": { status: 403, title: "The author of an entry does not witness it" },
  "entry.contributor": { status: 403, title: "Whoever wrote in an entry does not witness it" },
  "entry.not-open": { status: 409, title: "This entry is closed" },

  "revision.not-found": { status: 404, title: "There is no such revision, or it is not open to you" },
  "revision.forbidden": { status: 403, title: "This is not open to you in this revision" },
  "revision.changed": {
    status: 409,
    title: "The page changed while you were reading it",
    detail: "Nothing was signed. Read what changed, then sign anew.",
  },
  "revision.not-draft": {
    status: 409,
    title: "This revision is no longer a draft",
    detail: "What you typed was not added. It is kept for you.",
  },
  "revision.not-signed": { status: 409, title: "This revision does not wait for a witness" },
  "revision.not-author": { status: 403, title: "Only the author signs an entry" },
  "revision.author": { status: 403, title: "The author of an entry does not witness it" },
  "revision.contributor": {
    status: 403,
    title: "You wrote in this entry, so you cannot witness it",
    detail: "Another witness has to.",
  },
  "revision.assigned-to-another": { status: 403, title: "Another witness is assigned to this entry" },
  "revision.not-whole": {
    status: 409,
    title: "The whole revision has not been opened yet",
    detail: "Go through the page to its end in this session, then sign.",
  },
  "revision.not-complete": {
    status: 409,
    title: "The page is not complete yet",
    detail: "Fill in what is listed, then sign.",
  },
  "revision.finding-missing": {
    status: 409,
    title: "The calculations and files have not been checked for you yet",
    detail: "Run the check, then countersign.",
  },
  "revision.finding-stale": {
    status: 409,
    title: "The check is of an earlier state",
    detail: "Run it again, then countersign.",
  },
  "revision.files-differ": {
    status: 409,
    title: "A file's bytes do not fit its fingerprint",
    detail: "Nothing was signed. Tell your administrator: the store has to be looked at.",
  },
  "revision.acknowledgement-missing": {
    status: 422,
    title: "A difference needs words",
    detail: "Write what you make of each difference that the check found.",
  },
  "revision.reason-missing": { status: 422, title: "A reason is needed" },
  "revision.not-derived": { status: 503, title: "The page is still being read", detail: "Try again in a moment." },

  "witness.not-eligible": {
    status: 409,
    title: "This person cannot witness the entry",
    detail: "A witness holds the role and is a member of the notebook.",
  },
  "witness.author": { status: 409, title: "The author of an entry does not witness it" },
  "witness.contributor": { status: 409, title: "This person wrote in the entry, so another has to witness it" },

  "notebook.not-found": { status: 404, title: "There is no such notebook, or it is not open to you" },
  "notebook.forbidden": { status: 403, title: "This is not open to you in this notebook" },
  "notebook.invalid": { status: 422, title: "The notebook's code or title is not as it should be" },
  "notebook.code-taken": { status: 409, title: "Another notebook has this code" },
  "notebook.already-member": { status: 409, title: "This person is a member already" },
  "notebook.not-member": { status: 409, title: "This person is not a member" },

  "person.not-found": { status: 404, title: "There is no such person" },
  "person.self": { status: 403, title: "Nobody changes their own rights", detail: "Another administrator has to." },
  "person.last-administrator": {
    status: 409,
    title: "This is the last administrator",
    detail: "Make another one first.",
  },
  "person.closed": { status: 409, title: "This account is closed" },
  "person.email-taken": {
    status: 409,
    title: "An account with this e-mail exists or existed",
    detail: "Accounts are never reused.",
  },
  "person.role-held": { status: 409, title: "The person holds this role already" },
  "person.role-not-held": { status: 409, title: "The person does not hold this role" },
  "person.invalid": { status: 422, title: "Name, e-mail or password is not as it should be" },
  "person.reason-missing": { status: 422, title: "A reason is needed" },
  "person.not-held": { status: 409, title: "Signing is not held for this person" },
  "person.began-reset": {
    status: 403,
    title: "Whoever began the reset does not confirm it",
    detail: "A second authorised person has to.",
  },

  "administration.forbidden": { status: 403, title: "Only an administrator does this" },
  "administration.not-first": { status: 409, title: "There is an administrator already" },
  "oversight.forbidden": { status: 403, title: "Only a supervisor does this" },
  "invitation.invalid": { status: 404, title: "This link is not valid", detail: "Ask for a new one." },
  "invitation.expired": { status: 410, title: "This link has run out", detail: "Ask for a new one." },
  "invitation.used": { status: 410, title: "This link was used already", detail: "Sign in, or ask for a new one." },
  "preferences.invalid": { status: 422, title: "This preference is not one of those offered" },

  "page.invalid": {
    status: 422,
    title: "The page would not be readable any more",
    detail: "The change was not taken. Copy your words, reload the page, and put them in again.",
  },
  "page.too-large": {
    status: 413,
    title: "The page would become too long",
    detail: "Begin another entry for the rest.",
  },
  "update.invalid": { status: 422, title: "The change cannot be read" },
  "update.too-large": { status: 413, title: "The change is too long to be taken at once" },
  "update.too-many": {
    status: 429,
    title: "Too many changes at once",
    detail: "They are kept on this device and sent again.",
  },
  "update.forged": {
    status: 422,
    title: "The change is written in another person's name",
    detail: "It was not taken. Reload the page.",
  },
  "block.not-found": { status: 404, title: "There is no such block on the page" },
  "block.invalid": { status: 422, title: "The block cannot be read" },
  "block.too-many-rows": { status: 422, title: "A composition has at most 40 rows" },
  "compound.not-found": { status: 404, title: "There is no such compound" },
  "compound.invalid": { status: 422, title: "This does not name a compound" },

  "attachment.not-found": { status: 404, title: "There is no such file, or it is not open to you" },
  "attachment.forbidden": {
    status: 403,
    title: "Files are attached by those who write in the entry, while it is a draft",
  },
  "attachment.empty": { status: 422, title: "The file is empty" },
  "attachment.too-large": {
    status: 413,
    title: "The file is longer than 32 MiB",
    detail: "Attach a part of it, or a compressed copy.",
  },
  "attachment.too-many": { status: 409, title: "The entry has as many files as it can hold" },
  "attachment.invalid": { status: 422, title: "The file's name or type is not usable" },
  "attachment.length-differs": {
    status: 422,
    title: "Fewer or more bytes came than were announced",
    detail: "Nothing was kept. Send the file again.",
  },
  "attachment.type-refused": {
    status: 422,
    title: "The content is not what the name says, or is a program",
    detail: "Nothing was kept.",
  },
  "attachment.struck": { status: 409, title: "The file is struck already" },
  "attachment.reason-missing": { status: 422, title: "A reason is needed" },
  "search.invalid": { status: 422, title: "The search cannot be read" },
} as const satisfies Record<RefusedCode, Problem>;

/** The problem that a code stands for. */
export function problemOf(
  code: RefusedCode,
  requestId: string,
  values: Detail = {},
  fields: Record<string, string> = {},
): ShownProblem {
  const { status, title, detail }: Problem = problems[code];
  return {
    type: `/problems/${code}`,
    title,
    status,
    code,
    ...(detail === undefined ? {} : { detail }),
    ...(Object.keys(values).length === 0 ? {} : { values }),
    ...(Object.keys(fields).length === 0 ? {} : { fields }),
    requestId,
  };
}

/** A fault of the program: its number, and nothing that tells how the program is made. */
export function faultOf(requestId: string): ShownProblem {
  return {
    type: "/problems/fault",
    title: "Something went wrong here, not with you",
    status: 500,
    code: "fault",
    detail: `Nothing was changed by this. Tell your administrator the number ${requestId}.`,
    requestId,
  };
}

/** Asked while the process is on its way out. */
export function closingOf(requestId: string): ShownProblem {
  return {
    type: "/problems/closing",
    title: "The server is being restarted",
    status: 503,
    code: "closing",
    detail: "It is tried again by itself.",
    requestId,
  };
}

export function statusOf(code: RefusedCode): number {
  return problems[code].status;
}
