// The main job, from a draft to a witnessed entry that a supervisor finds. Each person has a browser of their own.
import type { Page } from "@playwright/test";
import {
  addRow,
  beginEntry,
  countersign,
  putInBlock,
  readToTheEnd,
  saved,
  signAsAuthor,
  title,
  writeParagraph,
} from "./support/acts.ts";
import { expect, type Someone, test } from "./support/test.ts";

test("an entry is written, returned, revised, countersigned and found by a salt that it does not name (SGN-14, FND-01)", async ({
  as,
  laboratory,
  expectAnswers,
}) => {
  test.setTimeout(600_000);
  const okafor = await as("R. Okafor");
  const label = await beginEntry(okafor.page, "Descaling baths");
  await title(okafor.page, "Citric and phosphoric bath, first trial");
  await writeParagraph(okafor.page, "The bath is made up to one litre for plate exchanger two.");
  await putInBlock(okafor.page);
  await addRow(okafor.page, 1, { compound: "citric acid, anhydrous", amount: "0.100", unit: "mol/L" });
  await addRow(okafor.page, 2, { compound: "phosphoric acid", amount: "0.050", unit: "mol/L" });
  const block = okafor.page.getByRole("region", { name: "Equilibrium block E1" });
  // By hand with the same constants: 0.05 × 0.315 + 0.1 × 0.046 = 0.0204 mol/L of H+, γ 0.87 at I 0.02: pH 1.75.
  await expect(block.getByText(/pH\s*1\.75/).first()).toBeVisible();
  await expect(block.getByLabel("Amount, row 1", { exact: true })).toHaveValue("0.100");
  await attach(okafor.page, "meter.csv", "time,pH\n0,1.70\n");
  await saved(okafor.page);
  await signAsAuthor(okafor.page, label, laboratory.person("R. Okafor").password);
  await expect(okafor.page.getByText("“I did this work and wrote this page.”").first()).toBeVisible();

  const sato = await as("H. Sato");
  await sato.page.getByRole("link", { name: `Read and decide: ${label}` }).click();
  await readToTheEnd(sato.page);
  await sato.page.getByRole("button", { name: "Return to author" }).click();
  const dialog = sato.page.getByRole("dialog", { name: `Return ${label} to R. Okafor?` });
  await dialog.getByRole("button", { name: "Return to author" }).click();
  await expect(dialog.getByText("Write why, so that the author knows what to do.")).toBeVisible();
  await dialog.getByLabel("Reason").fill("Which water was it? Please name its grade.");
  await dialog.getByRole("button", { name: "Return to author" }).click();
  await expect(sato.page).toHaveURL(new RegExp(`/entries/${label}$`));

  await okafor.page.goto("/desk");
  await expect(okafor.page.getByText("Which water was it? Please name its grade.")).toBeVisible();
  await okafor.page.goto(`/entries/${label}`);
  await expect(okafor.page.getByText(`H. Sato returned revision 1:`)).toBeVisible();
  await writeParagraph(okafor.page, "The water was of grade 3.");
  await saved(okafor.page);
  await signAsAuthor(okafor.page, label, laboratory.person("R. Okafor").password);
  await okafor.page.goto(`/entries/${label}/1`);
  await expect(okafor.page.getByText("“I did this work and wrote this page.”").first()).toBeVisible();

  const ferrante = await as("M. Ferrante");
  await countersign(ferrante.page, label, laboratory.person("M. Ferrante").password);
  await expect(ferrante.page.getByText("Witnessed", { exact: true }).first()).toBeVisible();
  await expect(ferrante.page.getByText("“Read and understood by me.”").first()).toBeVisible();

  const novak = await as("P. Novak");
  await novak.page.getByRole("link", { name: "Search" }).first().click();
  await chooseCompound(novak.page, "trisodium citrate");
  await novak.page.getByRole("button", { name: "Find entries" }).click();
  await expect(novak.page.getByRole("link", { name: label }).first()).toBeVisible();
  await expect(novak.page.getByText(/E1.*citric acid.*0\.100 mol\/L/).first()).toBeVisible();

  const outsider = await as("K. Amsel");
  expectAnswers(404);
  await outsider.page.goto(`/entries/${label}`);
  await expect(outsider.page.getByRole("heading", { name: "There is nothing here for you" })).toBeVisible();
  await outsider.page.goto("/search");
  await chooseCompound(outsider.page, "trisodium citrate");
  await outsider.page.getByRole("button", { name: "Find entries" }).click();
  await expect(outsider.page.getByText("No entry that you may read fits.")).toBeVisible();
});

