// Runs before a page is rendered: a fresh nonce, told to Next by the request's policy and to the browser by the answer's.
import "server-only";
import { randomBytes } from "node:crypto";
import { type NextRequest, NextResponse } from "next/server";
import { settings } from "./env.ts";
import { commonHeaders, contentPolicy } from "./security-headers.ts";

export function guardPage(request: NextRequest): NextResponse {
  const nonce = randomBytes(16).toString("base64");
  const https = settings().url.startsWith("https:");
  const policy = contentPolicy({ nonce, https, development: process.env.NODE_ENV === "development" });
  const headers = new Headers(request.headers);
  headers.set("x-nonce", nonce);
  headers.set("content-security-policy", policy);
  // The page asks where it is (to come back after signing in); a browser's own header of that name counts for nothing.
  headers.set("x-path", request.nextUrl.pathname + request.nextUrl.search);
  const response = NextResponse.next({ request: { headers } });
  response.headers.set("content-security-policy", policy);
  for (const [name, value] of Object.entries(commonHeaders(https))) response.headers.set(name, value);
  return response;
}
