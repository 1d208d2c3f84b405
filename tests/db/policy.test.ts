// Who may what, written a second time as plain facts and compared with the policy over every combination.
import { describe, expect, it } from "vitest";
import { Refused } from "../../db/errors.ts";
import {
  ACTIONS,
  type Action,
  type Actor,
  demand,
  type EntrySubject,
  may,
  ROLES,
  type Role,
  readableNotebooks,
  refusal,
  witnessRefusal,
} from "../../db/policy.ts";
import { STATES, type State } from "../../db/states.ts";

/** What must hold besides; a name that is missing asks nothing. */
type Facts = {
  /** one of them */
  roles?: Role[];
  member?: true;
  states?: State[];
  author?: boolean;
  contributor?: false;
  openToMe?: true;
  notHeld?: true;
  another?: true;
  notBegun?: true;
  /** the code for whoever may not read */
  hidden?: string;
};

const readers: Role[] = ["researcher", "witness", "supervisor"];
const write: Facts = { roles: ["researcher"], member: true, states: ["draft"], hidden: "entry.not-found" };
const witness: Facts = {
  roles: ["witness"],
  member: true,
  states: ["signed"],
  author: false,
  contributor: false,
  openToMe: true,
  hidden: "entry.not-found",
};
const read: Facts = { roles: readers, member: true, hidden: "entry.not-found" };
const administer: Facts = { roles: ["administrator"] };

const EXPECTED = {
  "preferences.set": {},
  "sessions.manage": {},
  "compounds.search": {},
  "entries.search": {},
  "block.solve": read,
  "notebook.read": { ...read, hidden: "notebook.not-found" },
  "entry.begin": { roles: ["researcher"], member: true, hidden: "notebook.not-found" },
  "entry.read": read,
  "entry.write": write,
  "entry.sign": { ...write, author: true, notHeld: true },
  "entry.open": read,
  "entry.countersign": { ...witness, notHeld: true },
  "entry.return": witness,
  "witness.assign": {
    roles: ["supervisor"],
    member: true,
    states: ["draft", "signed"],
    author: false,
    contributor: false,
    hidden: "entry.not-found",
  },
  "attachment.read": { ...read, hidden: "attachment.not-found" },
  "attachment.store": write,
  "attachment.strike": write,
  "oversight.read": { roles: ["supervisor"] },
  "people.list": administer,
  "person.invite": administer,
  "person.close": { ...administer, another: true },
  "role.change": { ...administer, another: true },
  "reset.begin": { ...administer, another: true },
  "identity.confirm": { roles: ["supervisor", "administrator"], another: true, notBegun: true },
  "notebook.create": administer,
  "notebooks.list": administer,
  "membership.change": administer,
  "outbox.read": administer,
  "audit.read": administer,
  "audit.entry": read,
} as const satisfies Record<Action, Facts>;

type Case = {
  roles: Role[];
  isMember: boolean;
  state: State;
  isAuthor: boolean;
  isContributor: boolean;
  assigned: "nobody" | "me" | "another";
  isHeld: boolean;
  overMyself: boolean;
  iBegan: boolean;
};

const ME = "person-me";
const OTHER = "person-other";
const NOTEBOOK = "notebook-1";

