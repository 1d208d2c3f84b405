import { describe, expect, it } from "vitest";
import { z } from "zod";
import { BadInput, clientAddress, isFromOwnPage, parseQuery, readJson, readOctets } from "../../app/_server/request.ts";

const ORIGINS = ["https://notebook.example"];

describe("isFromOwnPage (ADM-07)", () => {
  it.each([
    [{ origin: "https://notebook.example" }, true],
    [{ origin: "https://notebook.example", "sec-fetch-site": "same-origin" }, true],
    [{ origin: "https://notebook.example", "sec-fetch-site": "cross-site" }, false],
    [{ origin: "https://notebook.example", "sec-fetch-site": "same-site" }, false],
    [{ origin: "https://notebook.example.evil.invalid" }, false],
    [{ origin: "http://notebook.example" }, false],
    [{ origin: "null" }, false],
    [{ referer: "https://notebook.example/desk" }, false],
    [{}, false],
  ])("answers %o with %s", (headers, own) => {
    expect(isFromOwnPage(new Headers(headers), ORIGINS)).toBe(own);
  });
});

describe("clientAddress", () => {
  it.each([
    ["1.1.1.1, 2.2.2.2", 0, null],
    ["1.1.1.1, 2.2.2.2", 1, "2.2.2.2"],
    ["1.1.1.1, 2.2.2.2", 2, "1.1.1.1"],
    ["1.1.1.1", 2, null],
    ["<script>", 1, null],
    ["2001:db8::1", 1, "2001:db8::1"],
  ])("reads %s with %i proxies as %s", (chain, hops, address) => {
    expect(clientAddress(new Headers({ "x-forwarded-for": chain }), hops)).toBe(address);
  });
});

describe("bodies", () => {
  const post = (body: BodyInit, type: string) =>
    new Request("https://notebook.example/api/x", { method: "POST", body, headers: { "content-type": type } });

  it("takes JSON that fits and names each field that does not", async () => {
    const shape = z.strictObject({ a: z.number(), b: z.object({ c: z.string() }) });
    await expect(readJson(post('{"a":1,"b":{"c":"d"}}', "application/json"), shape)).resolves.toEqual({
      a: 1,
      b: { c: "d" },
    });
    const refused = await readJson(post('{"a":"1","b":{}}', "application/json"), shape).catch(
      (error: unknown) => error,
    );
    expect(refused).toBeInstanceOf(BadInput);
    expect(refused).toMatchObject({ fields: { a: expect.any(String), "b.c": expect.any(String) } });
  });

  it("refuses a form, text that is not JSON, and what is too long however it is announced", async () => {
    const any = z.unknown();
    await expect(readJson(post("a=1", "application/x-www-form-urlencoded"), any)).rejects.toThrow(
      "request.unsupported",
    );
    await expect(readJson(post("{", "application/json"), any)).rejects.toThrow(BadInput);
    await expect(readJson(post(`"${"x".repeat(70_000)}"`, "application/json"), any)).rejects.toThrow(
      "request.too-large",
    );
    const streamed = { duplex: "half" };
    const unannounced = new Request("https://notebook.example/api/x", {
      ...streamed,
      method: "POST",
      headers: { "content-type": "application/octet-stream" },
      body: new ReadableStream({
        pull(controller) {
          controller.enqueue(new Uint8Array(1000));
        },
      }),
    });
    await expect(readOctets(unannounced, 10_000)).rejects.toThrow("request.too-large");
  });

  it("refuses a query that names something twice or names what is not asked", () => {
    const shape = z.strictObject({ q: z.string() });
    expect(parseQuery(shape, "https://notebook.example/?q=a")).toEqual({ q: "a" });
    expect(() => parseQuery(shape, "https://notebook.example/?q=a&q=b")).toThrow(BadInput);
    expect(() => parseQuery(shape, "https://notebook.example/?q=a&r=b")).toThrow(BadInput);
  });
});
