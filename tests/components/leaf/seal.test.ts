import { createHash } from "node:crypto";
import { describe, expect, it } from "vitest";
import { isHash, sealStrokes, sealWord } from "../../../components/leaf/seal.ts";

const hashOf = (text: string) => createHash("sha256").update(text).digest("hex");
const drawn = (hash: string, size: number) => JSON.stringify(sealStrokes(hash, size));

describe("the seal", () => {
  it("is the same strokes for the same hash, in capitals too", () => {
    const hash = hashOf("a page");
    expect(drawn(hash, 160)).toBe(drawn(hash, 160));
    expect(drawn(hash.toUpperCase(), 160)).toBe(drawn(hash, 160));
  });

  it("keeps for ever what was printed once: the strokes of a known hash", () => {
    // The print-out in a binder is compared with the screen years later; this changes only with a new kind of seal.
    const strokes = sealStrokes("0123456789abcdef".repeat(4), 160);
    expect(createHash("sha256").update(JSON.stringify(strokes)).digest("hex")).toBe(KNOWN_DRAWING);
  });

  it.each([160, 48])(
    "tells 3000 hashes apart at %i pixels",
    (size) => {
      const seen = new Set<string>();
      for (let i = 0; i < 3000; i++)
        seen.add(
          createHash("md5")
            .update(drawn(hashOf(`page ${i}`), size))
            .digest("hex"),
        );
      expect(seen.size).toBe(3000);
    },
    120_000,
  );

  it("changes the large cut with every single digit", () => {
    const hash = hashOf("one digit");
    const before = drawn(hash, 160);
    for (let i = 0; i < 64; i++) {
      const digit = ((Number.parseInt(hash.charAt(i), 16) + 1) % 16).toString(16);
      expect(drawn(hash.slice(0, i) + digit + hash.slice(i + 1), 160), `digit ${i}`).not.toBe(before);
    }
  });

  it("spells the whole hash in its 64 rays", () => {
    const hash = hashOf("rays");
    const rays = sealStrokes(hash, 160).find((stroke) => stroke.width === 1.4)?.d ?? "";
    const digits = [...rays.matchAll(/M(\S+) (\S+?)L(\S+) (\S+?)(?=M|$)/g)].map((ray) => {
      const inner = Math.hypot(Number(ray[1]), Number(ray[2]));
      return Math.round(((99 - inner - 1) / 9) * 15).toString(16);
    });
    expect(digits.join("")).toBe(hash);
  });

  it("stays inside its square and writes no number that is not one", () => {
    for (let i = 0; i < 60; i++) {
      for (const size of [48, 160]) {
        for (const { d } of sealStrokes(hashOf(`inside ${i}`), size)) {
          expect(d).not.toMatch(/NaN|Infinity|e-/);
          expect(reach(d)).toBeLessThan(101);
        }
      }
    }
  });

  it("refuses what is not a SHA-256", () => {
    expect(isHash("ab")).toBe(false);
    expect(() => sealStrokes("xyz")).toThrow(TypeError);
    expect(() => sealStrokes(`${"0".repeat(63)}g`)).toThrow(TypeError);
  });

  it("gives eight characters for reading aloud", () => {
    expect(sealWord("02f15288900abecf")).toBe("02F1 5288");
  });
});

const KNOWN_DRAWING = "e7514e18675597a5002b92f1dd9f152fab1e3017b60485c21cfbdf9983efb504";

/** The farthest that a path of relative steps (or the edge's absolute ones) gets from the middle. */
function reach(d: string): number {
  let x = 0;
  let y = 0;
  let farthest = 0;
  for (const [, command, rest] of d.matchAll(/([MLl])([^MLlAz]*)/g)) {
    const [a = 0, b = 0] = (rest?.match(/-?(?:\d+\.?\d*|\.\d+)/g) ?? []).map(Number);
    x = command === "l" ? x + a : a;
    y = command === "l" ? y + b : b;
    farthest = Math.max(farthest, Math.abs(x), Math.abs(y));
  }
  return farthest;
}
