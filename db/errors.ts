// Why a verb refuses. The code is all that leaves the database; app/_server/problem.ts gives it words and a status.

/** Every code with which a verb may refuse. A new one does not compile until problem.ts has its words. */
export type RefusedCode =
  | `entry.${"not-found" | "forbidden" | "author" | "contributor" | "not-open"}`
  | `revision.${
      | "not-found"
      | "forbidden"
      | "changed"
      | "not-draft"
      | "not-signed"
      | "not-author"
      | "author"
      | "contributor"
      | "assigned-to-another"
      | "not-whole"
      | "not-complete"
      | "finding-missing"
      | "finding-stale"
      | "files-differ"
      | "acknowledgement-missing"
      | "reason-missing"
      | "not-derived"}`
  | `witness.${"not-eligible" | "author" | "contributor"}`
  | `notebook.${"not-found" | "forbidden" | "invalid" | "code-taken" | "already-member" | "not-member"}`
  | `person.${
      | "not-found"
      | "self"
      | "last-administrator"
      | "closed"
      | "email-taken"
      | "role-held"
      | "role-not-held"
      | "invalid"
      | "reason-missing"
      | "not-held"
      | "began-reset"}`
  | `administration.${"forbidden" | "not-first"}`
  | `oversight.${"forbidden"}`
  | `invitation.${"invalid" | "expired" | "used"}`
  | `account.${"locked" | "wrong-password"}`
  | `signing.${"held" | "locked" | "wrong-password"}`
  | `session.${"ended" | "not-found"}`
  | `preferences.${"invalid"}`
  | `page.${"invalid" | "too-large"}`
  | `update.${"invalid" | "too-large" | "too-many" | "forged"}`
  | `block.${"not-found" | "invalid" | "too-many-rows"}`
  | `compound.${"not-found" | "invalid"}`
  | `attachment.${
      | "not-found"
      | "forbidden"
      | "empty"
      | "too-large"
      | "too-many"
      | "invalid"
      | "length-differs"
      | "type-refused"
      | "struck"
      | "reason-missing"}`
  | `search.${"invalid"}`
  | `request.${"invalid" | "not-found" | "too-large" | "too-many" | "cross-site" | "unsupported"}`;

/** What the reader needs to understand the refusal, in plain values. Never a secret, never what may not be read. */
export type Detail = {
  [name: string]: string | number | boolean | null | Detail | (string | number | boolean | null | Detail)[] | undefined;
};

/** Thrown by a verb that does not do what was asked; its transaction rolls back with it. */
export class Refused extends Error {
  readonly code: RefusedCode;
  readonly detail: Detail;
  constructor(code: RefusedCode, detail: Detail = {}) {
    super(code);
    this.name = "Refused";
    this.code = code;
    this.detail = detail;
  }
}
