// A solved block for tests of what is shown: 0.0400 mol/L citric acid with 0.0150 mol/L disodium hydrogen citrate, activity
// coefficients 1, solved here by plain bisection, apart from the engine. The constants are those of Goldberg, Kishore and
// Lennen, J. Phys. Chem. Ref. Data 31 (2002) 231 (from memory).

import type { Balance, SolvedBlock, Sweep, Sweeps, Term } from "../../../chem/index.ts";

const PKA = [3.128, 4.761, 6.396] as const;
const PKW = 13.995;
const C1 = 0.04;
const C2 = 0.015;
const NAMES = ["citric acid", "dihydrogen citrate", "hydrogen citrate", "citrate"] as const;
const LATEX = ["\\mathrm{H_{3}Cit}", "\\mathrm{H_{2}Cit^{-}}", "\\mathrm{HCit^{2-}}", "\\mathrm{Cit^{3-}}"] as const;

export function citrateBlock(): { solved: SolvedBlock; sweeps: Sweeps } {
  let low = 0;
  let high = 14;
  for (let step = 0; step < 200 && low < high; step += 1) {
    const middle = (low + high) / 2;
    if (residualAt(middle) > 0) low = middle;
    else high = middle;
  }
  const pH = (low + high) / 2;
  const { H, OH, alpha } = stateAt(pH);
  const a = (lost: number) => alpha[lost] ?? 0;
  const term = (
    side: "left" | "right",
    coefficient: number,
    latex: string,
    value: number,
    reference: string,
    reaction: string,
  ): Term => ({
    side,
    coefficient,
    latex,
    value,
    reference,
    reaction,
    plain: `${reaction}: ${value.toExponential(5)} mol/L`,
  });
  const terms = [
    term("left", 1, "[\\mathrm{H^{+}}]", H, "water", "water"),
    term("left", 2, "2\\,c_{2}\\,\\alpha_{0}", 2 * C2 * a(0), "r2", "hydrogen citrate → citric acid"),
    term("left", 1, "c_{2}\\,\\alpha_{1}", C2 * a(1), "r2", "hydrogen citrate → dihydrogen citrate"),
    term("right", 1, "[\\mathrm{OH^{-}}]", OH, "water", "water"),
    term("right", 1, "c_{1}\\,\\alpha_{1}", C1 * a(1), "r1", "citric acid → dihydrogen citrate"),
    term("right", 2, "2\\,c_{1}\\,\\alpha_{2}", 2 * C1 * a(2), "r1", "citric acid → hydrogen citrate"),
    term("right", 3, "3\\,c_{1}\\,\\alpha_{3}", 3 * C1 * a(3), "r1", "citric acid → citrate"),
    term("right", 1, "c_{2}\\,\\alpha_{3}", C2 * a(3), "r2", "hydrogen citrate → citrate"),
  ];
  const sum = balance("proton-condition", "Proton condition, counted from what was poured in", terms);
  const component = (reference: string, title: string) =>
    balance(
      "proton-condition-component",
      title,
      terms.filter((each) => each.reference === reference),
    );
  const I = 0.5 * (H + OH + 2 * C2 + (C1 + C2) * (a(1) + 4 * a(2) + 9 * a(3)));
  const solved: SolvedBlock = {
    engine: "0.1.0",
    pH,
    H,
    OH,
    ionicStrength: I,
    beta: betaAt(pH),
    activity: {
      model: "ideal",
      label: "Ideal",
      rangeText: "only at vanishing ionic strength",
      A: 0.5103,
      maxIonicStrength: 0.001,
    },
    activityCoefficients: [
      { z: 0, gamma: 1 },
      { z: 1, gamma: 1 },
      { z: 2, gamma: 1 },
      { z: 3, gamma: 1 },
    ],
    pKw: { thermodynamic: PKW, conditional: PKW, source: "IAPWS R11-24" },
    iterations: 7,
    residual: { value: 1e-18, bound: 3e-17 },
    enclosure: { lowPH: pH - 1e-12, highPH: pH + 1e-12 },
    composition: [
      { row: "r1", name: "citric acid", formula: "H3C6H5O7", concentration: C1 },
      { row: "r2", name: "disodium hydrogen citrate sesquihydrate", formula: "Na2HC6H5O7·1.5H2O", concentration: C2 },
    ],
    species: [
      {
        family: "water",
        name: "hydrogen ion",
        latex: "\\mathrm{H^{+}}",
        z: 1,
        lost: null,
        concentration: H,
        fraction: null,
      },
      {
        family: "water",
        name: "hydroxide ion",
        latex: "\\mathrm{OH^{-}}",
        z: -1,
        lost: null,
        concentration: OH,
        fraction: null,
      },
      ...NAMES.map((name, lost) => ({
        family: "citric",
        name,
        latex: LATEX[lost] ?? "",
        z: -lost,
        lost,
        concentration: (C1 + C2) * a(lost),
        fraction: a(lost),
      })),
      {
        family: "ion",
        name: "sodium ion",
        latex: "\\mathrm{Na^{+}}",
        z: 1,
        lost: null,
        concentration: 2 * C2,
        fraction: null,
      },
    ],
    protonCondition: {
      components: [
        component("water", "water"),
        component("r1", "citric acid"),
        component("r2", "disodium hydrogen citrate"),
      ],
      sum,
    },
    massBalances: [
      balance("mass", "Mass balance, citric acid", [
        term("left", 1, "c_{1}", C1, "r1", "citric acid poured in"),
        term("left", 1, "c_{2}", C2, "r2", "disodium hydrogen citrate poured in"),
        ...NAMES.map((name, lost) => term("right", 1, `[${LATEX[lost] ?? ""}]`, (C1 + C2) * a(lost), "", name)),
      ]),
    ],
    chargeBalance: balance("charge", "Charge balance", [
      term("left", 1, "[\\mathrm{H^{+}}]", H, "water", "hydrogen ion"),
      term("left", 1, "[\\mathrm{Na^{+}}]", 2 * C2, "r2", "sodium ion"),
      term("right", 1, "[\\mathrm{OH^{-}}]", OH, "water", "hydroxide ion"),
      ...[1, 2, 3].map((z) =>
        term("right", z, `${z === 1 ? "" : z}[${LATEX[z] ?? ""}]`, z * (C1 + C2) * a(z), "", NAMES[z] ?? ""),
      ),
    ]),
    fractions: [
      {
        family: "citric",
        name: "citric acid",
        latex: [
          "\\alpha_{0}=\\frac{h^{3}}{D}",
          "\\alpha_{1}=\\frac{K_{1}h^{2}}{D}",
          "\\alpha_{2}=\\frac{K_{1}K_{2}h}{D}",
          "\\alpha_{3}=\\frac{K_{1}K_{2}K_{3}}{D}",
          "D=h^{3}+K_{1}h^{2}+K_{1}K_{2}h+K_{1}K_{2}K_{3},\\quad h=[\\mathrm{H^{+}}]",
        ],
        plain: "Each fraction is its own term divided by the sum D of all four terms.",
        values: [...alpha],
      },
    ],
    activityDefinitions: [
      {
        latex: "K_{i}=K_{i}^{\\circ}\\frac{\\gamma_{i-1}}{\\gamma_{1}\\gamma_{i}}",
        plain: "The conditional constant is the thermodynamic one times a ratio of activity coefficients.",
      },
    ],
    constants: PKA.map((pKa, index) => ({
      id: `citric.${index + 1}.v1`,
      pKa: String(pKa),
      basis: "thermodynamic",
      ionicStrength: null,
      temperatureC: "25.0",
      uncertainty: index === 0 ? "0.010" : null,
      source: "Goldberg, Kishore, Lennen, J. Phys. Chem. Ref. Data 31 (2002) 231",
      fromMemory: index === 1,
      nominal: false,
      disputed: index === 2 ? "sources differ by 0.03" : null,
      family: "citric",
      familyName: "citric acid",
      step: index + 1,
      conditional: pKa,
    })),
    leftOut: [],
    comparison: { measured: 3.1, calculated: pH, difference: 3.1 - pH, jointUncertainty: null },
  };
  return { solved, sweeps: { coarse: sweep(0, 0.1, 141), refined: sweep(pH - 0.02, 0.0002, 201) } };
}

