// Entries that earlier versions of the program signed, kept for ever: today's code has to find each of them whole (KEE-08).
import { createHash } from "node:crypto";
import { readdirSync, readFileSync } from "node:fs";
import { calculateJwkThumbprint, compactVerify, importJWK } from "jose";
import { describe, expect, it } from "vitest";
import { z } from "zod";
import { sha256Hex, verifyEntryChain } from "../../db/chain.ts";
import { MEANINGS, roleOf } from "../../db/manifest.ts";
import { parseContent } from "../../db/signed-content.ts";
import { canonicalText } from "../../editor/schema/index.ts";

const FOLDER = new URL("../fixtures/signed-store/", import.meta.url);
const head = z.strictObject({ seq: z.number(), hash: z.string() });
const manifestShape = z.strictObject({
  format: z.literal("counterleaf-signature"),
  version: z.literal(1),
  kind: z.enum(["author", "witness"]),
  entry: z.strictObject({ id: z.string(), label: z.string() }),
  revision: z.strictObject({ id: z.string(), number: z.number() }),
  content: z.strictObject({ sha256: z.string(), version: z.literal(1) }),
  previousContentSha256: z.string().nullable(),
  signer: z.strictObject({ id: z.string(), printedName: z.string(), role: z.string() }),
  meaning: z.string(),
  at: z.iso.datetime(),
  audit: z.strictObject({ store: head, entry: head }),
  witnessed: z
    .strictObject({
      authorSignatureSha256: z.string(),
      finding: z.strictObject({
        id: z.string(),
        blocks: z.number(),
        reproduced: z.number(),
        files: z.number(),
        fitting: z.number(),
      }),
      acknowledgement: z.string().nullable(),
    })
    .optional(),
});
const sampleShape = z.object({
  about: z.string(),
  entry: z.object({ id: z.string(), label: z.string() }),
  keys: z.array(z.object({ kid: z.string(), publicJwk: z.string() })),
  contents: z.array(
    z.object({
      revisionId: z.string(),
      number: z.number(),
      version: z.number(),
      sha256: z.string(),
      text: z.string(),
    }),
  ),
  signatures: z.array(
    z.object({
      revisionId: z.string(),
      id: z.string(),
      kind: z.enum(["author", "witness"]),
      personId: z.string(),
      printedName: z.string(),
      meaning: z.string(),
      at: z.string(),
      contentSha256: z.string(),
      manifest: z.string(),
      jws: z.string(),
      kid: z.string(),
    }),
  ),
  files: z.array(z.object({ id: z.string(), name: z.string(), base64: z.string() })),
  events: z.array(
    z.object({
      seq: z.number(),
      at: z.string(),
      personId: z.string().nullable(),
      printedName: z.string().nullable(),
      action: z.string(),
      objectKind: z.string(),
      objectId: z.string(),
      entryId: z.string().nullable(),
      entrySeq: z.number().nullable(),
      detail: z.string(),
      previousHash: z.string(),
      hash: z.string(),
      entryPreviousHash: z.string().nullable(),
      entryHash: z.string().nullable(),
    }),
  ),
});
type Sample = z.infer<typeof sampleShape>;

const names = readdirSync(FOLDER).filter((name) => name.endsWith(".json"));
const readSample = (name: string): Sample => sampleShape.parse(JSON.parse(readFileSync(new URL(name, FOLDER), "utf8")));

/** Everything that does not fit, in words; nothing when the sample is whole. */
async function misfits(sample: Sample): Promise<string[]> {
  const found: string[] = [];
  const demand = (isSo: boolean, what: string) => {
    if (!isSo) found.push(what);
  };
  for (const { number, text, sha256 } of sample.contents) {
    demand(sha256Hex(text) === sha256, `content of revision ${number}: hash`);
    demand(canonicalText(JSON.parse(text)) === text, `content of revision ${number}: canonical text`);
    const content = parseContent(text);
    demand(
      content.entry.label === sample.entry.label && content.revision.number === number,
      `revision ${number}: name`,
    );
    const before = sample.contents.filter((each) => each.number < number).at(-1);
    demand(
      (content.previous?.sha256 ?? null) === (before?.sha256 ?? null),
      `content of revision ${number}: previous revision`,
    );
    for (const attached of content.attachments) {
      const file = sample.files.find(({ id }) => id === attached.id);
      const hash = createHash("sha256").update(Buffer.from(file?.base64 ?? "", "base64"));
      demand(hash.digest("hex") === attached.sha256, `file ${attached.name}`);
    }
  }
  for (const signature of sample.signatures) found.push(...(await signatureMisfits(sample, signature)));
  const pinned = sample.signatures.map(({ manifest }) => manifestShape.parse(JSON.parse(manifest)).audit.entry);
  const chain = verifyEntryChain(sample.events, pinned);
  demand(chain.ok && chain.events === sample.events.length, "chain of the entry");
  return found;
}

