// Writing together, and writing while line, server, session or draft go away. Each person has a browser of their own.
import { rm, writeFile } from "node:fs/promises";
import type { Page } from "@playwright/test";
import { addRow, beginEntry, putInBlock, signAsAuthor, title, writeParagraph } from "./support/acts.ts";
import { expect, type Someone, test } from "./support/test.ts";
import {
  drawnTwice,
  goToEnd,
  linesOf,
  momentOf,
  recordSaying,
  revisionOf,
  saved,
  saying,
  serversPage,
  timesOn,
  written,
} from "./support/writing.ts";

const block = (page: Page) => page.getByRole("region", { name: "Equilibrium block E1" });
const field = (page: Page, label: string) => block(page).getByLabel(label, { exact: true });

async function openEntry(okafor: Someone, about: string): Promise<string> {
  const label = await beginEntry(okafor.page, "Descaling baths");
  await title(okafor.page, about);
  await saved(okafor.page);
  return label;
}

/** Leaves the page for the title, so that no caret of one's own stands in it. */
async function pause(page: Page): Promise<void> {
  await page.getByLabel("Title", { exact: true }).focus();
  await saved(page);
}

async function expectSamePages(pages: readonly Page[]): Promise<void> {
  for (const page of pages) await pause(page);
  const [first] = pages;
  if (first === undefined) return;
  const server = await serversPage(first, await revisionOf(first));
  for (const page of pages) await expect.poll(() => linesOf(page)).toEqual(server.lines.slice(1));
}

test.describe("two people on one page", () => {
  test("see each other's words within a second, and the same page in the end (COL-01, COL-11)", async ({ as }) => {
    const okafor = await as("R. Okafor");
    const label = await openEntry(okafor, "Two hands in one bath");
    const brandt = await as("L. Brandt");
    await brandt.page.goto(`/entries/${label}`);
    await goToEnd(okafor.page);
    await okafor.page.keyboard.type("Line of Okafor: ");
    await expect(written(brandt.page)).toContainText("Line of Okafor:");
    await expect(written(brandt.page).getByText("R. Okafor", { exact: true })).toBeVisible();
    await goToEnd(brandt.page);
    await brandt.page.keyboard.type("Line of Brandt: ");
    await expect(written(okafor.page).getByText("L. Brandt", { exact: true })).toBeVisible();

    const waits: number[] = [];
    for (let turn = 0; turn < 5; turn++) {
      for (const [writer, reader] of [
        [okafor.page, brandt.page],
        [brandt.page, okafor.page],
      ] as const) {
        const word = `word${turn}${writer === okafor.page ? "o" : "b"}`;
        const there = momentOf(reader, word);
        const here = momentOf(writer, word);
        await drawnTwice(reader);
        await writer.keyboard.type(`${word} `);
        waits.push(Math.round((await there) - (await here)));
      }
    }
    waits.sort((a, b) => a - b);
    test.info().annotations.push({ type: "measured", description: `ms until the other sees it: ${waits.join(", ")}` });
    // The middle one: the slowest of ten says more of what else the machine was doing.
    expect(waits[5]).toBeLessThan(1000);

    const words = (by: string) => Array.from({ length: 25 }, (_, index) => `${by}${index}.`);
    await Promise.all([
      okafor.page.keyboard.type(words("oka").join(" "), { delay: 8 }),
      brandt.page.keyboard.type(words("bra").join(" "), { delay: 8 }),
    ]);
    await expectSamePages([okafor.page, brandt.page]);
    for (const word of [...words("oka"), ...words("bra")]) {
      expect({ word, times: await timesOn(brandt.page, word) }).toEqual({ word, times: 1 });
    }
  });

  test("who change different rows of a block both win, and undo takes back one's own (COL-01, COL-10, CAL-01)", async ({
    as,
  }) => {
    const okafor = await as("R. Okafor");
    const label = await openEntry(okafor, "Two rows, two hands");
    await putInByKeyboard(okafor.page, "Put in equilibrium block");
    await addRow(okafor.page, 1, { compound: "citric acid, anhydrous", amount: "0.100", unit: "mol/L" });
    await addRow(okafor.page, 2, { compound: "phosphoric acid", amount: "0.050", unit: "mol/L" });
    await expect(
      block(okafor.page)
        .getByText(/pH\s*1\.7\d/)
        .first(),
    ).toBeVisible();
    await saved(okafor.page);
    const brandt = await as("L. Brandt");
    await brandt.page.goto(`/entries/${label}`);
    await expect(field(brandt.page, "Amount, row 1")).toHaveValue("0.100");

    await field(okafor.page, "Amount, row 1").fill("0.110");
    await field(brandt.page, "Amount, row 2").fill("0.060");
    await Promise.all([
      field(okafor.page, "Amount, row 1").press("Enter"),
      field(brandt.page, "Amount, row 2").press("Enter"),
    ]);
    for (const { page } of [okafor, brandt]) {
      await expect(field(page, "Amount, row 1")).toHaveValue("0.110");
      await expect(field(page, "Amount, row 2")).toHaveValue("0.060");
    }
    // What somebody is typing is not taken away by what another enters in the same field.
    await field(okafor.page, "Amount, row 2").fill("0.07");
    await field(brandt.page, "Amount, row 2").fill("0.065");
    await field(brandt.page, "Amount, row 2").press("Enter");
    await saved(brandt.page);
    await expect(saying(okafor.page, "Saved; 1 field not entered yet")).toBeVisible();
    await drawnTwice(okafor.page);
    await expect(field(okafor.page, "Amount, row 2")).toHaveValue("0.07");
    await field(okafor.page, "Amount, row 2").press("Escape");
    await expect(field(okafor.page, "Amount, row 2")).toHaveValue("0.065");

    await written(okafor.page).focus();
    await okafor.page.keyboard.press("ControlOrMeta+z");
    for (const { page } of [okafor, brandt]) {
      await expect(field(page, "Amount, row 1")).toHaveValue("0.100");
      await expect(field(page, "Amount, row 2")).toHaveValue("0.065");
    }
    await okafor.page.getByRole("button", { name: "redo", exact: true }).click();
    await expect(field(brandt.page, "Amount, row 1")).toHaveValue("0.110");
    await okafor.page.getByRole("button", { name: "undo", exact: true }).click();
    await expect(field(brandt.page, "Amount, row 1")).toHaveValue("0.100");
    await saved(okafor.page);
    await okafor.page.reload();
    await expect(field(okafor.page, "Amount, row 1")).toHaveValue("0.100");
    await expect(field(okafor.page, "Amount, row 2")).toHaveValue("0.065");
  });
});

