import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from "vitest";
import {
  clearFailures,
  countFailure,
  FAILURE_LIMIT,
  FAILURE_WINDOW_MS,
  guardPassword,
  lockedUntil,
} from "../../db/attempts.ts";
import { listEvents } from "../../db/audit.ts";
import { takeFrom } from "../../db/rate.ts";
import { makePerson, type TestDatabase, testDatabase, theAdministrator } from "../support/database.ts";

let store: TestDatabase;
beforeAll(async () => {
  store = await testDatabase();
});
afterAll(() => store.close());
afterEach(() => {
  vi.useRealTimers();
});

/** Only the clock is set: the database's own timers run on. */
function atTime(time: number): void {
  vi.useFakeTimers({ toFake: ["Date"], now: time });
}

describe("a rate", () => {
  it("gives what its window holds, then says when to come back, and starts anew with the next one", async () => {
    const start = Math.ceil(Date.now() / 60_000) * 60_000;
    atTime(start + 15_000);
    for (const left of [2, 1, 0]) expect(await takeFrom(store.db, "updates:a", 3, 60_000)).toEqual({ ok: true, left });
    expect(await takeFrom(store.db, "updates:a", 3, 60_000)).toEqual({ ok: false, retryAfterS: 45 });
    expect(await takeFrom(store.db, "updates:b", 3, 60_000)).toEqual({ ok: true, left: 2 });
    atTime(start + 60_000);
    expect(await takeFrom(store.db, "updates:a", 3, 60_000)).toEqual({ ok: true, left: 2 });
  });

  it("gives no more when many ask at once", async () => {
    const all = await Promise.all(Array.from({ length: 30 }, () => takeFrom(store.db, "many", 10, 3_600_000)));
    expect(all.filter(({ ok }) => ok)).toHaveLength(10);
  });
});

describe("wrong passwords", () => {
  const right = async () => true;
  const wrong = async () => false;

  it("at both doors add up to one limit, then both doors are closed, and each failure and the lock are events (SGN-05)", async () => {
    const person = await makePerson(store.db, { printedName: "M. Ferrante" });
    const account = person.email;
    for (let n = 1; n < FAILURE_LIMIT; n++) {
      await expect(guardPassword(store.db, { account, door: "signing", actor: person }, wrong)).rejects.toThrow(
        "signing.wrong-password",
      );
    }
    expect(await lockedUntil(store.db, account)).toBeNull();
    await expect(
      guardPassword(store.db, { account: ` ${account.toUpperCase()}`, door: "sign-in" }, wrong),
    ).rejects.toThrow("account.wrong-password");
    const until = await lockedUntil(store.db, account);
    expect(until?.getTime()).toBeGreaterThan(Date.now());
    const verify = vi.fn(right);
    await expect(guardPassword(store.db, { account, door: "sign-in" }, verify)).rejects.toMatchObject({
      code: "account.locked",
      detail: { until: until?.toISOString() },
    });
    await expect(guardPassword(store.db, { account, door: "signing" }, verify)).rejects.toThrow("signing.locked");
    expect(verify).not.toHaveBeenCalled();
    const { events } = await listEvents(store.db, await theAdministrator(store.db), { limit: 6 });
    expect(events.map(({ action }) => action)).toEqual([
      "account.locked",
      "sign-in.failed",
      "signing.failed",
      "signing.failed",
      "signing.failed",
      "signing.failed",
    ]);
    expect(events.every(({ objectId }) => objectId === person.id)).toBe(true);
  });

  it("are forgotten after a right one, and when their window has passed", async () => {
    const account = (await makePerson(store.db)).email;
    const fail = () => countFailure(store.db, { account, door: "sign-in" });
    const start = Date.now();
    atTime(start);
    for (let n = 1; n < FAILURE_LIMIT; n++) await fail();
    await guardPassword(store.db, { account, door: "signing" }, right);
    for (let n = 1; n < FAILURE_LIMIT; n++) expect(await fail()).toEqual({ lockedUntil: null });
    atTime(start + FAILURE_WINDOW_MS + 1000);
    expect(await fail()).toEqual({ lockedUntil: null });
  });

  it("lock for longer each time, and every lock ends: nobody is locked out for good (ADM-05)", async () => {
    const account = (await makePerson(store.db)).email;
    let now = Date.now();
    const minutes: number[] = [];
    for (let round = 0; round < 7; round++) {
      atTime(now);
      for (let n = 0; n < FAILURE_LIMIT; n++) await countFailure(store.db, { account, door: "sign-in" });
      const until = await lockedUntil(store.db, account);
      if (until === null) throw new Error("The account is open.");
      minutes.push(Math.round((until.getTime() - now) / 60_000));
      now = until.getTime() + 1;
      atTime(now);
      expect(await lockedUntil(store.db, account)).toBeNull();
    }
    expect(minutes).toEqual([15, 30, 60, 120, 240, 240, 240]);
    await guardPassword(store.db, { account, door: "sign-in" }, right);
    for (let n = 0; n < FAILURE_LIMIT; n++) await countFailure(store.db, { account, door: "sign-in" });
    expect((await lockedUntil(store.db, account))?.getTime()).toBe(now + 15 * 60_000);
    await clearFailures(store.db, account);
    expect(await lockedUntil(store.db, account)).toBeNull();
  });

  it("for an unknown account are counted and locked alike, and the trail does not keep what was typed (ADM-04)", async () => {
    const account = "my-password-by-mistake";
    for (let n = 0; n < FAILURE_LIMIT; n++) {
      await expect(guardPassword(store.db, { account, door: "sign-in" }, wrong)).rejects.toThrow(
        "account.wrong-password",
      );
    }
    await expect(guardPassword(store.db, { account, door: "sign-in" }, right)).rejects.toThrow("account.locked");
    const { events } = await listEvents(store.db, await theAdministrator(store.db), { limit: FAILURE_LIMIT + 1 });
    expect(events.map(({ objectId }) => objectId)).toEqual(Array.from({ length: FAILURE_LIMIT + 1 }, () => "unknown"));
    expect(JSON.stringify(events)).not.toContain(account);
  });

  it("guessed many at once are no more than the limit", async () => {
    const account = (await makePerson(store.db)).email;
    const verify = vi.fn(async () => {
      await new Promise((done) => setTimeout(done, 50));
      return false;
    });
    const all = await Promise.allSettled(
      Array.from({ length: 20 }, () => guardPassword(store.db, { account, door: "sign-in" }, verify)),
    );
    expect(all.every(({ status }) => status === "rejected")).toBe(true);
    expect(verify.mock.calls.length).toBeLessThanOrEqual(FAILURE_LIMIT);
    expect(await lockedUntil(store.db, account)).not.toBeNull();
  });

  it("are not counted when the verifying itself broke", async () => {
    const account = (await makePerson(store.db)).email;
    for (let n = 0; n < FAILURE_LIMIT + 1; n++) {
      await expect(
        guardPassword(store.db, { account, door: "sign-in" }, async () => {
          throw new Error("library");
        }),
      ).rejects.toThrow("library");
    }
    expect(await lockedUntil(store.db, account)).toBeNull();
  });
});