async function signatureMisfits(sample: Sample, signature: Sample["signatures"][number]): Promise<string[]> {
  const { kind, contentSha256, manifest: text, jws, kid } = signature;
  const on = sample.contents.find((content) => content.revisionId === signature.revisionId);
  const key = sample.keys.find((each) => each.kid === kid);
  if (on === undefined || key === undefined) return [`${kind}: content or key`];
  const found: string[] = [];
  const demand = (isSo: boolean, what: string) => {
    if (!isSo) found.push(`${kind} of revision ${on.number}: ${what}`);
  };
  const jwk = JSON.parse(key.publicJwk);
  demand((await calculateJwkThumbprint(jwk)) === kid, "key id");
  try {
    const { payload, protectedHeader } = await compactVerify(jws, await importJWK(jwk, "EdDSA"));
    demand(new TextDecoder().decode(payload) === text, "manifest is not what was sealed");
    demand(protectedHeader.alg === "EdDSA" && protectedHeader.kid === kid, "header");
  } catch {
    demand(false, "seal");
  }
  const manifest = manifestShape.parse(JSON.parse(text));
  demand(canonicalText(manifest) === text, "canonical text of the manifest");
  demand(
    manifest.kind === kind && manifest.meaning === MEANINGS[kind] && signature.meaning === MEANINGS[kind],
    "meaning",
  );
  demand(manifest.content.sha256 === on.sha256 && contentSha256 === on.sha256, "content");
  demand(manifest.revision.id === on.revisionId && manifest.revision.number === on.number, "revision");
  demand(manifest.entry.id === sample.entry.id && manifest.entry.label === sample.entry.label, "entry");
  demand(
    manifest.signer.id === signature.personId &&
      manifest.signer.printedName === signature.printedName &&
      manifest.signer.role === roleOf(kind),
    "signer",
  );
  demand(manifest.at === signature.at, "time");
  demand(manifest.previousContentSha256 === (parseContent(on.text).previous?.sha256 ?? null), "previous content");
  const author = sample.signatures.find((each) => each.kind === "author" && each.revisionId === on.revisionId);
  demand(
    kind === "author" || manifest.witnessed?.authorSignatureSha256 === sha256Hex(author?.jws ?? ""),
    "the author's signature",
  );
  const action = kind === "author" ? "revision.signed" : "revision.countersigned";
  const event = sample.events.find((each) => each.action === action && each.objectId === on.revisionId);
  const detail = z
    .object({ contentSha256: z.string(), signature: z.string() })
    .safeParse(JSON.parse(event?.detail ?? "{}"));
  demand(detail.data?.contentSha256 === on.sha256 && detail.data.signature === signature.id, "event");
  return found;
}

describe.each(names)("what was signed and is kept as %s", (name) => {
  it("is verified by today's code: content, files, seals, manifests and the entry's events (KEE-08)", async () => {
    const sample = readSample(name);
    expect(sample.about).toMatch(/^Invented/);
    expect(sample.contents.length).toBeGreaterThan(1);
    expect(sample.signatures.map(({ kind }) => kind)).toContain("witness");
    expect(sample.files).not.toEqual([]);
    expect(await misfits(sample)).toEqual([]);
  });

  const tampered: [string, (sample: Sample) => unknown, RegExp][] = [
    ["a digit of the content", ({ contents: [first] }) => first && change(first, "text", "0.0600", "0.0610"), /hash/],
    ["the content with its hash", ({ contents: [first] }) => first && rehash(first), /author of revision 1: content/],
    ["a byte of the file", ({ files: [file] }) => file && change(file, "base64", "b", "c"), /file reading/],
    [
      "a name on a signature",
      ({ signatures: [one] }) => one && change(one, "printedName", "Okafor", "Other"),
      /signer/,
    ],
    ["a manifest", ({ signatures: [one] }) => one && change(one, "manifest", "Okafor", "Other"), /not what was sealed/],
    ["a seal", ({ signatures: [one, two] }) => one && two && Object.assign(one, { jws: two.jws }), /sealed/],
    ["the key", ({ keys: [key] }) => key && change(key, "publicJwk", '"x":"x', '"x":"y'), /key id/],
    ["an event", ({ events: [, second] }) => second && change(second, "printedName", "R.", "Q."), /chain of the entry/],
    ["the tail", ({ events }) => events.splice(-3), /chain of the entry/],
  ];
  it.each(tampered)("is found out when %s is changed (SGN-04, REC-04)", async (_, tamper, expected) => {
    const sample = readSample(name);
    tamper(sample);
    expect((await misfits(sample)).join("\n")).toMatch(expected);
  });
});

it("has at least one sample", () => {
  expect(names).not.toEqual([]);
});

function change<K extends string>(row: Record<K, string | null>, field: K, was: string, is: string): void {
  const before = row[field] ?? "";
  row[field] = before.replace(was, is);
  expect(row[field]).not.toBe(before);
}

function rehash(content: Sample["contents"][number]): void {
  change(content, "text", "citrate bath", "citrate path");
  content.sha256 = sha256Hex(content.text);
}
