// The tests' own `test`: a laboratory for each worker, people who sign in, and nothing that went wrong unseen: a console
// error, a page error or an unexpected 4xx or 5xx fails the test.
import AxeBuilder from "@axe-core/playwright";
import { type Browser, type BrowserContext, test as base, expect, type Page } from "@playwright/test";
import { type Laboratory, openLaboratory } from "./laboratory.ts";

export type Someone = { page: Page; context: BrowserContext };

type Fixtures = {
  /** Opens a browser of their own for a person of the demo laboratory and signs them in. */
  as: (
    printedName: string,
    options?: { colorScheme?: "light" | "dark"; viewport?: { width: number; height: number } },
  ) => Promise<Someone>;
  /** Says before an act which answers of the server it expects beside the good ones, e.g. 409. */
  expectAnswers: (...statuses: number[]) => void;
  watch: Watch;
};
type WorkerFixtures = { laboratory: Laboratory };

class Watch {
  readonly faults: string[] = [];
  readonly expected = new Set<number>();
  /** set while the network or the server is taken away on purpose */
  away = false;

  follow(page: Page): void {
    page.on("pageerror", (error) => this.faults.push(`page error: ${error.message}`));
    page.on("console", (message) => {
      if (message.type() !== "error") return;
      const text = message.text();
      if (/Failed to load resource/.test(text) && (this.away || this.expected.size > 0)) return;
      if (this.away && /ERR_INTERNET_DISCONNECTED|ERR_CONNECTION_REFUSED|Failed to fetch/.test(text)) return;
      this.faults.push(`console: ${text} (${message.location().url})`);
    });
    page.on("response", (response) => {
      if (response.status() >= 400 && !this.expected.has(response.status()) && !this.away) {
        this.faults.push(`${response.status()} ${response.request().method()} ${response.url()}`);
      }
    });
  }
}

export const test = base.extend<Fixtures, WorkerFixtures>({
  laboratory: [
    // biome-ignore lint/correctness/noEmptyPattern: Playwright reads the fixtures that are wanted off this pattern
    async ({}, use) => {
      const laboratory = await openLaboratory();
      await use(laboratory);
      await laboratory.remove();
    },
    { scope: "worker", timeout: 120_000 },
  ],
  // biome-ignore lint/correctness/noEmptyPattern: Playwright reads the fixtures that are wanted off this pattern
  watch: async ({}, use) => {
    const watch = new Watch();
    await use(watch);
    expect(watch.faults).toEqual([]);
  },
  expectAnswers: async ({ watch }, use) => {
    await use((...statuses) => {
      for (const status of statuses) watch.expected.add(status);
    });
  },
  as: async ({ browser, laboratory, watch }, use) => {
    const contexts: BrowserContext[] = [];
    await use(async (printedName, options = {}) => {
      const someone = await openBrowser(browser, laboratory, watch, options);
      contexts.push(someone.context);
      await signIn(someone.page, laboratory, printedName);
      return someone;
    });
    for (const context of contexts) await context.close();
  },
});

async function openBrowser(
  browser: Browser,
  laboratory: Laboratory,
  watch: Watch,
  options: { colorScheme?: "light" | "dark"; viewport?: { width: number; height: number } },
): Promise<Someone> {
  const context = await browser.newContext({ baseURL: laboratory.url, ...options });
  const page = await context.newPage();
  watch.follow(page);
  return { page, context };
}

export async function signIn(page: Page, laboratory: Laboratory, printedName: string): Promise<void> {
  const { email, password } = laboratory.person(printedName);
  await page.goto("/sign-in");
  await page.getByLabel("E-mail").fill(email);
  await page.getByLabel("Password").fill(password);
  await page.getByRole("button", { name: "Sign in" }).click();
  await expect(page).toHaveURL(/\/desk$/);
}

/** No finding by axe on what is shown now (WCAG 2.2 A and AA). */
export async function expectAccessible(page: Page): Promise<void> {
  const { violations } = await new AxeBuilder({ page })
    .withTags(["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa", "best-practice"])
    .analyze();
  expect(
    violations.map(({ id, help, nodes }) => ({
      id,
      help,
      where: nodes.slice(0, 3).map((node) => node.html.slice(0, 160)),
    })),
  ).toEqual([]);
}

export { expect };
