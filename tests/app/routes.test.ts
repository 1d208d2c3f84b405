import { compactVerify, importJWK } from "jose";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openRoute, route } from "../../app/_server/answer.ts";
import { deriveChanged } from "../../app/_server/jobs.ts";
import { contentPolicy } from "../../app/_server/security-headers.ts";
import { signingSeal } from "../../app/_server/signing-key.ts";
import { sign } from "../../app/_server/vouching.ts";
import { GET as compounds } from "../../app/api/compounds/route.ts";
import { GET as health } from "../../app/api/health/route.ts";
import { GET as keys } from "../../app/api/keys/route.ts";
import { GET as kept } from "../../app/api/results/kept/route.ts";
import { POST as solve } from "../../app/api/results/route.ts";
import { GET as csv } from "../../app/api/search/csv/route.ts";
import { listEvents, recordRefusal } from "../../db/audit.ts";
import { newId } from "../../db/ids.ts";
import { appendUpdate, pageState } from "../../db/updates.ts";
import { ask, type House, openHouse, PASSWORD, type Visitor } from "./house.ts";
import { addParagraph, openPage } from "./page.ts";

let house: House;
let author: Visitor;
let outsider: Visitor;
let draft: { id: string; revisionId: string; label: string };

beforeAll(async () => {
  house = await openHouse();
  author = await house.visitor("R. Okafor", ["researcher"], true);
  outsider = await house.visitor("K. Amsel", ["researcher"], false);
  draft = await house.draft(author);
});
afterAll(() => house.close());

const row = (compound: string, constants: string, amount: string) => ({
  id: "row1",
  compound,
  constants,
  amount,
  unit: "mol/L",
  massFraction: "",
  density: "",
  lot: "",
});
async function aceticAcid(): Promise<{ id: string; constants: string[] }> {
  const found = await ask(compounds, "/api/compounds?q=acetic%20acid&limit=5", { cookie: author.cookie });
  const [acid] = (await found.json()).items.filter((item: { id: string }) => item.id.startsWith("reagent:"));
  return acid;
}
const block = (rows: object[]) => ({
  id: "block1",
  title: "Bath",
  volume: "1.000",
  volumeUnit: "L",
  temperatureC: "25",
  activity: "davies",
  measuredPH: "",
  show: "",
  rows,
});

describe("compounds", () => {
  it("are found by name, synonym, formula and CAS RN, and by their ids", async () => {
    const find = async (q: string) =>
      (await ask(compounds, `/api/compounds?q=${encodeURIComponent(q)}&limit=50`, { cookie: author.cookie })).json();
    for (const q of ["citric acid", "C6H8O7", "77-92-9"]) {
      const { items } = await find(q);
      expect(items.map((item: { name: string }) => item.name.toLowerCase()).join(), q).toContain("citric acid");
    }
    const { items } = await find("citric acid");
    const again = await ask(compounds, `/api/compounds?ids=${items[0].id}`, { cookie: author.cookie });
    expect((await again.json()).items).toMatchObject([{ id: items[0].id, name: items[0].name }]);
  });

  it.each(["q=a&limit=0", "q=a&limit=1e9", "q=a&q=b", "ids=../../x", "", "q=a&other=1", `q=${"x".repeat(201)}`])(
    "refuse ?%s at its field",
    async (query) => {
      const answer = await ask(compounds, `/api/compounds?${query}`, { cookie: author.cookie });
      expect(answer.status).toBe(400);
      expect(await answer.json()).toMatchObject({ code: "request.invalid", fields: expect.any(Object) });
    },
  );
});

