// Short symbols for families and ions in written balances. Only what stands in these tables, or letters and digits of a library
// id, ever reaches LaTeX; names that people typed never do.

/** What the protons are attached to: form with k protons left is H_k and this. */
// biome-ignore format: one table, several entries a line
const CORES: Readonly<Record<string, string>> = {
  "sulfuric-acid": "SO4", "phosphoric-acid": "PO4", "pyrophosphoric-acid": "P2O7", "triphosphoric-acid": "P3O10", "arsenic-acid": "AsO4",
  "carbonic-acid": "CO3", "hydrogen-sulfide": "S", "hydrogen-cyanide": "CN", "hydrogen-fluoride": "F", "hypochlorous-acid": "ClO",
  "chlorous-acid": "ClO2", "hypobromous-acid": "BrO", "hypoiodous-acid": "IO", "iodic-acid": "IO3", "nitrous-acid": "NO2",
  "hydrazoic-acid": "N3", "cyanic-acid": "OCN", "sulfurous-acid": "SO3", "thiosulfuric-acid": "S2O3", "dithionous-acid": "S2O4",
  "selenous-acid": "SeO3", "selenic-acid": "SeO4", "hydrogen-selenide": "Se", "chromic-acid": "CrO4", "oxalic-acid": "C2O4",
  "citric-acid": "Cit", "isocitric-acid": "Icit", "tartaric-acid": "Tart", "malic-acid": "Mal", "malonic-acid": "Malon", "maleic-acid": "Male",
  "succinic-acid": "Suc", "fumaric-acid": "Fum", "phthalic-acid": "Phth", "lactic-acid": "Lac", "gluconic-acid": "Gluc", "ascorbic-acid": "Asc",
  "benzoic-acid": "Benz", "salicylic-acid": "Sal", "sorbic-acid": "Sorb", "glycolic-acid": "Glyc", "propanoic-acid": "Prop",
  tris: "Tris", glycine: "Gly", alanine: "Ala", valine: "Val", leucine: "Leu", isoleucine: "Ile", serine: "Ser", threonine: "Thr",
  phenylalanine: "Phe", methionine: "Met", proline: "Pro", tryptophan: "Trp", asparagine: "Asn", glutamine: "Gln", "aspartic-acid": "Asp",
  "glutamic-acid": "Glu", histidine: "His", lysine: "Lys", ornithine: "Orn", arginine: "Arg", cysteine: "Cys", tyrosine: "Tyr",
  edta: "EDTA", nta: "NTA", dtpa: "DTPA", egta: "EGTA", hedta: "HEDTA", cdta: "CDTA", edds: "EDDS", glda: "GLDA", mgda: "MGDA",
  hedp: "HEDP", atmp: "ATMP", mes: "MES", ada: "ADA", aces: "ACES", pipes: "PIPES", mopso: "MOPSO", mops: "MOPS", bes: "BES",
  tes: "TES", hepes: "HEPES", dipso: "DIPSO", mobs: "MOBS", tapso: "TAPSO", epps: "EPPS", heppso: "HEPPSO", taps: "TAPS", tabs: "TABS",
  ampso: "AMPSO", ches: "CHES", capso: "CAPSO", caps: "CAPS",
};

/** Formulas of all forms, in order of protons lost, where "H and a core" would not be what a chemist writes. */
const FORMULAS: Readonly<Record<string, readonly string[]>> = {
  "phosphonic-acid": ["H3PO3", "H2PO3", "HPO3"],
  "phosphinic-acid": ["H3PO2", "H2PO2"],
  "arsenous-acid": ["As(OH)3", "H2AsO3"],
  "boric-acid": ["B(OH)3", "B(OH)4"],
  "silicic-acid": ["Si(OH)4", "H3SiO4", "H2SiO4"],
  "orthoperiodic-acid": ["H5IO6", "H4IO6", "H3IO6", "H2IO6"],
  "telluric-acid": ["Te(OH)6", "TeO(OH)5", "TeO2(OH)4"],
  "hydrogen-peroxide": ["H2O2", "HO2"],
  "sulfamic-acid": ["NH2SO3H", "NH2SO3"],
  ammonia: ["NH4", "NH3"],
  hydrazine: ["N2H6", "N2H5", "N2H4"],
  hydroxylamine: ["NH3OH", "NH2OH"],
  "formic-acid": ["HCOOH", "HCOO"],
  "acetic-acid": ["CH3COOH", "CH3COO"],
  methylamine: ["CH3NH3", "CH3NH2"],
  pyridine: ["C5H5NH", "C5H5N"],
};