test.describe("while the line is bad", () => {
  test("a reload in the middle of saving loses and doubles nothing (COL-02)", async ({ as, watch }) => {
    const { page } = await as("R. Okafor");
    await openEntry({ page, context: page.context() }, "Reloaded while saving");
    const updates = "**/api/revisions/*/updates";

    // Held back: nothing of it has arrived when the page is reloaded.
    watch.away = true;
    await page.route(updates, () => undefined);
    await goToEnd(page);
    await page.keyboard.type("Heldback words.");
    await expect(saying(page, "Saving")).toBeVisible();
    await page.unroute(updates);
    await page.reload();
    await expect(written(page)).toContainText("Heldback words.");
    await saved(page);
    expect(await timesOn(page, "Heldback")).toBe(1);

    // Committed, but the answer is lost: it is sent again, and taken once.
    let committed = 0;
    await page.route(updates, async (route) => {
      await route.fetch();
      committed += 1;
      await route.abort("connectionreset");
    });
    await goToEnd(page);
    await page.keyboard.type("Unheard words.");
    await expect.poll(() => committed).toBeGreaterThan(1);
    await expect(saying(page, /^Offline, \d+ changes? kept on this device$/)).toBeVisible();
    await page.reload();
    await expect(written(page)).toContainText("Unheard words.");
    await page.unroute(updates);
    await page.reload();
    await saved(page);
    watch.away = false;
    expect(await timesOn(page, "Heldback")).toBe(1);
    expect(await timesOn(page, "Unheard")).toBe(1);
    await expectSamePages([page]);
  });

  test("off line, typing goes on and is kept; back on line every change arrives once (COL-02)", async ({
    as,
    watch,
  }) => {
    test.setTimeout(180_000);
    const okafor = await as("R. Okafor");
    const label = await openEntry(okafor, "Cellar without a line");
    await putInBlock(okafor.page);
    await addRow(okafor.page, 1, { compound: "citric acid, anhydrous", amount: "0.100", unit: "mol/L" });
    await expect(
      block(okafor.page)
        .getByText(/pH\s*2\.[01]\d/)
        .first(),
    ).toBeVisible();
    await saved(okafor.page);

    watch.away = true;
    await okafor.context.setOffline(true);
    await expect(saying(okafor.page, "Offline")).toBeVisible();
    const said = await recordSaying(okafor.page);
    await goToEnd(okafor.page);
    await okafor.page.keyboard.type("First cellar line.");
    await expect(saying(okafor.page, /^Offline, \d+ changes? kept on this device$/)).toBeVisible();
    await okafor.page.keyboard.press("Enter");
    await okafor.page.keyboard.type("Second cellar line.");
    await field(okafor.page, "Amount, row 1").fill("0.200");
    await field(okafor.page, "Amount, row 1").press("Enter");
    await expect(saying(okafor.page, /^Offline, \d+ changes kept on this device$/)).toBeVisible();
    await expect(block(okafor.page).getByText(/^Not solved: offline\./)).toBeVisible();
    await expect(block(okafor.page).getByText("Held: of earlier inputs")).toBeVisible();
    expect(await said()).toEqual(["Offline"]);
    await expect(okafor.page.getByRole("link", { name: "Sign as author" })).toHaveCount(0);

    await okafor.context.setOffline(false);
    await saved(okafor.page);
    await expect(
      block(okafor.page)
        .getByText(/pH\s*1\.[89]\d/)
        .first(),
    ).toBeVisible();
    await expect(block(okafor.page).getByText(/^Not solved: offline/)).toHaveCount(0);
    await expectSamePagesButBlocks(okafor.page, ["First cellar line.", "Second cellar line."]);

    // The tab is closed while off line; the next one has what it left.
    await okafor.context.setOffline(true);
    await expect(saying(okafor.page, "Offline")).toBeVisible();
    await goToEnd(okafor.page);
    await okafor.page.keyboard.type("Third cellar line.");
    await expect(saying(okafor.page, /^Offline, \d+ changes? kept on this device$/)).toBeVisible();
    // Typed within the moment in which changes are merged: kept on the way out.
    await okafor.page.keyboard.type(" And out.");
    await okafor.page.close({ runBeforeUnload: true });
    await okafor.context.setOffline(false);
    const next = await okafor.context.newPage();
    watch.follow(next);
    await next.goto(`/entries/${label}`);
    await expect(written(next)).toContainText("Third cellar line. And out.");
    await saved(next);
    watch.away = false;
    await expectSamePagesButBlocks(next, ["First cellar line.", "Second cellar line.", "Third cellar line. And out."]);
    await expect(field(next, "Amount, row 1")).toHaveValue("0.200");
  });

  test("a server that was killed has all that it acknowledged, and takes the rest once (COL-03)", async ({
    as,
    laboratory,
    watch,
  }) => {
    test.setTimeout(240_000);
    const okafor = await as("R. Okafor");
    const { page } = okafor;
    const label = await openEntry(okafor, "A server falls");
    await goToEnd(page);
    await page.keyboard.type("Acknowledged before.");
    await saved(page);
    for (const turn of [1, 2]) {
      watch.away = true;
      // It falls in the middle of what is being typed: part of it committed, part on its way, part still to come.
      const typing = page.keyboard.type(` Turn${turn}a turn${turn}b turn${turn}c turn${turn}d turn${turn}e.`, {
        delay: 25,
      });
      await expect(written(page)).toContainText(`turn${turn}b`);
      await laboratory.kill();
      await typing;
      await expect(saying(page, /^Offline, \d+ changes? kept on this device$/)).toBeVisible();
      await page.keyboard.type(` Meanwhile${turn}.`);
      await laboratory.start();
      await saved(page);
      watch.away = false;
    }
    const expected =
      "Acknowledged before. Turn1a turn1b turn1c turn1d turn1e. Meanwhile1. Turn2a turn2b turn2c turn2d turn2e. Meanwhile2.";
    await expectSamePages([page]);
    expect(await linesOf(page)).toEqual([expected]);
    const brandt = await as("L. Brandt");
    await brandt.page.goto(`/entries/${label}`);
    await expect.poll(() => linesOf(brandt.page)).toEqual([expected]);
  });

  test("two tabs of one person: nothing doubles, and what a closed one left is sent by the other (COL-02)", async ({
    as,
    watch,
  }) => {
    const okafor = await as("R. Okafor");
    const label = await openEntry(okafor, "Two tabs");
    const first = okafor.page;
    const second = await okafor.context.newPage();
    watch.follow(second);
    await second.goto(`/entries/${label}`);
    await goToEnd(first);
    await first.keyboard.type("First tab: ");
    await expect(written(second)).toContainText("First tab:");
    await goToEnd(second);
    await second.keyboard.type("Second tab: ");
    await first.keyboard.type("alpha beta gamma", { delay: 10 });
    await second.keyboard.type("delta epsilon zeta", { delay: 10 });
    await expectSamePages([first, second]);
    for (const word of ["alpha", "beta", "gamma", "delta", "epsilon", "zeta"])
      expect(await timesOn(first, word)).toBe(1);

    watch.away = true;
    await second.route("**/api/revisions/*/updates", (route) => route.abort());
    await goToEnd(second);
    await second.keyboard.type("Left behind.");
    await expect(saying(second, /^Offline, \d+ changes? kept on this device$/)).toBeVisible();
    await second.close({ runBeforeUnload: true });
    await expect(written(first)).toContainText("Left behind.");
    watch.away = false;
    await expectSamePages([first]);
    expect(await timesOn(first, "Left behind.")).toBe(1);
  });
});

