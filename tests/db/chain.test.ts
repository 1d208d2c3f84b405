import { createHash } from "node:crypto";
import { describe, expect, it } from "vitest";
import {
  type ChainedEvent,
  canonicalDetail,
  type EventCore,
  entryEventHash,
  eventHash,
  GENESIS,
  type Head,
  sha256Hex,
  verifyChain,
  verifyEntryChain,
} from "../../db/chain.ts";

describe("canonical text", () => {
  it("orders keys by their code units and writes numbers as ECMAScript does (RFC 8785, sections 3.2.2 and 3.2.3)", () => {
    expect(
      canonicalDetail(
        JSON.parse('{"b":1e21,"a":[333333333.33333329,1E30,4.50,2e-3,0.000000000000000000000000001],"€":null}'),
      ),
    ).toBe('{"a":[333333333.3333333,1e+30,4.5,0.002,1e-27],"b":1e+21,"€":null}');
  });
  it("leaves out keys without a value and refuses what is no plain value", () => {
    expect(canonicalDetail({ a: undefined, b: "0.100" })).toBe('{"b":"0.100"}');
    expect(() => canonicalDetail(undefined)).toThrow();
  });
});

describe("hashes", () => {
  it("are SHA-256 in hex (FIPS 180-4, example “abc”)", () => {
    expect(sha256Hex("abc")).toBe("ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
  });
  it("can be computed by hand from the fields of one event", () => {
    const event = core(1, "entry-1", 1);
    const text = `{"chain":"entry","event":${canonicalDetail(event)},"format":"counterleaf-event-1","previousHash":"${GENESIS}"}`;
    expect(entryEventHash(GENESIS, event)).toBe(createHash("sha256").update(text).digest("hex"));
  });
});

describe("a chain", () => {
  it("fits from its first event on, and so does each entry's own (REC-04)", () => {
    const events = chain();
    expect(verifyChain(events, [headOf(events)])).toEqual({ ok: true, events: 9, head: events.at(-1)?.hash });
    for (const id of ["entry-1", "entry-2"]) {
      const own = events.filter((event) => event.entryId === id);
      expect(verifyEntryChain(own)).toEqual({ ok: true, events: 3, head: own.at(-1)?.entryHash });
    }
  });

  it.each([
    ["at", "2026-12-01T09:00:00.000Z"],
    ["personId", "person-2"],
    ["printedName", "L. Brandt"],
    ["action", "value.cleared"],
    ["objectKind", "other"],
    ["objectId", "other"],
    ["detail", '{"new":"0.101"}'],
  ] as const)("names the first event whose %s was altered (REC-04)", (field, value) => {
    const events = chain();
    const altered = events.map((event) => (event.seq === 5 ? { ...event, [field]: value } : event));
    expect(verifyChain(altered)).toMatchObject({ ok: false, firstMisfit: { seq: 5 } });
    const own = altered.filter((event) => event.entryId === altered[4]?.entryId);
    expect(verifyEntryChain(own)).toMatchObject({ ok: false, firstMisfit: { seq: 5, kind: "entry-hash" } });
  });

  it("names the place of a removed, an inserted and a swapped event (REC-04)", () => {
    const events = chain();
    expect(verifyChain(events.filter(({ seq }) => seq !== 4))).toEqual({
      ok: false,
      firstMisfit: { seq: 4, kind: "number" },
    });
    const [first, second, third] = events;
    if (first === undefined || second === undefined || third === undefined) throw new Error("The chain is too short.");
    expect(verifyChain([first, second, { ...second, seq: 3 }, ...events.slice(2)])).toMatchObject({
      ok: false,
      firstMisfit: { seq: 3 },
    });
    expect(verifyChain([first, third, second, ...events.slice(3)])).toEqual({
      ok: false,
      firstMisfit: { seq: 2, kind: "number" },
    });
    // Swapped with their numbers put right as well.
    const swapped = [first, { ...third, seq: 2 }, { ...second, seq: 3 }, ...events.slice(3)];
    expect(verifyChain(swapped)).toMatchObject({ ok: false, firstMisfit: { seq: 2 } });
  });

  it("shows a cut tail by a head that was pinned earlier, in the store and in an entry (REC-04)", () => {
    const events = chain();
    const cut = events.slice(0, 7);
    expect(verifyChain(cut)).toMatchObject({ ok: true });
    expect(verifyChain(cut, [headOf(events)])).toEqual({ ok: false, firstMisfit: { seq: 8, kind: "tail" } });
    const own = events.filter(({ entryId }) => entryId === "entry-1");
    const last = own.at(-1);
    if (last?.entryHash === null || last?.entryHash === undefined) throw new Error("The entry has no event.");
    expect(verifyEntryChain(own.slice(0, 2), [{ seq: 3, hash: last.entryHash }])).toEqual({
      ok: false,
      firstMisfit: { seq: 3, kind: "tail" },
    });
  });

  it("shows a chain that was computed anew from some event on, by a head that was pinned earlier (REC-04)", () => {
    const forged = chain("9.999");
    expect(verifyChain(forged)).toMatchObject({ ok: true });
    expect(verifyChain(forged, [headOf(chain())])).toMatchObject({ ok: false, firstMisfit: { kind: "hash" } });
  });

  it("finds an event that was taken out of its entry's chain", () => {
    const events = chain().map((event) =>
      event.seq === 5 ? { ...event, entrySeq: null, entryPreviousHash: null, entryHash: null } : event,
    );
    expect(verifyChain(events)).toMatchObject({ ok: false, firstMisfit: { seq: 5, kind: "entry-number" } });
  });
});

function chain(value = "0.100"): ChainedEvent[] {
  const events: ChainedEvent[] = [];
  let hash = GENESIS;
  const heads = new Map<string, Head>();
  for (let seq = 1; seq <= 9; seq++) {
    const entryId = seq % 3 === 0 ? null : `entry-${seq % 3}`;
    const before = entryId === null ? null : (heads.get(entryId) ?? { seq: 0, hash: GENESIS });
    const event = { ...core(seq, entryId, before === null ? null : before.seq + 1), detail: `{"new":"${value}"}` };
    const entryHash = before === null ? null : entryEventHash(before.hash, event);
    const previousHash = hash;
    hash = eventHash(hash, event, entryHash);
    if (entryId !== null && event.entrySeq !== null && entryHash !== null)
      heads.set(entryId, { seq: event.entrySeq, hash: entryHash });
    events.push({ ...event, previousHash, hash, entryPreviousHash: before?.hash ?? null, entryHash });
  }
  return events;
}

function core(seq: number, entryId: string | null, entrySeq: number | null): EventCore {
  return {
    seq,
    at: "2026-12-01T08:00:00.000Z",
    personId: "person-1",
    printedName: "R. Okafor",
    action: "value.changed",
    objectKind: "revision",
    objectId: "revision-1",
    entryId,
    entrySeq,
    detail: "{}",
  };
}

function headOf(events: ChainedEvent[]): Head {
  const last = events.at(-1);
  if (last === undefined) throw new Error("The chain is empty.");
  return { seq: last.seq, hash: last.hash };
}
