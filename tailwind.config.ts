import type { Config } from "tailwindcss";

// The tokens live in app/globals.css as custom properties; here they get their utility names.
const config: Config = {
  content: ["./app/**/*.{ts,tsx}", "./components/**/*.{ts,tsx}", "./editor/**/*.{ts,tsx}"],
  theme: {
    extend: {
      colors: {
        desk: "var(--desk)",
        paper: "var(--paper)",
        stub: "var(--stub)",
        field: "var(--field)",
        tint: "var(--tint)",
        ink: "var(--ink)",
        faint: "var(--faint)",
        verdigris: "var(--verdigris)",
        ochre: "var(--ochre)",
        madder: "var(--madder)",
        slate: "var(--slate)",
        rule: "var(--rule)",
        edge: "var(--edge)",
      },
      fontFamily: { write: "var(--write)", ui: "var(--ui)", mono: "var(--mono)" },
    },
  },
};

export default config;