test("changes to a revision that was signed meanwhile are kept for their writer and never merged (COL-04)", async ({
  as,
  laboratory,
  watch,
}) => {
  test.setTimeout(180_000);
  const okafor = await as("R. Okafor");
  const label = await openEntry(okafor, "Signed meanwhile");
  await writeParagraph(okafor.page, "What was done.");
  await saved(okafor.page);
  const brandt = await as("L. Brandt");
  await brandt.page.goto(`/entries/${label}`);
  await expect(written(brandt.page)).toContainText("What was done.");
  const stale = await okafor.context.newPage();
  watch.follow(stale);
  await stale.goto(`/entries/${label}`);
  await expect(written(stale)).toContainText("What was done.");

  watch.away = true;
  await brandt.context.setOffline(true);
  await expect(saying(brandt.page, "Offline")).toBeVisible();
  await goToEnd(brandt.page);
  await brandt.page.keyboard.type("Too late by an hour.");
  await expect(saying(brandt.page, /^Offline, \d+ changes? kept on this device$/)).toBeVisible();
  await signAsAuthor(okafor.page, label, laboratory.person("R. Okafor").password);

  await expect(stale.getByText("This revision is no longer a draft.")).toBeVisible();
  await expect(written(stale)).toHaveAttribute("contenteditable", "false");

  await brandt.context.setOffline(false);
  await expect(brandt.page.getByText("This revision is no longer a draft.")).toBeVisible();
  await expect(brandt.page.getByRole("blockquote").filter({ hasText: "Too late by an hour." })).toBeVisible();
  await expect(brandt.page.getByRole("button", { name: "Copy what was not added" })).toBeVisible();
  watch.away = false;
  await brandt.page.getByRole("button", { name: "Show the page as it stands now" }).click();
  await expect(brandt.page.getByRole("heading", { name: "Kept for you" })).toBeVisible();
  await expect(brandt.page.getByText("“Too late by an hour.”")).toBeVisible();

  await okafor.page.reload();
  await expect(okafor.page.getByText("What was done.")).toBeVisible();
  await expect(okafor.page.getByText("Too late by an hour.")).toHaveCount(0);
});

