// Plots are drawn as text on a canvas or in an SVG, where KaTeX cannot go: a species' LaTeX as plain characters.

const LOWERED: Readonly<Record<string, string>> = {
  "0": "₀",
  "1": "₁",
  "2": "₂",
  "3": "₃",
  "4": "₄",
  "5": "₅",
  "6": "₆",
  "7": "₇",
  "8": "₈",
  "9": "₉",
  "+": "₊",
  "-": "₋",
};
const RAISED: Readonly<Record<string, string>> = {
  "0": "⁰",
  "1": "¹",
  "2": "²",
  "3": "³",
  "4": "⁴",
  "5": "⁵",
  "6": "⁶",
  "7": "⁷",
  "8": "⁸",
  "9": "⁹",
  "+": "⁺",
  "-": "⁻",
  "−": "⁻",
};
const SYMBOLS: Readonly<Record<string, string>> = {
  "\\alpha": "α",
  "\\cdot": "·",
  "\\beta": "β",
  "\\gamma": "γ",
  "\\,": "",
  "\\;": " ",
  "\\!": "",
};

/** Turns the LaTeX of a species into plain characters; what cannot be said so gives the name instead. */
export function speciesText(latex: string, name: string): string {
  const bare = latex
    .replace(/\\(?:mathrm|text|ce|mathsf|operatorname)\s*/g, "")
    .replace(/\\[A-Za-z]+|\\[,;!]/g, (command) => SYMBOLS[command] ?? command)
    .replace(/_\{([^{}]*)\}|_(.)/g, (_, group, single) => shift(group ?? single, LOWERED))
    .replace(/\^\{([^{}]*)\}|\^(.)/g, (_, group, single) => shift(group ?? single, RAISED))
    .replace(/[{}]/g, "")
    .trim();
  return bare === "" || /[\\^_$�]/.test(bare) ? name : bare;
}

function shift(text: string, table: Readonly<Record<string, string>>): string {
  return [...text].map((character) => table[character] ?? "�").join("");
}
