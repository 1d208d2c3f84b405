// @vitest-environment jsdom
import { afterEach, beforeEach, describe, expect, it, vi } from "vitest";
import * as Y from "yjs";
import { memoryOutbox, type Waiting } from "../../editor/outbox.ts";
import { openProvider, type PageLine, type Provider } from "../../editor/provider.ts";
import { wordsOfStatus } from "../../editor/save-status.ts";
import { FakeServer } from "./fake-server.ts";

const person = { id: "p1", name: "R. Okafor" };
let server: FakeServer;
const opened: Provider[] = [];

beforeEach(() => {
  vi.useFakeTimers();
  server = new FakeServer();
});
afterEach(() => {
  for (const provider of opened.splice(0)) provider.destroy();
  vi.useRealTimers();
});

function open(records = new Map<string, Waiting>(), who = person) {
  const lines: PageLine[] = [];
  const provider = openProvider({
    revisionId: "rev",
    person: who,
    outbox: memoryOutbox(records),
    onChange: (line) => lines.push(line),
    ask: server.ask,
    openEvents: server.openEvents,
  });
  opened.push(provider);
  return { provider, lines, records, now: () => lines.at(-1), words: () => wordsOf(lines.at(-1)) };
}
const wordsOf = (line: PageLine | undefined) =>
  line === undefined ? "" : wordsOfStatus({ ...line, unsavedFields: 0 });
const settle = (ms = 0) => vi.advanceTimersByTimeAsync(ms);
function type(provider: Provider, text: string): void {
  const paragraph = provider.doc.getXmlFragment("page").get(0);
  if (!(paragraph instanceof Y.XmlElement)) throw new Error("the page has not arrived");
  const first = paragraph.get(0);
  if (first instanceof Y.XmlText) first.insert(first.length, text);
  else paragraph.insert(0, [new Y.XmlText(text)]);
}

describe("the provider", () => {
  it("says Saved only once the server has said that the change is committed (COL-02)", async () => {
    const { provider, lines, words } = open();
    await settle();
    expect(words()).toBe("Saved");
    type(provider, "a");
    expect(words()).toBe("Saving");
    await settle(149);
    expect(server.posts).toHaveLength(0);
    await settle(50);
    expect(words()).toBe("Saved");
    expect(server.text).toContain("a");
    for (const line of lines.filter((each) => each.kind === "saved")) expect(line.waiting).toBe(0);
  });

  it("merges what comes within 150 ms into one post with an id of its own", async () => {
    const { provider } = open();
    await settle();
    for (const letter of "quick") type(provider, letter);
    await settle(200);
    type(provider, "!");
    await settle(200);
    expect(server.posts).toHaveLength(2);
    expect(new Set(server.posts.map((post) => post.id)).size).toBe(2);
    expect(server.text).toContain("quick!");
  });

  it("keeps changes on the device while there is no line, counts them, and sends each once when it returns (COL-02)", async () => {
    const { provider, records, words } = open();
    await settle();
    server.cut();
    for (const letter of "abc") {
      type(provider, letter);
      await settle(200);
    }
    expect(words()).toBe("Offline, 3 changes kept on this device");
    expect(records.size).toBe(3);
    await settle(10 * 60_000);
    expect(words()).toBe("Offline, 3 changes kept on this device");
    server.mode = "up";
    await settle(20_000);
    expect(words()).toBe("Saved");
    expect(records.size).toBe(0);
    expect(server.accepted.size).toBe(3);
    expect(server.text).toContain("abc");
  });

  it("sends again what was committed without being heard of, and nothing doubles", async () => {
    const { provider, words } = open();
    await settle();
    server.mode = "deaf";
    type(provider, "once");
    await settle(200);
    expect(words()).toMatch(/^Offline, 1 change /);
    server.mode = "up";
    await settle(20_000);
    expect(words()).toBe("Saved");
    expect(server.posts.length).toBeGreaterThan(1);
    expect(server.accepted.size).toBe(1);
    expect(server.text.match(/once/g)).toHaveLength(1);
  });

  it("keeps the order, so that no change arrives before one that it builds on", async () => {
    const { provider, words } = open();
    await settle();
    server.mode = "busy";
    for (const letter of "order") {
      type(provider, letter);
      await settle(200);
    }
    server.mode = "up";
    await settle(20_000);
    expect(words()).toBe("Saved");
    expect(server.text).toContain("order");
  });

  it("shows what others type, and keeps both (COL-01)", async () => {
    const one = open();
    const other = open(new Map(), { id: "p2", name: "L. Brandt" });
    await settle();
    type(one.provider, "left ");
    await settle(200);
    type(other.provider, "right");
    await settle(200);
    const text = one.provider.doc.getXmlFragment("page").toString();
    expect(text).toBe(other.provider.doc.getXmlFragment("page").toString());
    expect(text).toBe(server.text);
    expect(text).toContain("left");
    expect(text).toContain("right");
    expect(server.accepted.size).toBe(2);
  });

  it("hands what a closed tab left behind to the next one of the same person, once", async () => {
    const records = new Map<string, Waiting>();
    const first = open(records);
    await settle();
    server.cut();
    type(first.provider, "left behind");
    await settle(200);
    first.provider.destroy();
    opened.splice(0);
    expect(records.size).toBe(1);
    server.mode = "up";
    const second = open(records);
    await settle(500);
    expect(second.words()).toBe("Saved");
    expect(second.provider.doc.getXmlFragment("page").toString()).toContain("left behind");
    expect(server.text.match(/left behind/g)).toHaveLength(1);
    expect(records.size).toBe(0);
  });

  it("takes a fresh client id for each load", () => {
    expect(open().provider.doc.clientID).not.toBe(open().provider.doc.clientID);
  });

  it("keeps typing when the session has ended, and goes on by itself after sign-in (ADM-01)", async () => {
    const { provider, records, words } = open();
    await settle();
    server.mode = "signed-out";
    type(provider, "kept");
    await settle(200);
    expect(words()).toBe("Signed out, 1 change kept on this device");
    expect(records.size).toBe(1);
    server.mode = "up";
    await settle(6_000);
    expect(words()).toBe("Saved");
    expect(server.text).toContain("kept");
  });

  it("does not send one person's words in the session of another who signed in on the device (COL-07)", async () => {
    const { provider, words } = open();
    await settle();
    server.mode = "signed-out";
    type(provider, "mine");
    await settle(200);
    const before = server.posts.length;
    server.mode = "up";
    server.sessionOf = "p2";
    await settle(60_000);
    expect(server.posts.length).toBe(before);
    expect(words()).toBe("Signed out, 1 change kept on this device");
    server.sessionOf = "p1";
    await settle(6_000);
    expect(words()).toBe("Saved");
    for (const post of server.posts) expect(post.person).toBe("p1");
  });

  it("is refused after a signature: nothing is merged, the server keeps it for its writer (COL-04)", async () => {
    const { provider, records, now } = open();
    await settle();
    server.mode = "signed";
    type(provider, "too late");
    await settle(200);
    type(provider, " and more");
    await settle(200);
    expect(now()).toMatchObject({ kind: "refused", refusedCode: "revision.not-draft", waiting: 0 });
    expect(server.posts).toHaveLength(2);
    expect(server.text).not.toContain("too late");
    expect(records.size).toBe(0);
  });

  it("keeps a change that the server will not take, and what comes after it, until its writer lets it go", async () => {
    const { provider, records, now } = open();
    await settle();
    server.mode = "invalid";
    type(provider, "strange");
    await settle(200);
    type(provider, " more");
    await settle(60_000);
    expect(now()).toMatchObject({ kind: "refused", refusedCode: "page.invalid", waiting: 2 });
    expect(server.posts).toHaveLength(1);
    expect(records.size).toBe(2);
    await provider.discardRefused();
    expect(records.size).toBe(0);
    expect(now()).toMatchObject({ kind: "saved", waiting: 0 });
  });

  it("tells when the device keeps nothing, and still saves", async () => {
    const lines: PageLine[] = [];
    const provider = openProvider({
      revisionId: "rev",
      person,
      outbox: null,
      onChange: (line) => lines.push(line),
      ask: server.ask,
      openEvents: server.openEvents,
    });
    opened.push(provider);
    await settle();
    server.cut();
    type(provider, "x");
    await settle(200);
    expect(lines.at(-1)?.detail).toMatch(/does not keep/);
    server.mode = "up";
    await settle(20_000);
    expect(lines.at(-1)).toMatchObject({ kind: "saved", waiting: 0 });
    expect(server.text).toContain("x");
  });

  it("hears that the revision was signed by somebody else", async () => {
    const { now } = open();
    await settle();
    server.streams.at(-1)?.hear("state", { state: "signed" });
    expect(now()?.state).toBe("signed");
  });

  it("tells others who is here, and says goodbye (COL-11)", async () => {
    const { provider } = open();
    await settle(400);
    const before = server.presence.length;
    expect(before).toBeGreaterThan(0);
    provider.destroy();
    await settle();
    expect(server.presence.length).toBe(before + 1);
  });
});