test("a session that ends while somebody writes takes nothing that was typed (ADM-01)", async ({
  as,
  laboratory,
  expectAnswers,
}) => {
  const okafor = await as("R. Okafor");
  const { page } = okafor;
  const label = await openEntry(okafor, "Session ended");
  await putInBlock(page);
  await goToEnd(page);
  await page.keyboard.type("Before the end.");
  await field(page, "Measured pH by the meter").fill("1,000");
  await field(page, "Measured pH by the meter").press("Enter");
  await expect(block(page).getByText("This can be read in two ways. Which number is it?")).toBeVisible();
  await expect(saying(page, "Saved; 1 field not entered yet")).toBeVisible();
  await written(page).focus();

  const elsewhere = await as("R. Okafor");
  await elsewhere.page.goto("/account");
  expectAnswers(401);
  await elsewhere.page.getByRole("button", { name: "End all the others" }).click();
  const dialog = page.getByRole("dialog", { name: "Sign in again to go on" });
  await expect(dialog).toBeVisible();
  await page.keyboard.press("Escape");
  await expect(dialog).toBeHidden();
  await goToEnd(page);
  await page.keyboard.type("After the end.");
  await expect(saying(page, /^Signed out, \d changes? kept on this device; 1 field not entered yet$/)).toBeVisible();
  await page.getByRole("button", { name: "Sign in again" }).click();
  const { email, password } = laboratory.person("R. Okafor");
  await dialog.getByLabel("E-mail").fill(email);
  await dialog.getByLabel("Password").fill(password);
  await page.keyboard.press("Enter");
  await expect(dialog).toBeHidden();
  await expect(saying(page, "Saved; 1 field not entered yet")).toBeVisible();
  await expect(field(page, "Measured pH by the meter")).toHaveValue("1,000");
  expect(await timesOn(page, "Before the end.")).toBe(1);
  expect(await timesOn(page, "After the end.")).toBe(1);
  // The page was not made anew: one's own changes can still be undone.
  await written(page).focus();
  await page.keyboard.press("ControlOrMeta+z");
  await expect(written(page)).not.toContainText("After the end.");
  await page.keyboard.press("ControlOrMeta+y");
  await expect(written(page)).toContainText("After the end.");
  await field(page, "Measured pH by the meter").press("Escape");
  await saved(page);
  await elsewhere.page.goto(`/entries/${label}`);
  await expect(written(elsewhere.page)).toContainText("After the end.");
});

