import { describe, expect, it } from "vitest";
import { csvText, inert } from "../../db/csv.ts";

describe("a CSV cell (FND-04)", () => {
  it.each([
    "=1+1",
    "=cmd|' /C calc'!A0",
    "+1-1",
    "-1+1",
    "@SUM(A1)",
    "\t=1",
    "\r=1",
    "\u0000=1",
    "\n=1",
    "-",
    "+",
    "=",
    "-0.35x",
    "＝1",
    "-1e",
    "+1,5",
  ])("%j is made inert", (text) => {
    expect(inert(text)).toBe(`'${text}`);
  });

  it.each(["-0.35", "+1e-7", "-1", "+.5", "1.", "0.100", "12", "-1.5E+10", "citric acid", "", "a=b", "1-2", "µ"])(
    "%j stays as it is",
    (text) => {
      expect(inert(text)).toBe(text);
    },
  );
});

describe("CSV text", () => {
  it("is RFC 4180 with a byte order mark: CRLF, quotes doubled, commas and line ends inside quotes", () => {
    expect(
      csvText(
        ["a", "b"],
        [
          ["x,y", 'say "no"'],
          ["line\nend", -0.35],
          [null, "=1"],
        ],
      ),
    ).toBe('\uFEFFa,b\r\n"x,y","say ""no"""\r\n"line\nend",-0.35\r\n,\'=1\r\n');
  });
});
