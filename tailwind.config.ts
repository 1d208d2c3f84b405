import type { Config } from "tailwindcss";

// The tokens live in app/globals.css as custom properties; here they get their utility names.
// Only these three rooms are scanned for class names: data folders and tests are not.
const config: Config = {
  content: ["./app/**/*.{ts,tsx}", "./components/**/*.{ts,tsx}", "./editor/**/*.{ts,tsx}"],
  darkMode: ["selector", '[data-theme="dark"]'],
  theme: {
    extend: {
      colors: {
        desk: "var(--desk)",
        paper: "var(--paper)",
        stub: "var(--stub)",
        field: "var(--field)",
        tint: "var(--tint)",
        "wash-verdigris": "var(--wash-verdigris)",
        "wash-ochre": "var(--wash-ochre)",
        "wash-madder": "var(--wash-madder)",
        "wash-slate": "var(--wash-slate)",
        ink: "var(--ink)",
        faint: "var(--faint)",
        "on-solid": "var(--on-solid)",
        verdigris: "var(--verdigris)",
        "verdigris-deep": "var(--verdigris-deep)",
        ochre: "var(--ochre)",
        madder: "var(--madder)",
        slate: "var(--slate)",
        rule: "var(--rule)",
        edge: "var(--edge)",
      },
      fontFamily: { write: "var(--write)", ui: "var(--ui)", mono: "var(--mono)" },
      fontSize: {
        "t-1": "var(--t-1)",
        "t-2": "var(--t-2)",
        "t-3": "var(--t-3)",
        "t-4": "var(--t-4)",
        "t-5": "var(--t-5)",
        "t-6": "var(--t-6)",
        "t-7": "var(--t-7)",
        "t-8": "var(--t-8)",
        "t-9": "var(--t-9)",
      },
      maxWidth: { measure: "var(--measure)" },
      screens: { tablet: { max: "1180px" }, phone: { max: "760px" } },
    },
  },
};

export default config;