test.describe("the equilibrium block", () => {
  test("answers bad input at the field and loses nothing of it (CAL-02, CAL-16)", async ({ as }) => {
    test.setTimeout(180_000);
    const okafor = await as("R. Okafor");
    const { page } = okafor;
    await openEntry(okafor, "What is no number");
    await putInBlock(page);
    await addRow(page, 1, { compound: "citric acid, anhydrous", amount: "0.100", unit: "mol/L" });
    await expect(
      block(page)
        .getByText(/pH\s*2\.[01]\d/)
        .first(),
    ).toBeVisible();
    const amount = field(page, "Amount, row 1");
    for (const [typed, answer] of [
      ["a pinch", "“a pinch” is not a number. Write digits, for example 0.100."],
      ["-0.1", "An amount is not below zero. Write what went in."],
      ["1e400", "That number is too large to be worked with. Check its exponent."],
      ["0.1.2.3", /is not a number/],
    ] as const) {
      await amount.fill(typed);
      await amount.press("Enter");
      await expect(block(page).getByText(answer)).toBeVisible();
      await expect(amount).toHaveValue(typed);
      await expect(amount).toHaveAttribute("aria-invalid", "true");
      await expect(saying(page, "Saved; 1 field not entered yet")).toBeVisible();
    }
    await amount.fill("1,000");
    await amount.press("Enter");
    await expect(block(page).getByText("This can be read in two ways. Which number is it?")).toBeVisible();
    await expect(amount).toHaveValue("1,000");
    await block(page).getByRole("button", { name: "1.000 mol/L" }).press("Enter");
    await expect(amount).toHaveValue("1.000");
    await amount.fill("0,100");
    await amount.press("Enter");
    await expect(block(page).getByText(/^Read as 0\.100/)).toBeVisible();

    const name = block(page).getByRole("combobox", { name: "Poured in, row 1" });
    await name.fill("qwzxqjk");
    await expect(block(page).getByText("Nothing found. Try another name, a CAS number or a formula.")).toBeVisible();
    await page.keyboard.press("Tab");
    await expect(name).toHaveValue("qwzxqjk");
    await expect(block(page).getByText(/^“qwzxqjk” is not chosen yet/)).toBeVisible();
    await name.focus();
    await page.keyboard.press("Escape");
    await expect(name).toHaveValue(/citric acid/);
    await saved(page);

    await field(page, "Made up to").fill("none");
    await field(page, "Made up to").press("Enter");
    await expect(block(page).getByText(/“none” is not a number/)).toBeVisible();
    await field(page, "Made up to").press("Escape");

    const add = block(page).getByRole("button", { name: "Add a row" });
    for (let row = 2; row <= 40; row++) {
      await add.press("Enter");
      await expect(block(page).getByRole("combobox", { name: `Poured in, row ${row}` })).toBeFocused();
    }
    await add.press("Enter");
    await expect(
      block(page).getByText("A composition has at most 40 rows. Put the rest into a block of its own.").first(),
    ).toBeVisible();
    await expect(block(page).getByRole("combobox", { name: "Poured in, row 41" })).toHaveCount(0);
    await saved(page);
  });

  test("solves anew without moving the page under the reader", async ({ as }) => {
    const okafor = await as("R. Okafor");
    const { page } = okafor;
    await openEntry(okafor, "A page that stands still");
    await putInBlock(page);
    await addRow(page, 1, { compound: "citric acid, anhydrous", amount: "0.100", unit: "mol/L" });
    await addRow(page, 2, { compound: "phosphoric acid", amount: "0.050", unit: "mol/L" });
    await expect(
      block(page)
        .getByText(/pH\s*1\.7\d/)
        .first(),
    ).toBeVisible();
    await saved(page);
    await field(page, "Amount, row 1").fill("0.400");
    const shifts = await page.evaluateHandle(() => {
      const seen: { value: number; at: number }[] = [];
      // All of them, those right after a key too.
      new PerformanceObserver((list) => {
        for (const entry of list.getEntries())
          seen.push({ value: Number(Reflect.get(entry, "value")), at: entry.startTime });
      }).observe({ type: "layout-shift" });
      return seen;
    });
    await page.keyboard.press("Enter");
    await expect(
      block(page)
        .getByText(/pH\s*1\.[56]\d/)
        .first(),
    ).toBeVisible();
    await saved(page);
    await drawnTwice(page);
    const seen = await shifts.jsonValue();
    const sum = seen.reduce((all, shift) => all + shift.value, 0);
    test.info().annotations.push({
      type: "measured",
      description: `layout shift of a new solve: ${sum.toFixed(4)} (${seen.length})`,
    });
    expect(sum).toBeLessThan(0.05);
  });
});

