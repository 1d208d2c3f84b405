import { afterAll, beforeAll, describe, expect, it } from "vitest";
import {
  beginResetFor,
  changePassword,
  invite,
  join,
  joinLink,
  requestReset,
  resetPassword,
} from "../../app/_server/account.ts";
import { BadInput } from "../../app/_server/request.ts";
import { POST as authenticate } from "../../app/api/auth/[...all]/route.ts";
import { listEvents } from "../../db/audit.ts";
import { firstAdministrator } from "../../db/invitations.ts";
import { listOutbox } from "../../db/mail.ts";
import { actorOfPerson } from "../../db/people.ts";
import { ask, type House, openHouse, PASSWORD, signInCookie, type Visitor } from "./house.ts";

let house: House;
let root: Visitor;
let okafor: Visitor;

beforeAll(async () => {
  house = await openHouse();
  root = await house.visitor("T. Lindqvist", ["administrator"], false);
  okafor = await house.visitor("R. Okafor", ["researcher"], true);
});
afterAll(() => house.close());

const NEW = "seven plain words that nobody guesses";
const signIn = async (email: string, password: string) =>
  (await ask(authenticate, "/api/auth/sign-in", { json: { email, password }, params: { all: ["sign-in"] } })).status;
const lettersTo = async (email: string) =>
  (await listOutbox(house.store.db, root.actor)).mails.filter((mail) => mail.to === email);
const actions = async () =>
  (await listEvents(house.store.db, root.actor, { limit: 200 })).events.map((event) => event.action);

describe("one's own password", () => {
  it("is changed with the present one, ends the other sessions, and is an event", async () => {
    const person = await house.visitor("L. Brandt", ["researcher"], true);
    const other = await signInCookie(person.email, PASSWORD);
    await expect(
      changePassword(house.store.db, person.actor, { currentPassword: "not this one", newPassword: NEW }),
    ).rejects.toThrow(BadInput);
    await changePassword(house.store.db, person.actor, { currentPassword: PASSWORD, newPassword: NEW });
    expect(await signIn(person.email, PASSWORD)).toBe(401);
    expect(await signIn(person.email, NEW)).toBe(200);
    const gone = await ask(authenticate, "/api/auth/sign-out", {
      cookie: other,
      json: {},
      params: { all: ["sign-out"] },
    });
    expect(gone.status).toBe(401);
    expect(await actions()).toContain("password.changed");
  });

  it.each([
    ["short", "at least 12"],
    ["password123456", "common"],
    ["R. Okafor R. Okafor", "own name"],
  ])("refuses %s, at its field (ADM-10)", async (newPassword, said) => {
    const refused = await changePassword(house.store.db, okafor.actor, {
      currentPassword: PASSWORD,
      newPassword,
    }).catch((error: unknown) => error);
    expect(refused).toMatchObject({ fields: { newPassword: expect.stringContaining(said) } });
  });
});

describe("a forgotten password", () => {
  it("is set anew by a link in the mail, once, and every session ends", async () => {
    const person = await house.visitor("H. Sato", ["witness"], true);
    await requestReset(house.store.db, { email: person.email.toUpperCase() });
    const [letter] = await lettersTo(person.email);
    const token = new URL(/https:\S+/.exec(letter?.text ?? "")?.[0] ?? "").searchParams.get("token") ?? "";
    expect(letter?.text).toContain("https://notebook.example/reset-password?token=");
    await expect(resetPassword(house.store.db, { token, newPassword: "short" })).rejects.toThrow(BadInput);
    await resetPassword(house.store.db, { token, newPassword: NEW });
    await expect(resetPassword(house.store.db, { token, newPassword: NEW })).rejects.toThrow("invitation.invalid");
    expect(await signIn(person.email, NEW)).toBe(200);
    const gone = await ask(authenticate, "/api/auth/sign-out", {
      cookie: person.cookie,
      json: {},
      params: { all: ["sign-out"] },
    });
    expect(gone.status).toBe(401);
    expect(await actions()).toEqual(expect.arrayContaining(["reset.requested", "password.reset"]));
  });

  it("answers alike for an account that is not there, and sends nothing (ADM-04)", async () => {
    const before = (await listOutbox(house.store.db, root.actor)).mails.length;
    const timed = async (email: string) => {
      const began = performance.now();
      await requestReset(house.store.db, { email });
      return performance.now() - began;
    };
    const unknown = await timed("nobody@tests.invalid");
    expect((await listOutbox(house.store.db, root.actor)).mails.length).toBe(before);
    const known = await timed(okafor.email);
    // Both wait for the same 400 ms; the rest is what a busy machine adds.
    expect(unknown).toBeGreaterThan(395);
    expect(known).toBeGreaterThan(395);
  });

  it("begun by an administrator goes to the person alone and holds their signing (SGN-07)", async () => {
    const person = await house.visitor("M. Ferrante", ["witness"], true);
    const answered = await beginResetFor(house.store.db, root.actor, {
      personId: person.actor.id,
      reason: "forgot it",
    });
    expect(answered).toBeUndefined();
    expect((await lettersTo(person.email)).map((letter) => letter.subject)).toEqual(
      expect.arrayContaining(["A password reset was begun for you", "Set a new password for Counterleaf"]),
    );
    expect((await actorOfPerson(house.store.db, person.actor.id, "x"))?.signingHeld).toBe(true);
  });
});

describe("joining", () => {
  it("takes the link of an invitation once, with a password of one's own", async () => {
    const email = "new@tests.invalid";
    await invite(house.store.db, root.actor, { email, printedName: "N. Newcomer", roles: ["researcher"] });
    const [letter] = await lettersTo(email);
    const code = new URL(/https:\S+/.exec(letter?.text ?? "")?.[0] ?? "").searchParams.get("code") ?? "";
    expect(letter?.text).toContain(joinLink(code));
    const weak = await join(house.store.db, new Headers(), { code, password: "newcomer newcomer" }).catch(
      (error: unknown) => error,
    );
    expect(weak).toMatchObject({ fields: { password: expect.any(String) } });
    const joined = await join(house.store.db, new Headers(), { code, password: NEW });
    expect(joined.person.printedName).toBe("N. Newcomer");
    expect(joined.cookies.join()).toContain("session_token");
    await expect(join(house.store.db, new Headers(), { code, password: NEW })).rejects.toThrow("invitation.used");
  });

  it("makes no first administrator where there is one (ADM-11)", async () => {
    await expect(firstAdministrator(house.store.db)).rejects.toThrow("administration.not-first");
  });
});