describe("the policy", () => {
  it("knows every action, and no other", () => {
    expect([...ACTIONS].sort()).toEqual(Object.keys(EXPECTED).sort());
  });

  describe.each(ACTIONS.map((action) => [action] as const))("%s", (action) => {
    it("is decided alike for every set of roles, member or not, state, author, contributor, assigned witness, hold (ADM-03, SGN-09, SGN-10)", () => {
      const facts: Facts = EXPECTED[action];
      const wrong: unknown[] = [];
      let allowed = 0;
      for (const each of cases()) {
        const expected = isExpected(facts, each);
        if (expected) allowed++;
        if (decide(action, each) !== expected) wrong.push(each);
      }
      expect(wrong).toEqual([]);
      expect(allowed).toBeGreaterThan(0);
    });

    it("hides what may not be read, and forbids what may be read but not done (ADM-04)", () => {
      const facts: Facts = EXPECTED[action];
      const wrong: unknown[] = [];
      for (const each of cases()) {
        const code = refusalOf(action, each);
        const isReader = each.isMember && each.roles.some((role) => readers.includes(role));
        const isHidden = code?.endsWith(".not-found") ?? false;
        if (facts.hidden !== undefined && !isReader ? code !== facts.hidden : isHidden) wrong.push({ ...each, code });
      }
      expect(wrong).toEqual([]);
    });
  });

  it("says why a witness may not countersign", () => {
    const countersign = (change: Partial<Case>) =>
      refusalOf("entry.countersign", { ...plain, roles: ["witness"], state: "signed", ...change });
    expect(countersign({})).toBeNull();
    expect(countersign({ isAuthor: true })).toBe("revision.author");
    expect(countersign({ isContributor: true })).toBe("revision.contributor");
    expect(countersign({ assigned: "another" })).toBe("revision.assigned-to-another");
    expect(countersign({ state: "witnessed" })).toBe("revision.not-signed");
    expect(countersign({ isHeld: true })).toBe("signing.held");
    expect(countersign({ roles: ["researcher"] })).toBe("revision.forbidden");
    expect(countersign({ roles: ["administrator"] })).toBe("entry.not-found");
  });

  it("throws its reason as a refusal", () => {
    const me = actor({ ...plain, roles: ["researcher"] });
    expect(() => demand(me, "notebook.create", null)).toThrow(Refused);
    expect(() => demand(me, "notebook.create", null)).toThrow("administration.forbidden");
    expect(() => demand(me, "notebook.read", { notebookId: "another" })).toThrow("notebook.not-found");
    expect(demand(me, "notebook.read", { notebookId: NOTEBOOK })).toBeUndefined();
  });

  it("lets an administrator without another role read no notebook, even as a member (ADM-03)", () => {
    expect(readableNotebooks({ roles: ["administrator"], memberOf: [NOTEBOOK] })).toEqual([]);
    expect(readableNotebooks({ roles: [], memberOf: [NOTEBOOK] })).toEqual([]);
    for (const role of readers) expect(readableNotebooks({ roles: [role], memberOf: [NOTEBOOK] })).toEqual([NOTEBOOK]);
  });

  it("takes as witness only a member with the role who is neither author nor contributor (SGN-10)", () => {
    const candidate = { id: ME, roles: ["witness"] satisfies Role[], memberOf: [NOTEBOOK] };
    expect(witnessRefusal(candidate, subject(plain))).toBeNull();
    expect(witnessRefusal({ ...candidate, roles: ["supervisor"] }, subject(plain))).toBe("witness.not-eligible");
    expect(witnessRefusal({ ...candidate, memberOf: [] }, subject(plain))).toBe("witness.not-eligible");
    expect(witnessRefusal(candidate, subject({ ...plain, isAuthor: true }))).toBe("witness.author");
    expect(witnessRefusal(candidate, subject({ ...plain, isContributor: true }))).toBe("witness.contributor");
  });
});

const plain: Case = {
  roles: [],
  isMember: true,
  state: "draft",
  isAuthor: false,
  isContributor: false,
  assigned: "nobody",
  isHeld: false,
  overMyself: false,
  iBegan: false,
};

function* cases(): Generator<Case> {
  const yesNo = [false, true];
  for (const roles of roleSets())
    for (const isMember of yesNo)
      for (const state of STATES)
        for (const isAuthor of yesNo)
          for (const isContributor of yesNo)
            for (const assigned of ["nobody", "me", "another"] as const)
              for (const isHeld of yesNo)
                for (const overMyself of yesNo)
                  for (const iBegan of yesNo)
                    yield { roles, isMember, state, isAuthor, isContributor, assigned, isHeld, overMyself, iBegan };
}

function roleSets(): Role[][] {
  return Array.from({ length: 2 ** ROLES.length }, (_, bits) => ROLES.filter((_role, place) => (bits >> place) & 1));
}

function isExpected(facts: Facts, each: Case): boolean {
  if (facts.roles !== undefined && !facts.roles.some((role) => each.roles.includes(role))) return false;
  if (facts.member !== undefined && !each.isMember) return false;
  if (facts.states !== undefined && !facts.states.includes(each.state)) return false;
  if (facts.author !== undefined && each.isAuthor !== facts.author) return false;
  if (facts.contributor === false && each.isContributor) return false;
  if (facts.openToMe !== undefined && each.assigned === "another") return false;
  if (facts.notHeld !== undefined && each.isHeld) return false;
  if (facts.another !== undefined && each.overMyself) return false;
  return !(facts.notBegun !== undefined && each.iBegan);
}

function actor(each: Case): Actor {
  return {
    id: ME,
    printedName: "M. Me",
    email: "me@test.invalid",
    roles: each.roles,
    memberOf: each.isMember ? [NOTEBOOK] : ["another notebook"],
    sessionId: "session",
    decimalSign: ".",
    timeZone: "UTC",
    signingHeld: each.isHeld,
  };
}

function subject(each: Case): EntrySubject {
  return {
    notebookId: NOTEBOOK,
    state: each.state,
    authorId: each.isAuthor ? ME : OTHER,
    contributorIds: each.isContributor ? [OTHER, ME] : [OTHER],
    witnessId: each.assigned === "nobody" ? null : each.assigned === "me" ? ME : OTHER,
  };
}

function refusalOf(action: Action, each: Case) {
  // One value that fits every action's subject: each rule reads only what it needs.
  const everything = { ...subject(each), personId: each.overMyself ? ME : OTHER, begunBy: each.iBegan ? [ME] : [] };
  return refusal(actor(each), action, everything);
}

function decide(action: Action, each: Case): boolean {
  const everything = { ...subject(each), personId: each.overMyself ? ME : OTHER, begunBy: each.iBegan ? [ME] : [] };
  return may(actor(each), action, everything);
}
