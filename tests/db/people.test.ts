import { afterAll, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { listEvents, readHead } from "../../db/audit.ts";
import type { Db } from "../../db/client.ts";
import { newId } from "../../db/ids.ts";
import {
  acceptInvitation,
  enrolPerson,
  firstAdministrator,
  invitePerson,
  readInvitation,
} from "../../db/invitations.ts";
import { listOutbox } from "../../db/mail.ts";
import {
  actorOf,
  actorOfPerson,
  beginReset,
  closePerson,
  confirmIdentity,
  grantRole,
  hasAdministrator,
  isTimeZone,
  listHeldPeople,
  listPeople,
  maySignIn,
  revokeRole,
  setPreferences,
} from "../../db/people.ts";
import type { Actor, Role } from "../../db/policy.ts";
import { endOtherSessions, endSession, listSessions, recordSignInEvent } from "../../db/sessions.ts";
import {
  again,
  makeNotebook,
  makePerson,
  signIn,
  type TestDatabase,
  testDatabase,
  theAdministrator,
} from "../support/database.ts";

let store: TestDatabase;
let db: Db;
let administrator: Actor;
beforeAll(async () => {
  store = await testDatabase();
  db = store.db;
});
afterAll(() => store.close());

describe("a fresh store", () => {
  it("has no account and no default password; the first administrator comes by a one-time code (ADM-11)", async () => {
    const fresh = await testDatabase();
    expect(await hasAdministrator(fresh.db)).toBe(false);
    const one = await firstAdministrator(fresh.db);
    const other = await firstAdministrator(fresh.db);
    expect(one.expiresAt.getTime() - Date.now()).toBeLessThanOrEqual(72 * 3_600_000);
    expect(await readInvitation(fresh.db, one.code)).toEqual({
      email: null,
      printedName: null,
      roles: ["administrator"],
    });
    const { personId } = await acceptInvitation(fresh.db, {
      code: one.code,
      email: " First@Test.invalid ",
      printedName: "T.  Lindqvist",
      passwordHash: "hash",
    });
    const actor = await signIn(fresh.db, personId);
    expect(actor).toMatchObject({ email: "first@test.invalid", printedName: "T. Lindqvist", roles: ["administrator"] });
    await expect(firstAdministrator(fresh.db)).rejects.toThrow("administration.not-first");
    // A second link that was made before: there is an administrator now, and they did not make it.
    await expect(
      acceptInvitation(fresh.db, { code: other.code, email: "b@test.invalid", printedName: "B", passwordHash: "hash" }),
    ).rejects.toThrow("administration.not-first");
    await fresh.close();
  });
});

describe("people", () => {
  beforeAll(async () => {
    administrator = await theAdministrator(db);
  });

  describe("an invitation", () => {
    const invited = (email: string) =>
      invitePerson(db, administrator, { email, printedName: "H. Sato", roles: ["witness"] });

    it("makes the account once, with the invited roles, and both are events", async () => {
      const { code } = await invited("sato@test.invalid");
      const { personId } = await acceptInvitation(db, { code, email: "other@test.invalid", passwordHash: "hash" });
      const actor = await signIn(db, personId);
      expect(actor).toMatchObject({ email: "sato@test.invalid", roles: ["witness"], memberOf: [] });
      await expect(acceptInvitation(db, { code, passwordHash: "hash" })).rejects.toThrow("invitation.used");
      const { events } = await listEvents(db, administrator, { limit: 2 });
      expect(events.map((event) => event.action)).toEqual(["person.joined", "person.invited"]);
      expect(JSON.stringify(events)).not.toContain(code);
    });

    it("is used by one of two at once", async () => {
      const { code } = await invited("twice@test.invalid");
      const both = await Promise.allSettled([1, 2].map(() => acceptInvitation(db, { code, passwordHash: "hash" })));
      expect(both.map(({ status }) => status).sort()).toEqual(["fulfilled", "rejected"]);
    });

    it("is refused when it is unknown, and asks no address that is taken", async () => {
      await expect(readInvitation(db, "guess")).rejects.toThrow("invitation.invalid");
      await expect(invited("sato@test.invalid")).rejects.toThrow("person.email-taken");
      await expect(invited("no address")).rejects.toMatchObject({ code: "person.invalid", detail: { field: "email" } });
    });

    it("leaves no account when it fails", async () => {
      const { code } = await invited("late@test.invalid");
      await enrolPerson(db, null, { email: "late@test.invalid", printedName: "L", roles: [], passwordHash: null });
      await expect(acceptInvitation(db, { code, passwordHash: "hash" })).rejects.toThrow("person.email-taken");
      expect(await readInvitation(db, code)).toMatchObject({ email: "late@test.invalid" });
    });
  });

  describe("a role", () => {
    it("is given and taken with old, new, who and why, and holds from the next request on (ADM-02)", async () => {
      const person = await makePerson(db, { roles: ["researcher"] });
      const heard: string[] = [];
      const stop = await store.listen("leaf", (payload) => heard.push(payload));
      await grantRole(db, administrator, { personId: person.id, role: "witness", reason: "trained" });
      expect((await again(db, person)).roles).toEqual(["researcher", "witness"]);
      await revokeRole(db, administrator, { personId: person.id, role: "researcher", reason: "moved" });
      expect((await again(db, person)).roles).toEqual(["witness"]);
      const { events } = await listEvents(db, administrator, { limit: 2 });
      expect(events.map(({ action, personId, detail }) => ({ action, personId, detail }))).toEqual([
        {
          action: "role.revoked",
          personId: administrator.id,
          detail: {
            person: person.printedName,
            role: "researcher",
            old: ["researcher", "witness"],
            new: ["witness"],
            reason: "moved",
          },
        },
        {
          action: "role.granted",
          personId: administrator.id,
          detail: {
            person: person.printedName,
            role: "witness",
            old: ["researcher"],
            new: ["researcher", "witness"],
            reason: "trained",
          },
        },
      ]);
      await expect
        .poll(() => heard.filter((payload) => payload === JSON.stringify({ person: person.id })).length)
        .toBe(2);
      await stop();
    });

    it("is never one's own to change, and needs a reason (ADM-03)", async () => {
      const person = await makePerson(db);
      const head = await readHead(db);
      for (const change of [grantRole, revokeRole]) {
        const own = { personId: administrator.id, role: "witness", reason: "x" } as const;
        await expect(change(db, administrator, own)).rejects.toThrow("person.self");
        const bare = { personId: person.id, role: "witness", reason: "  " } as const;
        await expect(change(db, administrator, bare)).rejects.toThrow("person.reason-missing");
        await expect(change(db, administrator, { ...bare, personId: newId(), reason: "x" })).rejects.toThrow(
          "person.not-found",
        );
      }
      expect(await readHead(db)).toEqual(head);
    });

    it("is refused when it is held already, and when it is not held", async () => {
      const person = await makePerson(db, { roles: ["researcher"] });
      const change = (role: Role) => ({ personId: person.id, role, reason: "x" });
      await expect(grantRole(db, administrator, change("researcher"))).rejects.toThrow("person.role-held");
      await expect(revokeRole(db, administrator, change("witness"))).rejects.toThrow("person.role-not-held");
    });

    it.each([["researcher"], ["witness"], ["supervisor"]] as const)(
      "of %s changes nobody's rights (ADM-03)",
      async (role) => {
        const actor = await makePerson(db, { roles: [role] });
        const personId = (await makePerson(db)).id;
        const reason = "x";
        const head = await readHead(db);
        const tries = [
          () => grantRole(db, actor, { personId, role: "witness", reason }),
          () => revokeRole(db, actor, { personId, role: "researcher", reason }),
          () => closePerson(db, actor, { personId, reason }),
          () => beginReset(db, actor, { personId, reason }),
          () => invitePerson(db, actor, { email: "x@test.invalid", printedName: "X", roles: [] }),
          () => listPeople(db, actor),
        ];
        for (const attempt of tries) await expect(attempt()).rejects.toThrow("administration.forbidden");
        expect(await readHead(db)).toEqual(head);
      },
    );
  });

  describe("the last administrator", () => {
    it("cannot be removed, not even by two who remove each other at once", async () => {
      const fresh = await testDatabase();
      const first = await theAdministrator(fresh.db);
      const second = await makePerson(fresh.db, { roles: ["administrator"] });
      const results = await Promise.allSettled([
        closePerson(fresh.db, first, { personId: second.id, reason: "x" }),
        revokeRole(fresh.db, second, { personId: first.id, role: "administrator", reason: "x" }),
      ]);
      expect(results.filter(({ status }) => status === "fulfilled")).toHaveLength(1);
      expect(await hasAdministrator(fresh.db)).toBe(true);
      await fresh.close();
    });
  });

  describe("a closed account", () => {
    it("ends every session at once, keeps its name and id, and comes back by no road (ADM-02, SGN-08)", async () => {
      const notebook = await makeNotebook(db);
      const person = await makePerson(db, {
        roles: ["witness"],
        memberOf: [notebook.id],
        email: "leaver@test.invalid",
      });
      const elsewhere = await signIn(db, person.id);
      expect(await maySignIn(db, " Leaver@test.invalid")).toBe(true);
      await closePerson(db, administrator, { personId: person.id, reason: "left" });
      for (const { sessionId } of [person, elsewhere])
        expect(await actorOf(db, { personId: person.id, sessionId })).toBeNull();
      expect(await actorOfPerson(db, person.id, "command")).toBeNull();
      expect(await maySignIn(db, "leaver@test.invalid")).toBe(false);
      const reason = "x";
      await expect(closePerson(db, administrator, { personId: person.id, reason })).rejects.toThrow("person.closed");
      await expect(grantRole(db, administrator, { personId: person.id, role: "researcher", reason })).rejects.toThrow(
        "person.closed",
      );
      await expect(beginReset(db, administrator, { personId: person.id, reason })).rejects.toThrow("person.closed");
      await expect(
        enrolPerson(db, null, { email: "leaver@test.invalid", printedName: "Another", roles: [], passwordHash: null }),
      ).rejects.toThrow("person.email-taken");
      const listed = (await listPeople(db, administrator)).find(({ id }) => id === person.id);
      expect(listed).toMatchObject({ printedName: person.printedName, roles: ["witness"], notebooks: [notebook.code] });
      expect(listed?.closedAt).toBeInstanceOf(Date);
    });
  });

  describe("a session", () => {
    it("gives an actor only while it lasts, and only to its own person (ADM-01)", async () => {
      const person = await makePerson(db);
      const other = await makePerson(db);
      expect(await actorOf(db, { personId: person.id, sessionId: person.sessionId })).toEqual(person);
      expect(await actorOf(db, { personId: person.id, sessionId: other.sessionId })).toBeNull();
      expect(await actorOf(db, { personId: person.id, sessionId: newId() })).toBeNull();
      await expect(signIn(db, person.id, new Date(Date.now() - 1000))).rejects.toThrow("cannot act");
    });

    it("is listed to its own person, who may end it", async () => {
      const person = await makePerson(db);
      const elsewhere = await signIn(db, person.id);
      const third = await signIn(db, person.id);
      const other = await makePerson(db);
      const own = await listSessions(db, person);
      expect(own.map(({ id }) => id).sort()).toEqual([person.sessionId, elsewhere.sessionId, third.sessionId].sort());
      expect(own.filter(({ isThis }) => isThis).map(({ id }) => id)).toEqual([person.sessionId]);
      await expect(endSession(db, person, other.sessionId)).rejects.toThrow("session.not-found");
      await endSession(db, person, elsewhere.sessionId);
      expect(await actorOf(db, { personId: person.id, sessionId: elsewhere.sessionId })).toBeNull();
      expect(await endOtherSessions(db, person)).toBe(1);
      expect(await endOtherSessions(db, person)).toBe(0);
      expect(await listSessions(db, person)).toHaveLength(1);
      const { events } = await listEvents(db, administrator, {
        filters: { personId: person.id, action: "session.ended" },
      });
      expect(events.map(({ sentence }) => sentence)).toEqual([
        `${person.printedName} ended a session.`,
        `${person.printedName} ended a session.`,
      ]);
    });

    it("begins and ends with an event", async () => {
      const person = await makePerson(db);
      await recordSignInEvent(db, person.id, "sign-in.succeeded");
      await recordSignInEvent(db, newId(), "sign-in.succeeded");
      const { events } = await listEvents(db, administrator, {
        filters: { personId: person.id, action: "sign-in.succeeded" },
      });
      expect(events).toHaveLength(1);
    });
  });

  describe("a reset that an administrator began", () => {
    let person: Actor;
    let second: Actor;
    beforeEach(async () => {
      person = await makePerson(db, { roles: ["researcher", "supervisor"] });
      second = await makePerson(db, { roles: ["administrator"] });
      await beginReset(db, administrator, { personId: person.id, reason: "forgotten" });
    });
    const confirm = (actor: Actor) => confirmIdentity(db, actor, { personId: person.id, how: "met in person" });

    it("holds signing and tells the person; no link and no password is in the mail (SGN-07)", async () => {
      expect((await again(db, person)).signingHeld).toBe(true);
      const { mails } = await listOutbox(db, administrator, { limit: 1 });
      expect(mails[0]).toMatchObject({ to: person.email, sentAt: null });
      expect(mails[0]?.text).not.toMatch(/https?:|token|code/);
      expect((await listHeldPeople(db, second)).map(({ id }) => id)).toContain(person.id);
    });

    it("is confirmed by a second person: a supervisor or another administrator (SGN-07)", async () => {
      await confirm(second);
      expect((await again(db, person)).signingHeld).toBe(false);
      await expect(confirm(second)).rejects.toThrow("person.not-held");
      await beginReset(db, second, { personId: person.id, reason: "again" });
      await confirm(await makePerson(db, { roles: ["supervisor"] }));
      const { events } = await listEvents(db, administrator, { limit: 1 });
      expect(events[0]?.detail).toEqual({ person: person.printedName, how: "met in person" });
    });

    it("is confirmed neither by who began it, nor by oneself, nor by anybody else (SGN-07)", async () => {
      await expect(confirm(administrator)).rejects.toThrow("person.began-reset");
      await expect(confirm(await again(db, person))).rejects.toThrow("person.self");
      for (const role of ["researcher", "witness"] as const) {
        await expect(confirm(await makePerson(db, { roles: [role] }))).rejects.toThrow("administration.forbidden");
      }
      expect((await again(db, person)).signingHeld).toBe(true);
    });

    it("that another one began as well is confirmed by neither of them (SGN-07)", async () => {
      await beginReset(db, second, { personId: person.id, reason: "once more" });
      await expect(confirm(administrator)).rejects.toThrow("person.began-reset");
      await expect(confirm(second)).rejects.toThrow("person.began-reset");
      await confirm(await makePerson(db, { roles: ["administrator"] }));
    });
  });

  describe("preferences", () => {
    it("are one's own: decimal sign and time zone by its name, each change an event", async () => {
      const person = await makePerson(db);
      await setPreferences(db, person, { decimalSign: ",", timeZone: "Europe/Stockholm" });
      expect(await again(db, person)).toMatchObject({ decimalSign: ",", timeZone: "Europe/Stockholm" });
      await setPreferences(db, person, { decimalSign: ",", timeZone: "Europe/Stockholm" });
      const { events } = await listEvents(db, administrator, {
        filters: { personId: person.id, action: "preferences.changed" },
      });
      expect(events.map(({ detail }) => detail)).toEqual([
        { name: "timeZone", old: "UTC", new: "Europe/Stockholm" },
        { name: "decimalSign", old: ".", new: "," },
      ]);
      await expect(setPreferences(db, person, { decimalSign: ".", timeZone: "Nowhere/Town" })).rejects.toMatchObject({
        code: "preferences.invalid",
        detail: { field: "timeZone" },
      });
    });
    it.each([
      ["UTC", true],
      ["America/Argentina/Buenos_Aires", true],
      ["+02:00", false],
      ["", false],
      ["x".repeat(80), false],
    ] as const)("takes the zone %s: %s", (name, isOne) => expect(isTimeZone(name)).toBe(isOne));
  });
});