describe("random cuts", () => {
  it("lose and double nothing in 30 runs (COL-01, COL-02)", async () => {
    for (let run = 0; run < 30; run++) {
      let seed = run * 7919 + 17;
      const random = (below: number) => {
        seed = (seed * 1103515245 + 12345) % 2147483648;
        return seed % below;
      };
      server = new FakeServer();
      const records = [new Map<string, Waiting>(), new Map<string, Waiting>()];
      const tabs = [open(records[0]), open(records[1], { id: "p2", name: "L. Brandt" })];
      await settle();
      const typed: string[] = [];
      for (let step = 0; step < 12; step++) {
        const who = random(2);
        const word = `w${run}x${step}y`;
        const tab = tabs[who];
        if (tab !== undefined && tab.now()?.isLoaded === true) {
          type(tab.provider, word);
          typed.push(word);
        }
        await settle(random(400));
        const event = random(6);
        if (event === 0) server.cut();
        if (event === 1) server.mode = "deaf";
        if (event === 2) server.mode = "busy";
        if (event === 3) server.mode = "up";
        if (event === 4 && tab !== undefined) {
          tab.provider.destroy();
          tabs[who] = open(records[who], who === 0 ? person : { id: "p2", name: "L. Brandt" });
          await settle();
        }
      }
      server.mode = "up";
      await settle(60_000);
      for (const word of typed) {
        expect({ run, word, times: server.text.split(word).length - 1 }).toEqual({ run, word, times: 1 });
      }
      const texts = tabs.map((tab) => tab.provider.doc.getXmlFragment("page").toString());
      expect(texts[0]).toBe(server.text);
      expect(texts[1]).toBe(server.text);
      for (const tab of tabs) expect(tab.now()).toMatchObject({ kind: "saved", waiting: 0 });
      for (const provider of opened.splice(0)) provider.destroy();
    }
  });
});
