// npm run picture: the picture of the README. It starts the production build on a fresh demo folder, opens the witnessed
// entry of the first citric and phosphoric acid bath as its author, and keeps what is seen at 1440 px.
import { mkdirSync, statSync } from "node:fs";
import { dirname } from "node:path";
import { fileURLToPath } from "node:url";
import { chromium } from "@playwright/test";
import { openLaboratory } from "../e2e/support/laboratory.ts";

const WIDTH = 1440;
const HEIGHT = 1180;
const MOST_BYTES = 500_000;
const target = fileURLToPath(new URL("../../public/readme/entry.png", import.meta.url));

const laboratory = await openLaboratory();
try {
  const browser = await chromium.launch({
    executablePath: process.env.CHROMIUM ?? "/usr/bin/chromium",
    args: ["--no-sandbox", "--disable-gpu"],
  });
  const page = await browser.newPage({
    baseURL: laboratory.url,
    viewport: { width: WIDTH, height: HEIGHT },
    colorScheme: "light",
  });
  const { email, password } = laboratory.person("R. Okafor");
  await page.goto("/sign-in");
  await page.getByLabel("E-mail").fill(email);
  await page.getByLabel("Password").fill(password);
  await page.getByRole("button", { name: "Sign in" }).click();
  await page.waitForURL(/\/desk$/);
  await page.goto("/entries/DSB-0001");
  await page.locator(".eq .ph").first().waitFor();
  await page.evaluate(() => document.fonts.ready);
  mkdirSync(dirname(target), { recursive: true });
  await page.screenshot({ path: target, scale: "css", animations: "disabled" });
  await browser.close();
} finally {
  await laboratory.remove();
}

const { size } = statSync(target);
if (size > MOST_BYTES) throw new Error(`The picture has ${size} bytes; ${MOST_BYTES} are the most.`);
console.log(`public/readme/entry.png, ${Math.round(size / 1000)} kB`);
