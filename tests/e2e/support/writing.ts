// What the tests of writing together look at: words on a page, how it stands with saving, and the page as the server has it.
import { expect, type Locator, type Page } from "@playwright/test";
import * as Y from "yjs";
import { derivePage, type PageHead } from "../../../editor/schema/index.ts";

/** The page as it is written on. */
export const written = (page: Page): Locator => page.getByRole("textbox", { name: "Page" });

/** What the counterfoil says of saving. */
export const saying = (page: Page, words: string | RegExp): Locator =>
  page.getByRole("complementary", { name: "Counterfoil" }).getByText(words, { exact: true }).first();

export const saved = (page: Page): Promise<void> => expect(saying(page, "Saved")).toBeVisible();

/** Puts the caret at the end of the page, on a line of its own. */
export async function goToEnd(page: Page): Promise<void> {
  await written(page).focus();
  await page.keyboard.press("ControlOrMeta+End");
  await page.keyboard.press("Enter");
}

/** Waits until what was shown has been drawn twice: for what must not happen, where there is nothing to wait for. */
export async function drawnTwice(page: Page): Promise<void> {
  await page.evaluate(
    () => new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(() => done(true)))),
  );
}

/** The lines of the page, without the carets of others (which go when they leave the page). */
export async function linesOf(page: Page): Promise<string[]> {
  const lines = await written(page).getByRole("paragraph").allInnerTexts();
  return lines.map((line) => line.trim()).filter((line) => line !== "");
}

/** How often a word stands on the page. */
export async function timesOn(page: Page, word: string): Promise<number> {
  return (await linesOf(page)).join("\n").split(word).length - 1;
}

/** The id of the revision that is open, from what the page has asked. */
export async function revisionOf(page: Page): Promise<string> {
  const found = await page.waitForFunction(() => {
    const asked = performance.getEntriesByType("resource").map((entry) => entry.name);
    return asked.map((name) => /\/api\/revisions\/([0-9a-f-]{36})\//.exec(name)?.[1]).find((id) => id !== undefined);
  });
  const id: unknown = await found.jsonValue();
  if (typeof id !== "string") throw new Error("No revision is open.");
  return id;
}

export type ServersPage = { text: string; head: PageHead; lines: string[]; values: Record<string, string> };

/** The page as the server would send it to somebody who opens it now. */
export async function serversPage(page: Page, revisionId: string): Promise<ServersPage> {
  const state = await page.evaluate(
    (id) =>
      new Promise<string>((done, failed) => {
        const events = new EventSource(`/api/revisions/${id}/events`);
        events.addEventListener("snapshot", (event) => {
          events.close();
          done(JSON.parse(event.data).state);
        });
        events.onerror = () => {
          events.close();
          failed(new Error("The server did not send the page."));
        };
      }),
    revisionId,
  );
  const doc = new Y.Doc({ gc: false });
  Y.applyUpdate(doc, Buffer.from(state, "base64"));
  const derived = derivePage(doc, (id) => id);
  const lines = derived.text.split("\n").map((line) => line.trim());
  return {
    text: derived.text,
    head: derived.head,
    lines: lines.filter((line) => line !== ""),
    values: Object.fromEntries(derived.typedValues.map(({ path, value }) => [path, value])),
  };
}

/** Writes down in the page each change of what the counterfoil says of saving; the answer reads what was said until then. */
export async function recordSaying(page: Page): Promise<() => Promise<string[]>> {
  const log = await page.getByRole("complementary", { name: "Counterfoil" }).evaluateHandle((element) => {
    const said: string[] = [];
    const read = () => {
      const words = /Saved|Saving|Offline|Signed out|Not taken/.exec(element.textContent)?.[0] ?? "";
      if (words !== said.at(-1)) said.push(words);
    };
    read();
    new MutationObserver(read).observe(element, { subtree: true, childList: true, characterData: true });
    return said;
  });
  return () => log.jsonValue();
}

/** The moment, by the page's own clock, at which a word stands on the page. Ask before it is typed. */
export function momentOf(page: Page, word: string): Promise<number> {
  return written(page).evaluate(
    (element, wanted) =>
      new Promise<number>((done) => {
        const look = () => {
          if (!element.textContent.includes(wanted)) return;
          observer.disconnect();
          done(performance.timeOrigin + performance.now());
        };
        const observer = new MutationObserver(look);
        observer.observe(element, { subtree: true, childList: true, characterData: true });
        look();
      }),
    word,
  );
}