test("what looks like markup stays text (ASVS 1)", async ({ as }) => {
  const okafor = await as("R. Okafor");
  const { page } = okafor;
  await openEntry(okafor, "<img src=x onerror=\"document.title='hit'\">");
  const markup = "<script>document.title='hit'</script><b>not bold</b>";
  await writeParagraph(page, markup);
  await expect(written(page).getByText(markup)).toBeVisible();
  await putInBlock(page);
  await field(page, "Lot, row 1").fill('"><svg onload="document.title=\'hit\'">');
  await field(page, "Lot, row 1").press("Enter");
  await field(page, "Title of E1").fill("<b>E</b>");
  await field(page, "Title of E1").press("Enter");
  await goToEnd(page);
  await page.keyboard.type("/formula");
  await expect(page.getByRole("listbox", { name: "Put in" })).toBeVisible();
  await page.keyboard.press("Enter");
  const dialog = page.getByRole("dialog", { name: "Put in a formula" });
  await dialog.getByLabel("Formula").fill("\\href{javascript:document.title='hit'}{press} \\htmlClass{x}{y} c = n/V");
  await page.keyboard.press("Enter");
  await expect(dialog).toBeHidden();
  await expect(page.getByRole("button", { name: /^Change the formula/ })).toBeVisible();
  await saved(page);
  await page.reload();
  await expect(written(page).getByText(markup)).toBeVisible();
  await expect(field(page, "Lot, row 1")).toHaveValue('"><svg onload="document.title=\'hit\'">');
  await expect(page.getByRole("link", { name: "press" })).toHaveCount(0);
  expect(
    await page.evaluate(() => [...document.links].filter((link) => !/^https?:|^mailto:/.test(link.href)).length),
  ).toBe(0);
  await expect(page).not.toHaveTitle("hit");
});

