// Which LaTeX a person may write on a page (ADM-08): commands by allow-list, bounded in length and depth. Pure.

const MOST_CHARACTERS = 2000;
const DEEPEST = 24;

const ALLOWED = new Set(
  [
    // letters
    "alpha beta gamma delta epsilon varepsilon zeta eta theta vartheta iota kappa lambda mu nu xi pi rho sigma tau upsilon phi varphi chi psi omega",
    "Gamma Delta Theta Lambda Xi Pi Sigma Upsilon Phi Psi Omega ell hbar partial infty nabla",
    // structure
    "frac dfrac tfrac sqrt binom left right big Big bigg Bigg overline underline overbrace underbrace stackrel overset underset substack",
    "hat bar vec dot ddot tilde widehat widetilde",
    // type
    "mathrm mathit mathbf mathsf mathtt mathcal mathbb text textrm textit textbf operatorname displaystyle textstyle scriptstyle limits nolimits",
    // operators and relations
    "cdot times div pm mp ast star circ bullet oplus ominus otimes sum prod int oint lim log lg ln exp sin cos tan cot sinh cosh tanh arcsin arccos arctan min max sup inf det",
    "le leq ge geq ne neq equiv approx sim simeq cong propto ll gg prec succ in notin ni subset subseteq supset cup cap setminus land lor lnot neg forall exists",
    "to gets rightarrow leftarrow leftrightarrow longrightarrow longleftarrow rightleftharpoons leftrightharpoons xrightarrow xleftarrow xrightleftharpoons Rightarrow Leftarrow Leftrightarrow implies iff mapsto uparrow downarrow",
    // delimiters and spaces
    "langle rangle lfloor rfloor lceil rceil lbrace rbrace vert Vert mid parallel quad qquad ldots cdots vdots ddots dots prime degree",
    "begin end",
  ].flatMap((line) => line.split(" ")),
);
const ALLOWED_SIGNS = new Set([..."\\,;:!%#&_{}$ |>"]);
const ALLOWED_ENVIRONMENTS = new Set([
  "aligned",
  "gathered",
  "cases",
  "array",
  "matrix",
  "pmatrix",
  "bmatrix",
  "vmatrix",
  "split",
]);

/** Says in a sentence why a written formula is not set, or null when nothing speaks against trying. */
export function formulaObjection(tex: string): string | null {
  if (tex.length > MOST_CHARACTERS)
    return `The formula is longer than ${MOST_CHARACTERS} characters. Part it into several.`;
  if (depthOf(tex) > DEEPEST) return `The formula nests braces more than ${DEEPEST} deep. Write it flatter.`;
  if (tex.includes("^^")) return "“^^” is not taken in a formula.";
  for (const [, word, sign] of tex.matchAll(/\\(?:([A-Za-z@]+)|([\s\S]?))/g)) {
    if (word !== undefined && !ALLOWED.has(word)) return `The command “\\${word}” is not taken in a formula.`;
    if (word === undefined && !ALLOWED_SIGNS.has(sign ?? ""))
      return `The command “\\${sign ?? ""}” is not taken in a formula.`;
  }
  for (const [, environment = ""] of tex.matchAll(/\\(?:begin|end)\s*\{([^{}]*)\}/g)) {
    if (!ALLOWED_ENVIRONMENTS.has(environment)) return `The environment “${environment}” is not taken in a formula.`;
  }
  return null;
}

function depthOf(tex: string): number {
  let depth = 0;
  let deepest = 0;
  for (const character of tex.replace(/\\[{}]/g, "")) {
    if (character === "{") depth += 1;
    if (character === "}") depth -= 1;
    deepest = Math.max(deepest, depth);
  }
  return deepest;
}