test("a contributor cannot countersign, and is told why (SGN-09, SGN-10)", async ({ as, laboratory }) => {
  const okafor = await as("R. Okafor");
  const label = await beginEntry(okafor.page, "Rinse baths");
  await title(okafor.page, "Rinse after the acid step");
  await writeParagraph(okafor.page, "Rinsed three times.");
  await saved(okafor.page);
  const brandt = await as("L. Brandt");
  await brandt.page.goto(`/entries/${label}`);
  await writeParagraph(brandt.page, "And once more by me.");
  await saved(brandt.page);
  await makeWitness(await as("T. Lindqvist"), "L. Brandt");
  await okafor.page.reload();
  await signAsAuthor(okafor.page, label, laboratory.person("R. Okafor").password);
  await brandt.page.goto(`/entries/${label}`);
  await expect(brandt.page.getByText("Whoever wrote in an entry does not witness it; you did.")).toBeVisible();
  await expect(brandt.page.getByRole("link", { name: "Read and decide" })).toHaveCount(0);
  await brandt.page.goto(`/entries/${label}/countersign`);
  await expect(brandt.page).toHaveURL(new RegExp(`/entries/${label}$`));
});

test("five wrong passwords in any mix close both doors (SGN-05)", async ({
  as,
  laboratory,
  expectAnswers,
  browser,
}) => {
  const brandt = await as("L. Brandt");
  const label = await beginEntry(brandt.page, "Rinse baths");
  await title(brandt.page, "A page that is not signed today");
  await writeParagraph(brandt.page, "Something was done.");
  await saved(brandt.page);
  await brandt.page.getByRole("link", { name: "Sign as author" }).click();
  await readToTheEnd(brandt.page);
  expectAnswers(401, 403, 429);
  for (let attempt = 0; attempt < 4; attempt++) {
    await brandt.page.getByLabel(/^Password/).fill(`wrong-password-${attempt}`);
    await brandt.page.getByRole("button", { name: "Sign as author" }).click();
    await expect(brandt.page.getByText(/The password is not right/)).toBeVisible();
  }
  const elsewhere = await browser.newContext({ baseURL: laboratory.url });
  const door = await elsewhere.newPage();
  const { email, password } = laboratory.person("L. Brandt");
  await door.goto("/sign-in");
  await door.getByLabel("E-mail").fill(email);
  await door.getByLabel("Password").fill("wrong-at-the-door");
  await door.getByRole("button", { name: "Sign in" }).click();
  await expect(door.getByRole("alert").first()).toContainText(/not right|Closed for a while/);
  await door.getByLabel("Password").fill(password);
  await door.getByRole("button", { name: "Sign in" }).click();
  await expect(door.getByRole("alert").first()).toContainText("Closed for a while");
  await elsewhere.close();
  await brandt.page.getByLabel(/^Password/).fill(password);
  await brandt.page.getByRole("button", { name: "Sign as author" }).click();
  await expect(brandt.page.getByText(/Signing is closed for a while/)).toBeVisible();
  await brandt.page.goto(`/entries/${label}`);
  await expect(brandt.page.getByText("Draft", { exact: true }).first()).toBeVisible();
});

/** A text that is typed before the page has come to life is not heard, so it is typed until the list answers. */
async function chooseCompound(page: Page, name: string): Promise<void> {
  const field = page.getByRole("combobox", { name: "Compound" });
  const found = page.getByRole("option", { name: new RegExp(name) }).first();
  await expect(async () => {
    await field.fill("");
    await field.fill(name);
    await expect(found).toBeVisible({ timeout: 5_000 });
  }).toPass();
  await found.click();
}

async function attach(page: Page, name: string, text: string): Promise<void> {
  const choosing = page.waitForEvent("filechooser");
  await page.getByRole("button", { name: "Put in file" }).click();
  await (await choosing).setFiles({ name, mimeType: "text/csv", buffer: Buffer.from(text) });
  await expect(page.getByRole("link", { name: new RegExp(name) }).first()).toBeVisible();
}

async function makeWitness(administrator: Someone, name: string): Promise<void> {
  const { page } = administrator;
  await page.goto("/administration/people");
  const row = page.getByRole("row", { name: new RegExp(name.replace(".", "\\.")) });
  await row.getByRole("listitem").filter({ hasText: "witness" }).getByRole("button", { name: "give" }).click();
  const dialog = page.getByRole("dialog", { name: `Make ${name} a witness?` });
  await dialog.getByLabel("Reason").fill("stands in for a colleague");
  await dialog.getByRole("button", { name: "Give the role" }).click();
  await expect(dialog).toBeHidden();
}
