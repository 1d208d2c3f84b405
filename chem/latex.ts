// The one place where LaTeX is made. It is built from symbols of symbols.ts, numbers and fixed text; nothing that a person typed
// gets here.

/** Terms on one line of a long sum before it is broken. */
const TERMS_ON_A_LINE = 4;
const SIGNIFICANT = 5;

/** A formula such as "H2PO4" with its charge, upright, as LaTeX; anything else than letters, digits and brackets is dropped. */
export function speciesLatex(formula: string, z: number): string {
  const body = formula.replace(/[^A-Za-z0-9()]/g, "").replace(/\d+/g, (digits) => `_{${digits}}`);
  return `\\mathrm{${body}${chargeLatex(z)}}`;
}

export function chargeLatex(z: number): string {
  if (z === 0) return "";
  const size = Math.abs(z) === 1 ? "" : String(Math.abs(z));
  return `^{${size}${z > 0 ? "+" : "-"}}`;
}

/** A family's label for a subscript. */
export function labelLatex(label: string): string {
  return speciesLatex(label, 0);
}

export const PROTON_LATEX = "\\mathrm{H^{+}}";
export const HYDROXIDE_LATEX = "\\mathrm{OH^{-}}";

export function bracket(species: string): string {
  return `[${species}]`;
}

/** A coefficient in front of a factor; 1 is not written. */
export function times(coefficient: number, factor: string): string {
  return coefficient === 1 ? factor : `${plainNumber(coefficient)}\\,${factor}`;
}

/** A number with five significant digits, as 0.012346 or 1.2346\times 10^{-9}. */
export function numberLatex(value: number): string {
  if (!Number.isFinite(value)) return "\\text{not finite}";
  if (value === 0) return "0";
  const [mantissa = "0", exponentText = "0"] = value.toExponential(SIGNIFICANT - 1).split("e");
  const exponent = Number(exponentText);
  if (exponent >= -3 && exponent < SIGNIFICANT) return value.toFixed(Math.max(0, SIGNIFICANT - 1 - exponent));
  return `${mantissa}\\times 10^{${exponent}}`;
}

function plainNumber(value: number): string {
  return String(Number(value.toPrecision(6)));
}

/** Two sums that are equal, broken into lines: what is on the left, then what is on the right. */
export function equationLatex(left: readonly string[], right: readonly string[]): string {
  return `\\begin{aligned} &${sumLatex(left)} \\\\ &\\quad = ${sumLatex(right)} \\end{aligned}`;
}

/** Two named sums, one below the other. */
export function namedSumsLatex(sums: readonly { name: string; terms: readonly string[] }[]): string {
  return `\\begin{aligned} ${sums.map(({ name, terms }) => `${name} &= ${sumLatex(terms)}`).join(" \\\\ ")} \\end{aligned}`;
}

/** The numbers of an equation: each side's terms, its sum, and the difference. */
export function numbersLatex(left: readonly number[], right: readonly number[]): string {
  const side = (name: string, terms: readonly number[]) => {
    const sum = terms.reduce((total, term) => total + term, 0);
    const shownTerms = terms.length > 1 ? `${sumLatex(terms.map(numberLatex))} \\\\ &= ` : "";
    return `\\text{${name}} &= ${shownTerms}${numberLatex(sum)}`;
  };
  const difference = left.reduce((total, term) => total + term, 0) - right.reduce((total, term) => total + term, 0);
  return (
    `\\begin{aligned} ${side("left", left)} \\\\ ${side("right", right)} \\\\ ` +
    `\\text{difference} &= ${numberLatex(difference)}\\ \\mathrm{mol/L} \\end{aligned}`
  );
}

function sumLatex(terms: readonly string[]): string {
  if (terms.length === 0) return "0";
  const lines: string[] = [];
  for (let k = 0; k < terms.length; k += TERMS_ON_A_LINE) lines.push(terms.slice(k, k + TERMS_ON_A_LINE).join(" + "));
  return lines.join(" \\\\ &\\quad + ");
}

/** α of a form: its term over the shared denominator. */
export function fractionLatex(species: string, term: string, denominator: string): string {
  return `\\alpha_{${species}} = \\frac{${term}}{${denominator}}`;
}

/** [H+]^(n−j) K1 … Kj */
export function fractionTermLatex(constants: readonly string[], steps: number, lost: number): string {
  const protons = steps - lost;
  const power = protons === 0 ? "" : protons === 1 ? bracket(PROTON_LATEX) : `${bracket(PROTON_LATEX)}^{${protons}}`;
  const product =
    lost <= 3 ? constants.slice(0, lost).join("\\,") : `${constants[0] ?? ""}\\cdots ${constants[lost - 1] ?? ""}`;
  return [power, product].filter((factor) => factor !== "").join("\\,") || "1";
}

export function constantLatex(label: string, step: number, conditional: boolean): string {
  return `K${conditional ? "'" : ""}_{${labelLatex(label)},${step}}`;
}

/** A lone symbol with a value put to it. */
export function valueLatex(symbol: string, value: number, unit: string): string {
  return `${symbol} = ${numberLatex(value)}${unit === "" ? "" : `\\ \\mathrm{${unit}}`}`;
}

export const DAVIES_LATEX = "\\lg \\gamma_z = -A\\,z^2\\left(\\frac{\\sqrt{I}}{1+\\sqrt{I}} - 0.3\\,I\\right)";
export const IONIC_STRENGTH_LATEX = "I = \\tfrac{1}{2}\\sum_k z_k^2\\,c_k";
export const PH_DAVIES_LATEX = `\\mathrm{pH} = -\\lg\\left(\\gamma_1\\,${bracket(PROTON_LATEX)}\\right)`;
export const PH_IDEAL_LATEX = `\\mathrm{pH} = -\\lg ${bracket(PROTON_LATEX)}`;
export const CONDITIONAL_LATEX = "K'_{k} = K_{k}\\,\\frac{\\gamma_{z}}{\\gamma_1\\,\\gamma_{z-1}}";
export const WATER_DAVIES_LATEX = `K_\\mathrm{w}' = \\frac{K_\\mathrm{w}}{\\gamma_1^2} = ${bracket(PROTON_LATEX)}${bracket(HYDROXIDE_LATEX)}`;
export const WATER_IDEAL_LATEX = `K_\\mathrm{w} = ${bracket(PROTON_LATEX)}${bracket(HYDROXIDE_LATEX)}`;
export const SCALE_LATEX = "K^{(c)} = K^{(m)}\\,\\frac{\\rho}{\\mathrm{kg/L}}";
