import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { demandPassword } from "../../app/_server/sign-in.ts";
import { GET, POST } from "../../app/api/auth/[...all]/route.ts";
import { closePerson } from "../../db/people.ts";
import { ask, type House, openHouse, PASSWORD, signInCookie, type Visitor } from "./house.ts";

let house: House;
let okafor: Visitor;

beforeAll(async () => {
  house = await openHouse();
  okafor = await house.visitor("R. Okafor", ["researcher"], true);
});
afterAll(() => house.close());

const signIn = (email: string, password: string) =>
  ask(POST, "/api/auth/sign-in", { json: { email, password }, params: { all: ["sign-in"] } });
const whoIs = async (cookie: string) =>
  (await ask(GET, "/api/auth/session", { cookie, params: { all: ["session"] } })).json();

describe("signing in", () => {
  it("opens a session whose cookie is host-only, HttpOnly, SameSite and Secure (ADM-07)", async () => {
    const answer = await signIn(okafor.email, PASSWORD);
    expect(answer.status).toBe(200);
    expect(await answer.json()).toEqual({ person: { id: okafor.actor.id, printedName: "R. Okafor" } });
    const [cookie = ""] = answer.headers.getSetCookie();
    expect(cookie).toMatch(/^__Secure-counterleaf[.]session_token=/);
    expect(cookie).toMatch(/; Path=\//);
    expect(cookie).toMatch(/; HttpOnly/);
    expect(cookie).toMatch(/; Secure/);
    expect(cookie).toMatch(/; SameSite=Lax/);
    expect(cookie).not.toMatch(/Domain=/i);
  });

  it("answers an unknown account, a wrong password and a closed account alike, in words, status and about the same time (ADM-04)", async () => {
    const root = await house.visitor("T. Lindqvist", ["administrator"], false);
    const gone = await house.visitor("Somebody who left", ["researcher"], true);
    await house.visitor("Another", ["administrator"], false);
    await closePerson(house.store.db, root.actor, { personId: gone.actor.id, reason: "left the laboratory" });
    const tries = [
      ["nobody@tests.invalid", PASSWORD],
      [okafor.email, "not the password at all"],
      [gone.email, PASSWORD],
    ] as const;
    const seen: { status: number; body: object; elapsedMs: number }[] = [];
    for (const [email, password] of tries) {
      const began = performance.now();
      const answer = await signIn(email, password);
      const elapsedMs = performance.now() - began;
      const { requestId, ...body } = await answer.json();
      expect(requestId).toMatch(/^[0-9a-f-]{36}$/);
      expect(answer.headers.getSetCookie().filter((line) => !/Max-Age=0/i.test(line))).toEqual([]);
      seen.push({ status: answer.status, body, elapsedMs });
    }
    const [first] = seen;
    for (const each of seen) {
      expect(each.status).toBe(401);
      expect(each.body).toEqual(first?.body);
    }
    // Each of the three spends one scrypt, some 50 ms; a path that skipped it would answer in a tenth of the others' time.
    const times = seen.map((each) => each.elapsedMs);
    expect(Math.min(...times)).toBeGreaterThan(Math.max(...times) / 5);
  });

  it("closes both doors when failures at either make five, for twenty guesses at once as well (SGN-05)", async () => {
    const brandt = await house.visitor("L. Brandt", ["researcher"], true);
    for (let times = 0; times < 4; times += 1) {
      await expect(demandPassword(house.store.db, brandt.actor, "wrong again and again")).rejects.toThrow(
        "signing.wrong-password",
      );
    }
    const many = await Promise.all(Array.from({ length: 20 }, () => signIn(brandt.email, "wrong at the other door")));
    expect(many.filter((answer) => answer.status === 401)).toHaveLength(1);
    expect(many.filter((answer) => answer.status === 429)).toHaveLength(19);
    await expect(demandPassword(house.store.db, brandt.actor, PASSWORD)).rejects.toThrow("signing.locked");
    const closed = await signIn(brandt.email, PASSWORD);
    expect(closed.status).toBe(429);
    expect(Number(closed.headers.get("retry-after"))).toBeGreaterThan(60);
    expect(await closed.json()).toMatchObject({ code: "account.locked", values: { until: expect.any(String) } });
    // What was open stays open: the lock is at the doors, not in the room.
    expect(await whoIs(brandt.cookie)).toMatchObject({ person: { id: brandt.actor.id } });
  });

  it("opens none of the sign-in library's own paths", async () => {
    for (const path of [
      "sign-up/email",
      "sign-in/email",
      "verify-password",
      "change-password",
      "get-session",
      "list-sessions",
      "update-user",
      "reset-password",
      "ok",
    ]) {
      const params = { all: path.split("/") };
      const json = { email: okafor.email, password: PASSWORD, name: "x", newPassword: "x".repeat(20), token: "x" };
      expect((await ask(POST, `/api/auth/${path}`, { cookie: okafor.cookie, json, params })).status).toBe(404);
      expect((await ask(GET, `/api/auth/${path}`, { cookie: okafor.cookie, params })).status).toBe(404);
    }
  });

  it("refuses to sign in from another site's page (ADM-07)", async () => {
    const forged = await ask(POST, "/api/auth/sign-in", {
      json: { email: okafor.email, password: PASSWORD },
      params: { all: ["sign-in"] },
      origin: "https://evil.example",
    });
    expect(forged.status).toBe(403);
    expect(await forged.json()).toMatchObject({ code: "request.cross-site" });
  });
});

describe("sessions", () => {
  it("end on signing out, and the cookie is good for nothing afterwards (ADM-01)", async () => {
    const cookie = await signInCookie(okafor.email, PASSWORD);
    expect(await whoIs(cookie)).toMatchObject({ person: { printedName: "R. Okafor" } });
    const out = await ask(POST, "/api/auth/sign-out", { cookie, json: {}, params: { all: ["sign-out"] } });
    expect(out.status).toBe(200);
    expect(out.headers.getSetCookie().join()).toMatch(/Max-Age=0/i);
    expect(await whoIs(cookie)).toEqual({ person: null });
  });

  it("end when idle too long, and after their absolute length", async () => {
    const { auth } = await import("../../app/_server/auth.ts");
    const { internalAdapter } = await (await auth()).$context;
    const tokenOf = (cookie: string) => decodeURIComponent(cookie.split("=")[1] ?? "").split(".")[0] ?? "";
    const idle = await signInCookie(okafor.email, PASSWORD);
    await internalAdapter.updateSession(tokenOf(idle), { updatedAt: new Date(Date.now() - 61 * 60_000) });
    expect(await whoIs(idle)).toEqual({ person: null });
    const old = await signInCookie(okafor.email, PASSWORD);
    await internalAdapter.updateSession(tokenOf(old), { expiresAt: new Date(Date.now() - 1000) });
    expect(await whoIs(old)).toEqual({ person: null });
  });

  it("are not believed with a forged signature", async () => {
    const [name = "", value = ""] = okafor.cookie.split("=");
    const token = decodeURIComponent(value).split(".")[0];
    expect(await whoIs(`${name}=${token}.${"A".repeat(43)}%3D`)).toEqual({ person: null });
    expect(await whoIs(`${name}=${token}`)).toEqual({ person: null });
  });
});