test.describe("files", () => {
  test("are sent with progress, can be cancelled, and stand on the page when they are stored", async ({
    as,
    watch,
  }) => {
    test.setTimeout(180_000);
    const okafor = await as("R. Okafor");
    const { page } = okafor;
    await openEntry(okafor, "A curve and a picture");
    const line = await okafor.context.newCDPSession(page);
    await line.send("Network.emulateNetworkConditions", {
      offline: false,
      latency: 0,
      downloadThroughput: -1,
      uploadThroughput: 400_000,
    });
    const curve = Buffer.from(`time,pH\n${"0,1.70\n".repeat(430_000)}`);
    watch.away = true;
    await choose(page, { name: "long-curve.csv", mimeType: "text/csv", buffer: curve });
    const going = page.getByRole("region", { name: "Files on their way" });
    await expect
      .poll(async () => Number(await going.getByRole("progressbar").getAttribute("aria-valuenow")), { intervals: [50] })
      .toBeGreaterThan(0);
    const done = Number(await going.getByRole("progressbar").getAttribute("aria-valuenow"));
    expect(done).toBeLessThan(100);
    await going.getByRole("button", { name: "Cancel" }).press("Enter");
    await expect(going.getByText("Cancelled. Nothing of it was kept.")).toBeVisible();
    watch.away = false;
    await going.getByRole("button", { name: "Leave it" }).press("Enter");
    await line.send("Network.emulateNetworkConditions", {
      offline: false,
      latency: 0,
      downloadThroughput: -1,
      uploadThroughput: -1,
    });
    await page.reload();
    await expect(written(page)).toBeVisible();
    await expect(page.getByText("long-curve.csv")).toHaveCount(0);

    await written(page).focus();
    await choose(page, { name: "long-curve.csv", mimeType: "text/csv", buffer: curve });
    await expect(page.getByRole("link", { name: /long-curve\.csv/ }).first()).toBeVisible({ timeout: 60_000 });
    await choose(page, { name: "plate.png", mimeType: "image/png", buffer: Buffer.from(PICTURE, "base64") });
    const picture = written(page).getByRole("img", { name: "plate.png" });
    await expect(picture).toBeVisible();
    await expect
      .poll(() => picture.evaluate((image) => (image instanceof HTMLImageElement ? image.naturalWidth : 0)))
      .toBe(8);
    await page.getByLabel("Caption").last().fill("The plate before the bath");
    await page.getByLabel("Caption").last().press("Enter");
    await saved(page);
    await page.reload();
    await expect(written(page).getByRole("img", { name: "plate.png" })).toBeVisible();
    await expect(page.getByLabel("Caption").last()).toHaveValue("The plate before the bath");
  });

  test("that are too long or not what they say are refused with words, and nothing is left", async ({
    as,
    expectAnswers,
  }, info) => {
    const okafor = await as("R. Okafor");
    const { page } = okafor;
    await openEntry(okafor, "Files that are refused");
    const going = page.getByRole("region", { name: "Files on their way" });
    const long = info.outputPath("too-long.csv");
    await writeFile(long, Buffer.alloc(40 * 1024 * 1024, "0,1.70\n"));
    await choose(page, long);
    await expect(
      going.getByText("The file is longer than 32 MiB. Attach a part of it, or a compressed copy."),
    ).toBeVisible();
    await going.getByRole("button", { name: "Leave it" }).press("Enter");
    await rm(long);

    expectAnswers(400, 415, 422);
    const program = Buffer.concat([Buffer.from("4d5a90000300000004000000ffff0000b8", "hex"), Buffer.alloc(400, 7)]);
    await choose(page, { name: "curve.csv", mimeType: "text/csv", buffer: program });
    await expect(going.getByRole("alert")).toContainText(/program|executable|not a|kind/i);
    info.annotations.push({ type: "said", description: (await going.getByRole("alert").textContent()) ?? "" });
    await going.getByRole("button", { name: "Leave it" }).press("Enter");
    await expect(going).toHaveCount(0);
    await saved(page);
    await page.reload();
    await expect(written(page)).toBeVisible();
    await expect(page.getByText(/curve\.csv|too-long\.csv/)).toHaveCount(0);
  });
});

