// What people do, by the words they see.
import { expect, type Page } from "@playwright/test";

/** Begins an entry in the notebook of that title and returns its label. */
export async function beginEntry(page: Page, notebook: string): Promise<string> {
  await page.goto("/notebooks");
  await page.getByRole("link", { name: notebook }).click();
  await page.getByRole("button", { name: "Begin an entry" }).click();
  await expect(page).toHaveURL(/\/entries\/[A-Z]+-\d+$/);
  const label = page.url().split("/").at(-1) ?? "";
  await expect(page.getByLabel("Title", { exact: true })).toBeVisible();
  return label;
}

/** Fills in the title, and today as the day on which it was done. */
export async function title(page: Page, text: string): Promise<void> {
  await page.getByLabel("Title", { exact: true }).fill(text);
  await page.getByLabel("Title", { exact: true }).press("Enter");
  await page.getByLabel("Done on").fill(new Date().toISOString().slice(0, 10));
  await page.getByLabel("Done on").press("Enter");
}

/** Writes a paragraph at the end of the page. */
export async function writeParagraph(page: Page, text: string): Promise<void> {
  const written = page.getByRole("textbox", { name: "Page" });
  await written.focus();
  await page.keyboard.press("ControlOrMeta+End");
  await page.keyboard.press("Enter");
  await page.keyboard.type(text);
  await expect(written).toContainText(text);
}

export async function putInBlock(page: Page): Promise<void> {
  await page.getByRole("button", { name: "Put in equilibrium block" }).click();
  await expect(page.getByRole("region", { name: /^Equilibrium block E\d+$/ }).last()).toBeVisible();
}

/** Adds row number `row` to the last block and fills it in. */
export async function addRow(
  page: Page,
  row: number,
  given: { compound: string; amount: string; unit: string },
): Promise<void> {
  const block = page.getByRole("region", { name: /^Equilibrium block E\d+$/ }).last();
  const name = block.getByRole("combobox", { name: `Poured in, row ${row}` });
  if (!(await name.isVisible())) await block.getByRole("button", { name: "Add a row" }).click();
  await name.fill(given.compound);
  await block
    .getByRole("option", { name: new RegExp(given.compound) })
    .first()
    .click();
  await block.getByLabel(`Unit, row ${row}`, { exact: true }).selectOption(given.unit);
  const amount = block.getByLabel(`Amount, row ${row}`, { exact: true });
  await amount.fill(given.amount);
  await amount.press("Enter");
}

/** Goes on by the button until the whole revision has been opened. */
export async function readToTheEnd(page: Page): Promise<void> {
  const whole = page.getByText("The whole revision has been opened.").first();
  const next = page.getByRole("button", { name: "Show the next part not seen" });
  for (let turn = 0; turn < 60; turn++) {
    if (await whole.isVisible()) return;
    // The button goes away by itself once the last part was seen.
    if (await next.isVisible()) await next.click({ timeout: 2_000 }).catch(() => undefined);
    await page.waitForFunction(
      () => new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(() => done(true)))),
    );
  }
  await expect(whole).toBeVisible();
}

export async function signAsAuthor(page: Page, label: string, password: string): Promise<void> {
  await page.getByRole("link", { name: "Sign as author" }).click();
  await expect(page).toHaveURL(new RegExp(`/entries/${label}/sign$`));
  await expect(
    page
      .getByRole("button", { name: "Show the next part not seen" })
      .or(page.getByText("The whole revision has been opened."))
      .first(),
  ).toBeVisible();
  await readToTheEnd(page);
  await page.getByLabel(/^Password/).fill(password);
  await page.getByRole("button", { name: "Sign as author" }).click();
  await expect(page).toHaveURL(new RegExp(`/entries/${label}$`));
}

export async function countersign(page: Page, label: string, password: string): Promise<void> {
  await page.goto(`/entries/${label}/countersign`);
  await readToTheEnd(page);
  await page.getByRole("button", { name: /^Check \d/ }).click();
  await expect(page.getByText("Reproduces", { exact: true }).first()).toBeVisible();
  await page.getByLabel(/^Password/).fill(password);
  await page.getByRole("button", { name: "Countersign" }).click();
  await expect(page).toHaveURL(new RegExp(`/entries/${label}$`));
}

/** Waits until the counterfoil says that everything typed is committed. */
export async function saved(page: Page): Promise<void> {
  await expect(
    page.getByRole("complementary", { name: "Counterfoil" }).getByText("Saved", { exact: true }),
  ).toBeVisible();
}