// biome-ignore format: one table, several entries a line
const IONS: Readonly<Record<string, string>> = {
  sodium: "Na", potassium: "K", lithium: "Li", rubidium: "Rb", caesium: "Cs", tetramethylammonium: "N(CH3)4",
  tetraethylammonium: "N(C2H5)4", tetrapropylammonium: "N(C3H7)4", tetrabutylammonium: "N(C4H9)4", choline: "C5H14NO",
  chloride: "Cl", bromide: "Br", iodide: "I", nitrate: "NO3", perchlorate: "ClO4", chlorate: "ClO3", bromate: "BrO3", periodate: "IO4",
  thiocyanate: "SCN", permanganate: "MnO4", perrhenate: "ReO4", tetrafluoroborate: "BF4", hexafluorophosphate: "PF6",
  methanesulfonate: "CH3SO3", "p-toluenesulfonate": "CH3C6H4SO3", trifluoromethanesulfonate: "CF3SO3", "dodecyl-sulfate": "C12H25OSO3",
  peroxodisulfate: "S2O8", thiosulfate: "S2O3", dithionate: "S2O6", "hexacyanoferrate-iii": "Fe(CN)6", "hexacyanoferrate-ii": "Fe(CN)6",
  hexachloroplatinate: "PtCl6", molybdate: "MoO4", tungstate: "WO4", triiodide: "I3", calcium: "Ca", magnesium: "Mg", strontium: "Sr",
  barium: "Ba", "manganese-ii": "Mn", "iron-ii": "Fe", "cobalt-ii": "Co", "nickel-ii": "Ni", "copper-ii": "Cu", zinc: "Zn", cadmium: "Cd",
  "mercury-ii": "Hg", "lead-ii": "Pb", "tin-ii": "Sn", beryllium: "Be", aluminium: "Al", "iron-iii": "Fe", "chromium-iii": "Cr",
  "bismuth-iii": "Bi", lanthanum: "La", "cobalt-iii": "Co", silver: "Ag", "copper-i": "Cu", "thallium-i": "Tl", "tin-iv": "Sn",
  "cerium-iv": "Ce", "cerium-iii": "Ce", "dimercury-i": "Hg2", "bismuth-oxide-cation": "BiO",
};

const ABBREVIATED = 4;

export type FamilySymbols = {
  /** stands for the family as a whole, in subscripts of K, c and D */
  label: string;
  /** formula of each form without its charge, index = protons lost */
  forms: string[];
};

/** Symbols of all families of a block; two families never share one. */
export function familySymbols(families: readonly { id: string; forms: readonly unknown[] }[]): FamilySymbols[] {
  const taken = new Set<string>();
  return families.map(({ id, forms }) => {
    const written = Object.hasOwn(FORMULAS, id) ? FORMULAS[id] : undefined;
    if (written !== undefined && written.length === forms.length) {
      const label = freeLabel(written.at(-1) ?? "", taken);
      return { label, forms: [...written] };
    }
    const core = freeLabel(Object.hasOwn(CORES, id) ? (CORES[id] ?? "") : abbreviation(id, taken), taken);
    return {
      label: core,
      forms: forms.map((_, lost) => {
        const protons = forms.length - 1 - lost;
        return protons === 0 ? core : `${protons === 1 ? "H" : `H${protons}`}${core}`;
      }),
    };
  });
}

/** Symbol of a strong ion without its charge. */
export function ionSymbol(ion: string): string {
  return (Object.hasOwn(IONS, ion) ? IONS[ion] : undefined) ?? abbreviation(ion, new Set());
}

/** The first letters of an id, as many as it takes to differ from the others. */
function abbreviation(id: string, taken: ReadonlySet<string>): string {
  const letters = id.replace(/[^A-Za-z]/g, "").toLowerCase();
  for (let length = ABBREVIATED; length < letters.length; length++) {
    const word = capitalised(letters.slice(0, length));
    if (!taken.has(word)) return word;
  }
  return letters === "" ? "X" : capitalised(letters);
}

function capitalised(word: string): string {
  return word.charAt(0).toUpperCase() + word.slice(1);
}

function freeLabel(wanted: string, taken: Set<string>): string {
  let label = wanted;
  while (taken.has(label)) label = `${label}x`;
  taken.add(label);
  return label;
}