test("what was typed into a field and not entered is offered again after a reload", async ({ as }) => {
  const okafor = await as("R. Okafor");
  const { page } = okafor;
  await openEntry(okafor, "Not entered yet");
  await putInBlock(page);
  await addRow(page, 1, { compound: "citric acid, anhydrous", amount: "0.100", unit: "mol/L" });
  await saved(page);
  const revisionId = await revisionOf(page);
  await field(page, "Amount, row 1").fill("0.25");
  await expect(saying(page, "Saved; 1 field not entered yet")).toBeVisible();
  await page.reload();
  const offered = "Typed before and not entered. Enter takes it, Escape leaves it.";
  await expect(field(page, "Amount, row 1")).toHaveValue("0.25");
  await expect(block(page).getByText(offered)).toBeVisible();
  await expect(saying(page, "Saved; 1 field not entered yet")).toBeVisible();
  // Passing through enters nothing.
  await field(page, "Amount, row 1").focus();
  await page.keyboard.press("Tab");
  await expect(block(page).getByText(offered)).toBeVisible();
  expect((await serversPage(page, revisionId)).text).toContain("0.100 mol/L");
  await field(page, "Amount, row 1").press("Enter");
  await saved(page);
  await expect(block(page).getByText(offered)).toHaveCount(0);
  expect((await serversPage(page, revisionId)).text).toContain("0.25 mol/L");

  await page.getByLabel("Title", { exact: true }).fill("A title that was left");
  await page.reload();
  await expect(page.getByLabel("Title", { exact: true })).toHaveValue("A title that was left");
  await page.getByLabel("Title", { exact: true }).press("Escape");
  await expect(page.getByLabel("Title", { exact: true })).toHaveValue("Not entered yet");
  await page.reload();
  await expect(page.getByLabel("Title", { exact: true })).toHaveValue("Not entered yet");
  await expect(field(page, "Amount, row 1")).toHaveValue("0.25");
  await saved(page);
});

/** Eight by eight pixels, made for this test. */
const PICTURE =
  "iVBORw0KGgoAAAANSUhEUgAAAAgAAAAICAIAAABLbSncAAAAMElEQVR4nG3CQRGAQADEsIpABCIQwbtvRFTEicbAZgK2XzZz28xjM6/NfDaTzRybf71wRgG0ty85AAAAAElFTkSuQmCC";

async function choose(page: Page, file: string | { name: string; mimeType: string; buffer: Buffer }): Promise<void> {
  const choosing = page.waitForEvent("filechooser");
  await page.getByRole("button", { name: "Put in file" }).press("Enter");
  await (await choosing).setFiles(file);
}

/** From the page into its toolbar, along it, and back into the page, by keys alone. */
async function putInByKeyboard(page: Page, name: string): Promise<void> {
  await written(page).focus();
  await page.keyboard.press("Alt+F10");
  const button = page.getByRole("button", { name });
  for (let step = 0; step < 40; step++) {
    if (await button.evaluate((element) => element === document.activeElement)) break;
    await page.keyboard.press("ArrowRight");
  }
  await expect(button).toBeFocused();
  await page.keyboard.press("Enter");
}

/** The running text is on the page and on the server, each line once. */
async function expectSamePagesButBlocks(page: Page, expected: readonly string[]): Promise<void> {
  await pause(page);
  const server = await serversPage(page, await revisionOf(page));
  const lines = await linesOf(page);
  for (const line of expected) {
    expect({ line, times: server.lines.filter((each) => each === line).length }).toEqual({ line, times: 1 });
    expect({ line, times: lines.filter((each) => each === line).length }).toEqual({ line, times: 1 });
  }
}
