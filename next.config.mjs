import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL(".", import.meta.url));

/** @type {import("next").NextConfig} */
export default {
  reactStrictMode: true,
  poweredByHeader: false,
  // One copy of each: the driver finds its WebAssembly beside itself, and two copies of yjs break `instanceof`.
  serverExternalPackages: ["@electric-sql/pglite", "pg", "better-auth", "yjs"],
  turbopack: { root },
  outputFileTracingRoot: root,
};
