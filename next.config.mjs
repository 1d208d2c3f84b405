import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL(".", import.meta.url));

/** @type {import("next").NextConfig} */
export default {
  reactStrictMode: true,
  poweredByHeader: false,
  // Types are checked by `npm test`; a build does not check them a second time.
  typescript: { ignoreBuildErrors: true },
  // One copy of each: the driver finds its WebAssembly beside itself, and two copies of yjs break `instanceof`.
  serverExternalPackages: ["@electric-sql/pglite", "pg", "better-auth", "yjs"],
  // What the proxy does not touch: built files, fonts and pictures.
  headers: async () => [{ source: "/:path*", headers: [{ key: "x-content-type-options", value: "nosniff" }] }],
  turbopack: { root },
  outputFileTracingRoot: root,
};
