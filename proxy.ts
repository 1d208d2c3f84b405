import type { NextRequest } from "next/server";
import { guardPage } from "./app/_server/proxy-page.ts";

export function proxy(request: NextRequest) {
  return guardPage(request);
}

// Routes set their own headers (app/_server/answer.ts): a proxy that touches a request cuts long upload bodies short.
export const config = { matcher: ["/((?!api/|_next/static/|_next/image|fonts/|hazards/|icons/).*)"] };