describe("results", () => {
  it("are solved, stored under their key, and answered from there with sweeps when asked (CAL-04)", async () => {
    const acid = await aceticAcid();
    const asked = {
      revisionId: draft.revisionId,
      block: block([row(acid.id, acid.constants.join(" "), "0.100")]),
      sweeps: true,
    };
    const first = await ask(solve, "/api/results", { cookie: author.cookie, json: asked });
    const answer = await first.json();
    expect(first.status, JSON.stringify(answer).slice(0, 500)).toBe(200);
    expect(answer.outcome.ok, JSON.stringify(answer.outcome).slice(0, 500)).toBe(true);
    expect(answer.key).toMatch(/^[0-9a-f]{64}$/);
    // 0.1 mol/L acetic acid: pH 2.88, handbook value, from memory; Davies moves the second decimal by one or two.
    expect(answer.outcome.value.pH).toBeGreaterThan(2.8);
    expect(answer.outcome.value.pH).toBeLessThan(2.95);
    expect(answer.sweeps.coarse.pH.length).toBeGreaterThan(100);
    const second = await (
      await ask(solve, "/api/results", { cookie: author.cookie, json: { ...asked, sweeps: false } })
    ).json();
    expect(second).toMatchObject({ key: answer.key, outcome: answer.outcome, sweeps: null });
    const solves = await ask(kept, `/api/results/kept?revision=${draft.revisionId}&block=block1`, {
      cookie: author.cookie,
    });
    expect((await solves.json()).solves).toMatchObject([{ key: answer.key, pH: answer.outcome.value.pH }]);
  });

  it("answer bad input with the field and the reason, not with a number (CAL-16)", async () => {
    for (const amount of ["words", "-1", "1e400", ""]) {
      const acid = await aceticAcid();
      const json = {
        revisionId: draft.revisionId,
        block: block([row(acid.id, acid.constants.join(" "), amount)]),
        sweeps: true,
      };
      const answer = await (await ask(solve, "/api/results", { cookie: author.cookie, json })).json();
      expect(answer.outcome.ok, amount).toBe(false);
      expect(answer.outcome.refusals[0], amount).toMatchObject({ field: "rows.r1.amount", text: expect.any(String) });
      expect(answer.sweeps).toBeNull();
    }
    const huge = { revisionId: draft.revisionId, block: { text: "x".repeat(200_000) }, sweeps: false };
    expect((await ask(solve, "/api/results", { cookie: author.cookie, json: huge })).status).toBe(413);
  });
});

describe("public keys", () => {
  it("are open, verify what the server seals, and hold nothing private", async () => {
    const seal = await signingSeal();
    const { jws, kid } = await seal("{}");
    const answer = await ask(keys, "/api/keys");
    const text = await answer.text();
    const jwk = JSON.parse(text).keys.find((key: { kid: string }) => key.kid === kid);
    await compactVerify(jws, await importJWK(jwk, "EdDSA"));
    expect(text).not.toMatch(/"d":|sealed/);
    expect(answer.headers.get("content-type")).toBe("application/jwk-set+json");
    expect((await seal("{}")).kid).toBe(kid);
  });
});

describe("search as CSV", () => {
  it("holds what its reader may read, no formula, and is an event (FND-04)", async () => {
    const { state } = await pageState(house.store.db, author.actor, draft.revisionId);
    const bytes = openPage(state).change((doc) => {
      addParagraph(doc, "wortspiel of this test");
      doc.getMap("head").set("title", '=HYPERLINK("x")');
    });
    await appendUpdate(house.store.db, author.actor, { revisionId: draft.revisionId, updateId: newId(), bytes });
    expect(await deriveChanged()).toBeGreaterThan(0);
    const path = "/api/search/csv?words=wortspiel";
    const mine = await (await ask(csv, path, { cookie: author.cookie })).text();
    expect(mine).toContain(draft.label);
    expect(mine).toContain("'=HYPERLINK");
    const theirs = await (await ask(csv, path, { cookie: outsider.cookie })).text();
    expect(theirs).not.toContain(draft.label);
    expect(theirs.trim().split("\r\n")).toHaveLength(1);
    const root = await house.visitor("T. Lindqvist", ["administrator"], false);
    const { events } = await listEvents(house.store.db, root.actor, { filters: { action: "search.downloaded" } });
    expect(events.map((event) => event.printedName)).toEqual(expect.arrayContaining(["R. Okafor", "K. Amsel"]));
  });

  it.each(["state=open", "pHFrom=3", "from=yesterday", "words=a&words=b", "compound=x"])(
    "refuses ?%s",
    async (query) => {
      expect((await ask(csv, `/api/search/csv?${query}`, { cookie: author.cookie })).status).toBe(400);
    },
  );
});

