// What the program may not say of itself, of a record or of a mixture (SAF-04): the texts of all rooms are read, and what is written
// for people. The list follows from the claims that the product must not make; a sentence may name one to deny it.
import { existsSync, readdirSync, readFileSync } from "node:fs";
import ts from "typescript";
import { describe, expect, it } from "vitest";

const ROOMS = ["app", "components", "editor", "chem", "db", "public"];
const PAPERS = ["README.md"];

/** Never, not even to deny it by halves. */
const NEVER = [
  /non-?hazardous/i,
  /\bno (known )?hazards?\b(?! data on file)/i,
  /food-?safe/i,
  /(court|patent|tamper)-?proof/i,
  /\baccurate to\b/i,
  /\ball hazards\b/i,
  /lossless backup/i,
];
/** Only to say that it is not so. */
const ONLY_DENIED = [
  /\bharmless\b/i,
  /\bsafe(ly)?\b/i,
  /\bsafety\b(?! data sheet| regulations| rules| note| caution|, |’s)/i,
  /\bcomplian(t|ce)\b|\bcomplies\b/i,
  /\bvalidated\b|\bvalidation\b/i,
  /\b(certified|certification)\b/i,
  /\baccredited\b|\bISO 17025\b/i,
  /\bapproved by\b/i,
  /\b(legally binding|non-?repudia\w+|eIDAS|qualified (electronic )?signature)/i,
  /\b(cannot be (altered|forged|changed by anyone))/i,
  /\b(Part 11|Annex 11|GLP|GMP)\b/,
  /\bguarantee[sd]?\b/i,
  /\btrusted time\b/i,
  /\bproves\b/i,
  /\bfor ever\b/i,
];
const DENIES = /\b(no|not|never|neither|nor|nothing|nobody|cannot|without|claims? none)\b|n’t\b|n't\b/i;

type Text = { where: string; words: string };

/** String literals, templates' words and JSX text: comments, names and imports are nobody's reading. */
function textsOfSource(path: string): Text[] {
  const source = ts.createSourceFile(path, readFileSync(path, "utf8"), ts.ScriptTarget.Latest, true);
  const found: Text[] = [];
  const visit = (node: ts.Node): void => {
    if (ts.isImportDeclaration(node) || ts.isExportDeclaration(node)) return;
    if (
      ts.isStringLiteralLike(node) ||
      ts.isJsxText(node) ||
      ts.isTemplateHead(node) ||
      ts.isTemplateMiddleOrTemplateTail(node)
    ) {
      const { line } = source.getLineAndCharacterOfPosition(node.getStart());
      found.push({ where: `${path}:${line + 1}`, words: node.text.replace(/\s+/g, " ") });
    }
    ts.forEachChild(node, visit);
  };
  visit(source);
  return found;
}

function textsOfJson(path: string): Text[] {
  const found: Text[] = [];
  const visit = (value: unknown, at: string): void => {
    if (typeof value === "string") found.push({ where: `${path} ${at}`, words: value });
    else if (typeof value === "object" && value !== null)
      for (const [name, inner] of Object.entries(value)) visit(inner, `${at}/${name}`);
  };
  visit(JSON.parse(readFileSync(path, "utf8")), "");
  return found;
}

function filesBelow(folder: string): string[] {
  return readdirSync(folder, { recursive: true, withFileTypes: true })
    .filter((found) => found.isFile())
    .map((found) => `${found.parentPath}/${found.name}`);
}

/** Paragraph by paragraph; a heading names its matter and claims nothing of it. */
function textsOfPaper(path: string): Text[] {
  return readFileSync(path, "utf8")
    .split(/\n\s*\n/)
    .map((paragraph) => ({ where: path, words: paragraph.replace(/^#+ Safety$/m, "").replace(/\s+/g, " ") }));
}

function allTexts(): Text[] {
  const files = [...ROOMS.flatMap(filesBelow), ...PAPERS.filter((paper) => existsSync(paper))];
  return files.flatMap((path) => {
    if (/[.](tsx?|mjs)$/.test(path)) return textsOfSource(path);
    if (/[.]json$/.test(path)) return textsOfJson(path);
    if (/[.]md$/.test(path)) return textsOfPaper(path);
    return [];
  });
}

/** The claims that a text makes, each with its sentence. */
function claimsIn(words: string): string[] {
  return words.split(/(?<=[.!?:;])\s+/).flatMap((sentence) => {
    const never = NEVER.flatMap((claim) => claim.exec(sentence)?.[0] ?? []);
    const undenied = ONLY_DENIED.flatMap((claim) => {
      const found = claim.exec(sentence);
      return found === null || DENIES.test(sentence.slice(0, found.index)) ? [] : [found[0]];
    });
    return [...never, ...undenied].map((claim) => `“${claim}” in: ${sentence}`);
  });
}

describe("the texts of the program", () => {
  it("call no mixture, record or program safe, compliant, validated, certified or approved (SAF-04)", () => {
    const texts = allTexts();
    expect(texts.length).toBeGreaterThan(5000);
    expect(texts.flatMap(({ where, words }) => claimsIn(words).map((claim) => `${where}: ${claim}`))).toEqual([]);
  });
});

describe("a text", () => {
  it.each([
    "This mixture is safe.",
    "Safe to mix at any concentration",
    "Records are Part 11 compliant.",
    "The result is validated.",
    "A certified signature.",
    "No hazards.",
    "This is legally binding.",
    "The seal proves who signed.",
  ])("that claims is found: %s (SAF-04)", (words) => {
    expect(claimsIn(words)).not.toEqual([]);
  });
  it.each([
    "No caution on file for this combination; that is no statement of safety.",
    "The safety data sheet, local rules and a licensed professional’s judgement come first.",
    "Counterleaf is not validated, certified or compliant with any rule.",
    "No hazard data on file.",
  ])("that denies or defers is not: %s", (words) => {
    expect(claimsIn(words)).toEqual([]);
  });
});