function stateAt(pH: number) {
  const H = 10 ** -pH;
  const K = PKA.map((pKa) => 10 ** -pKa);
  const weights = [
    H ** 3,
    (K[0] ?? 0) * H ** 2,
    (K[0] ?? 0) * (K[1] ?? 0) * H,
    (K[0] ?? 0) * (K[1] ?? 0) * (K[2] ?? 0),
  ];
  const total = weights.reduce((sum, weight) => sum + weight, 0);
  return { H, OH: 10 ** (pH - PKW), alpha: weights.map((weight) => weight / total) };
}

function sidesAt(pH: number) {
  const { H, OH, alpha } = stateAt(pH);
  const a = (lost: number) => alpha[lost] ?? 0;
  return { left: H + C2 * (2 * a(0) + a(1)), right: OH + C1 * (a(1) + 2 * a(2) + 3 * a(3)) + C2 * a(3) };
}

function residualAt(pH: number): number {
  const { left, right } = sidesAt(pH);
  return left - right;
}

function betaAt(pH: number): number {
  const { H, OH, alpha } = stateAt(pH);
  const mean = alpha.reduce((sum, share, lost) => sum + lost * share, 0);
  const square = alpha.reduce((sum, share, lost) => sum + lost * lost * share, 0);
  return Math.LN10 * (H + OH + (C1 + C2) * (square - mean * mean));
}

function sweep(from: number, step: number, count: number): Sweep {
  const pH = Array.from({ length: count }, (_, index) => from + index * step);
  return {
    pH,
    logResidual: pH.map((at) => Math.log10(Math.abs(residualAt(at)))),
    left: pH.map((at) => sidesAt(at).left),
    right: pH.map((at) => sidesAt(at).right),
    fractions: [
      {
        family: "citric",
        name: "citric acid",
        forms: [...NAMES],
        latex: [...LATEX],
        values: NAMES.map((_, lost) => pH.map((at) => stateAt(at).alpha[lost] ?? 0)),
      },
    ],
    beta: pH.map(betaAt),
    H: pH.map((at) => stateAt(at).H),
    OH: pH.map((at) => stateAt(at).OH),
  };
}

function balance(kind: Balance["kind"], title: string, terms: Term[]): Balance {
  const of = (side: "left" | "right") => terms.filter((term) => term.side === side);
  const total = (side: "left" | "right") => of(side).reduce((sum, term) => sum + term.value, 0);
  const written = (side: "left" | "right", text: (term: Term) => string) => of(side).map(text).join(" + ") || "0";
  const number = (term: Term) =>
    term.value.toExponential(4).replace(/e([+-]\d+)/, (_, power) => `\\times 10^{${Number(power)}}`);
  return {
    kind,
    title,
    terms,
    left: total("left"),
    right: total("right"),
    difference: total("left") - total("right"),
    roundingBound: 3e-17,
    latex: `${written("left", (term) => term.latex)} = ${written("right", (term) => term.latex)}`,
    latexNumbers: `${written("left", number)} = ${written("right", number)}`,
    plain: `${title}. Left: ${of("left")
      .map((term) => term.plain)
      .join("; ")}. Right: ${of("right")
      .map((term) => term.plain)
      .join("; ")}.`,
  };
}
