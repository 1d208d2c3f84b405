// Measures every pair of inks and grounds that the design uses, from the style sheet itself, by the formula of WCAG 2.2
// (relative luminance and contrast ratio, "Contrast (Minimum)" and "Non-text Contrast").
import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";

const css = readFileSync(new URL("../../../app/globals.css", import.meta.url), "utf8");

const light = tokens(":root {");
const themes = {
  light,
  "dark by preference": { ...light, ...tokens(':root:not([data-theme="light"]) {') },
  "dark by attribute": { ...light, ...tokens(':root[data-theme="dark"] {') },
};

const inks = ["ink", "faint", "verdigris", "ochre", "madder", "slate"];
const washes = ["verdigris", "ochre", "madder", "slate"];
const pairs: [string, string, number][] = [
  ...inks.flatMap((ink) =>
    ["paper", "stub", "desk", "field", "tint"].map((ground): [string, string, number] => [ink, ground, 4.5]),
  ),
  ...washes.flatMap((wash): [string, string, number][] => [
    [wash, `wash-${wash}`, 4.5],
    ["ink", `wash-${wash}`, 4.5],
    ["faint", `wash-${wash}`, 4.5],
  ]),
  ["on-solid", "verdigris", 4.5],
  ["on-solid", "verdigris-deep", 4.5],
  ["on-solid", "madder", 4.5],
  ["on-solid", "slate", 4.5],
  ["verdigris-deep", "paper", 4.5],
  ["verdigris-deep", "stub", 4.5],
  ...["paper", "stub", "field", "tint"].map((ground): [string, string, number] => ["edge", ground, 3]),
  ...["plot-1", "plot-2", "plot-3", "plot-4"].map((ink): [string, string, number] => [ink, "paper", 3]),
];

describe("contrast", () => {
  for (const [theme, set] of Object.entries(themes)) {
    it.each(pairs)(`%s on %s reaches %d:1, ${theme} (ACC-04)`, (ink, ground, least) => {
      expect(ratio(colour(set, ink), colour(set, ground))).toBeGreaterThanOrEqual(least);
    });
  }

  it("gives both ways into the dark the same colours", () => {
    expect(themes["dark by attribute"]).toEqual(themes["dark by preference"]);
    expect(themes["dark by attribute"].paper).not.toBe(light.paper);
  });

  it("measures as the standard does: black on white is 21:1", () => {
    expect(ratio("#000000", "#ffffff")).toBeCloseTo(21, 10);
    expect(ratio("#777777", "#ffffff")).toBeLessThan(4.5);
  });
});

function tokens(from: string): Record<string, string> {
  const start = css.indexOf(from);
  if (start < 0) throw new Error(`app/globals.css has no block "${from}"`);
  const block = css.slice(start, css.indexOf("}", start));
  return Object.fromEntries(
    [...block.matchAll(/--([a-z0-9-]+):\s*(#[0-9a-f]{6})\b/gi)].map((match) => [match[1] ?? "", match[2] ?? ""]),
  );
}

function colour(set: Record<string, string>, name: string): string {
  const found = set[name];
  if (!found) throw new Error(`app/globals.css has no colour --${name}`);
  return found;
}

function ratio(a: string, b: string): number {
  const [dark = 0, bright = 0] = [luminance(a), luminance(b)].sort((x, y) => x - y);
  return (bright + 0.05) / (dark + 0.05);
}

function luminance(hex: string): number {
  const [red = 0, green = 0, blue = 0] = [1, 3, 5].map((at) =>
    linear(Number.parseInt(hex.slice(at, at + 2), 16) / 255),
  );
  return 0.2126 * red + 0.7152 * green + 0.0722 * blue;
}

function linear(channel: number): number {
  return channel <= 0.04045 ? channel / 12.92 : ((channel + 0.055) / 1.055) ** 2.4;
}