describe("signing", () => {
  it("asks the password each time, and no password of whoever may not sign (SGN-02)", async () => {
    const form = { revisionId: draft.revisionId, shownHash: "0".repeat(64), password: "not the password" };
    await expect(sign(house.store.db, author.actor, form)).rejects.toThrow("signing.wrong-password");
    await expect(sign(house.store.db, author.actor, { ...form, password: PASSWORD })).rejects.toThrow(/^revision[.]/);
    await expect(sign(house.store.db, outsider.actor, { ...form, password: PASSWORD })).rejects.toThrow(
      "entry.not-found",
    );
  });
});

describe("what goes wrong", () => {
  it("in the program is a number for the reader, without a stack, a query or a path (ADM-13)", async () => {
    const broken = openRoute(async () => {
      throw new Error("Failed query: select secret from table at /srv/app/db/x.ts:1");
    });
    const answer = await ask(broken, "/api/broken");
    const text = await answer.text();
    expect(answer.status).toBe(500);
    expect(answer.headers.get("content-type")).toBe("application/problem+json");
    expect(text).not.toMatch(/select|stack|\.ts|srv|Error/);
    expect(JSON.parse(text)).toMatchObject({ code: "fault", requestId: answer.headers.get("x-request-id") });
  });

  it("in the store under a request is no less silent", async () => {
    const broken = route(async (_actor, { db }) =>
      recordRefusal(db, null, { code: "request.invalid", request: "x\0y" }),
    );
    const answer = await ask(broken, "/api/broken", { cookie: author.cookie });
    expect(answer.status).toBe(500);
    expect(await answer.text()).not.toMatch(/insert|events|\\u0000/i);
  });

  it("as a refusal of rights is an event with the code and the address", async () => {
    await ask(kept, `/api/results/kept?revision=${draft.revisionId}&block=b`, { cookie: outsider.cookie });
    const root = await house.visitor("T. Lindqvist", ["administrator"], false);
    const { events } = await listEvents(house.store.db, root.actor, { filters: { action: "request.refused" } });
    expect(events.find((event) => event.personId === outsider.actor.id)?.detail).toMatchObject({
      code: "entry.not-found",
      request: "GET /api/results/kept",
    });
  });

  it("while the process ends is said, and tried again by itself", async () => {
    const { processState } = await import("../../app/_server/process-state.ts");
    processState().closing = true;
    const answer = await ask(health, "/api/health");
    processState().closing = false;
    expect([answer.status, answer.headers.get("retry-after")]).toEqual([503, "2"]);
    expect((await ask(health, "/api/health")).status).toBe(200);
  });
});

describe("the page's policy (ADM-06)", () => {
  const policy = contentPolicy({ nonce: "abc", https: true, development: false });
  it("runs scripts by nonce only, and frames, embeds and rebases nothing", () => {
    for (const part of [
      "default-src 'self'",
      "script-src 'nonce-abc' 'strict-dynamic'",
      "object-src 'none'",
      "base-uri 'none'",
      "frame-ancestors 'none'",
      "form-action 'self'",
      "connect-src 'self'",
    ]) {
      expect(policy.split("; ")).toContain(part);
    }
    expect(policy).not.toContain("unsafe-eval");
    expect(policy.match(/'unsafe-inline'/g)).toHaveLength(1);
    expect(policy).toContain("style-src-attr 'unsafe-inline'");
  });
});
