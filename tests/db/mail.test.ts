import { afterAll, beforeAll, expect, it } from "vitest";
import { listOutbox, markSent, postMail, unsentMail } from "../../db/mail.ts";
import { ROLES } from "../../db/policy.ts";
import { makePerson, type TestDatabase, testDatabase, theAdministrator } from "../support/database.ts";

let store: TestDatabase;
beforeAll(async () => {
  store = await testDatabase();
});
afterAll(() => store.close());

const mail = {
  to: "okafor@test.invalid",
  subject: "Returned\r\nBcc: all@test.invalid",
  text: "DSB-0043 was returned.",
};

it("waits in the outbox until the post has taken it, and leaves only with the commit", async () => {
  await expect(
    store.db.transaction(async (tx) => {
      await postMail(tx, mail);
      throw new Error("no");
    }),
  ).rejects.toThrow("no");
  expect(await unsentMail(store.db, 10)).toEqual([]);
  const id = await postMail(store.db, mail);
  expect(await unsentMail(store.db, 10)).toMatchObject([{ id, to: mail.to, text: mail.text, sentAt: null }]);
  await markSent(store.db, id);
  expect(await unsentMail(store.db, 10)).toEqual([]);
  const { mails } = await listOutbox(store.db, await theAdministrator(store.db));
  expect(mails[0]?.sentAt).toBeInstanceOf(Date);
});

it("holds one line for a subject, whatever it is made of", async () => {
  await postMail(store.db, mail);
  const [unsent] = await unsentMail(store.db, 1);
  expect(unsent?.subject).toBe("Returned Bcc: all@test.invalid");
});

it("is read by an administrator alone, in pages", async () => {
  for (let n = 0; n < 5; n++) await postMail(store.db, { ...mail, subject: `Mail ${n}` });
  const administrator = await theAdministrator(store.db);
  const first = await listOutbox(store.db, administrator, { limit: 3 });
  expect(first.mails).toHaveLength(3);
  const second = await listOutbox(store.db, administrator, {
    limit: 3,
    ...(first.next === null ? {} : { after: first.next }),
  });
  const ids = [...first.mails, ...second.mails].map(({ id }) => id);
  expect(new Set(ids).size).toBe(ids.length);
  for (const role of ROLES.filter((each) => each !== "administrator")) {
    const actor = await makePerson(store.db, { roles: [role] });
    await expect(listOutbox(store.db, actor)).rejects.toThrow("administration.forbidden");
  }
});
