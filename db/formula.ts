// Molecular formulas as they are compared: counted, then written in Hill order, with water of crystallisation kept apart.

/** The symbols of the elements, IUPAC 2016 (118 of them). */
const SYMBOLS: ReadonlySet<string> = new Set(
  (
    "H He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga Ge As Se Br Kr Rb Sr Y Zr Nb Mo Tc Ru " +
    "Rh Pd Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Pm Sm Eu Gd Tb Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Po At Rn " +
    "Fr Ra Ac Th Pa U Np Pu Am Cm Bk Cf Es Fm Md No Lr Rf Db Sg Bh Hs Mt Ds Rg Cn Nh Fl Mc Lv Ts Og"
  ).split(" "),
);

/** Atoms of one formula unit without its water of crystallisation, and the number of those waters. */
export type Formula = { atoms: ReadonlyMap<string, number>; waters: number };

/**
 * Reads a formula in any order of elements: "Na3C6H5O7", "C6H5Na3O7", "(NH4)2HPO4", "CaSO4·½H2O", "CuSO4.5H2O", "[Fe(CN)6]^3-".
 * Returns null when the text is no formula. A trailing charge is left aside.
 */
export function parseFormula(text: string): Formula | null {
  const plain = toAscii(text);
  if (plain === "" || plain.length > 80) return null;
  const reader = { text: plain, at: 0 };
  const atoms = new Map<string, number>();
  let waters = 0;
  for (let part = 0; ; part++) {
    const times = readNumber(reader, true) ?? 1;
    const inPart = readGroup(reader, 0);
    if (inPart === null || inPart.size === 0) return null;
    if (part > 0 && isWater(inPart)) waters += times;
    else addAtoms(atoms, inPart, times);
    if (reader.at === plain.length) break;
    if (plain[reader.at] !== ".") return null;
    reader.at += 1;
  }
  return atoms.size === 0 ? null : { atoms, waters };
}

/**
 * Every formula that a text without capitals can mean ("na2co3" is sodium carbonate or holds cobalt): at most 64 of them.
 */
export function looseFormulas(text: string): Formula[] {
  const plain = toAscii(text).toLowerCase();
  if (plain.length < 2 || plain.length > 40 || !/^[a-z0-9.()[\]]+$/.test(plain)) return [];
  const spellings: string[] = [];
  spell("", 0);
  return spellings.flatMap((spelling) => parseFormula(spelling) ?? []);

  function spell(done: string, at: number): void {
    if (spellings.length >= 64) return;
    const letter = plain[at];
    if (letter === undefined) {
      spellings.push(done);
      return;
    }
    if (!/[a-z]/.test(letter)) {
      spell(done + letter, at + 1);
      return;
    }
    const one = letter.toUpperCase();
    const two = one + (plain[at + 1] ?? "");
    if (two.length === 2 && SYMBOLS.has(two)) spell(done + two, at + 2);
    if (SYMBOLS.has(one)) spell(done + one, at + 1);
  }
}

/** Hill order: carbon, hydrogen, then by alphabet; without carbon all by alphabet. */
export function hill(atoms: ReadonlyMap<string, number>): string {
  const symbols = [...atoms.keys()].sort();
  const rest = atoms.has("C") ? ["C", "H", ...symbols.filter((s) => s !== "C" && s !== "H")] : symbols;
  return rest.flatMap((s) => (atoms.get(s) ? [s + (atoms.get(s) === 1 ? "" : String(atoms.get(s)))] : [])).join("");
}

/** The spelling under which formulas are compared: "C6H5Na3O7", with two waters "C6H5Na3O7.2H2O". */
export function comparedFormula(formula: Formula): string {
  return hill(formula.atoms) + (formula.waters === 0 ? "" : `.${formula.waters}H2O`);
}

/** The same with the water counted in, as registries also print it: C6H9Na3O9. */
export function formulaWithWaterInside(formula: Formula): string {
  const atoms = new Map(formula.atoms);
  addAtoms(atoms, WATER, formula.waters);
  return hill(atoms);
}

/**
 * The order in which a chemist writes it: organic formulas as in Hill's, inorganic acids with hydrogen first and oxygen last
 * (H3PO4, HCO3), ammonia and hydrazine with nitrogen first. Usage of the trade, no source.
 */
export function writtenFormula(atoms: ReadonlyMap<string, number>): string {
  const withoutH = [...atoms].filter(([symbol, count]) => symbol !== "H" && count > 0);
  const skeleton = hill(new Map(withoutH));
  const count = (symbol: string) => {
    const n = atoms.get(symbol) ?? 0;
    return n === 0 ? "" : symbol + (n === 1 ? "" : String(n));
  };
  if (atoms.has("C") && !["CO3", "CN", "CNO"].includes(skeleton)) return hill(atoms);
  if (/^N\d*$/.test(skeleton) && (atoms.get("H") ?? 0) > (atoms.get("N") ?? 0)) return count("N") + count("H");
  const middle = withoutH.map(([symbol]) => symbol).filter((symbol) => symbol !== "O");
  return count("H") + middle.sort().map(count).join("") + count("O");
}

const WATER: ReadonlyMap<string, number> = new Map([
  ["H", 2],
  ["O", 1],
]);

function isWater(atoms: ReadonlyMap<string, number>): boolean {
  return hill(atoms) === "H2O";
}

function addAtoms(to: Map<string, number>, from: ReadonlyMap<string, number>, times: number): void {
  for (const [symbol, count] of from) to.set(symbol, (to.get(symbol) ?? 0) + count * times);
}

/** Subscripts, dots and fractions as plain characters; spaces and a trailing charge dropped. */
function toAscii(text: string): string {
  return text
    .replaceAll("½", ".5")
    .normalize("NFKD")
    .replace(/[·•∙⋅*]/g, "~")
    .replace(/\s+/g, "")
    .replace(/(\^\d*[+\-−]|\(\d*[+\-−]\)|[+\-−])$/, "")
    .replaceAll("~", ".");
}

type Reader = { text: string; at: number };

function readGroup(reader: Reader, depth: number): Map<string, number> | null {
  if (depth > 4) return null;
  const atoms = new Map<string, number>();
  while (reader.at < reader.text.length) {
    const here = reader.text[reader.at] ?? "";
    if (here === "(" || here === "[") {
      reader.at += 1;
      const inside = readGroup(reader, depth + 1);
      if (inside === null || reader.text[reader.at] !== (here === "(" ? ")" : "]")) return null;
      reader.at += 1;
      const count = readNumber(reader, false) ?? 1;
      addAtoms(atoms, inside, count);
      continue;
    }
    const two = reader.text.slice(reader.at, reader.at + 2);
    const symbol = SYMBOLS.has(two) ? two : SYMBOLS.has(here) ? here : null;
    if (symbol === null) break;
    reader.at += symbol.length;
    const count = readNumber(reader, false) ?? 1;
    if (count === 0 || count > 9999) return null;
    atoms.set(symbol, (atoms.get(symbol) ?? 0) + count);
  }
  return atoms;
}

/** A number in front of a part may be a fraction (0.5, 1.5); a number behind a symbol is whole. */
function readNumber(reader: Reader, fraction: boolean): number | null {
  const found = (fraction ? /^(\d+\.\d+|\.\d+|\d+)/ : /^\d+/).exec(reader.text.slice(reader.at));
  if (found === null) return null;
  reader.at += found[0].length;
  return Number(found[0]);
}
