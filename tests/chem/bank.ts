// `npm run bank -- FILE...`: runs files of reference cases ("cases") and of published worked examples ("items") through the core,
// prints the worst deviation of each, the failing and the refused ids, and exits with 1 when something failed.
// A file may hold either form or both.

import { readFileSync } from "node:fs";
import { z } from "zod";
import type { Exact, MixtureText, Solution } from "../../chem/index.ts";
import {
  checkCharge,
  debyeHuckelA25,
  fractions,
  lnGammaOfUnitCharge,
  mixtureFromText,
  parseDecimal,
  solve,
  TEMPERATURE_C,
} from "../../chem/index.ts";

/** Accuracy asked of pH: max(1e-9, 2e-15 ΣC/β); of fractions, relative, where above 1e-12; of [H+], [OH-], I, relative. */
const PH_FLOOR = 1e-9;
const PH_PER_CONDITION = 2e-15;
const FRACTION_RELATIVE = 1e-9;
const FRACTION_FLOOR = 1e-12;
/** What the banks fix unless a case says otherwise. */
const BANK_A = "0.509";
const BANK_PKW = "14.00";
/** The enclosure is that of the constants as doubles; their rounding moves the root by some 1e-15 for each step. */
const ENCLOSURE_SLACK = 1e-12;
/** Half a unit of the last digit may sit on the edge of a printed tolerance. */
const EDGE = 1e-12;

/** Kinds of worked examples that need metal ions, complexes or solids. */
const NOT_FOR_THIS_SOLVER = new Set([
  "solubility product",
  "precipitation onset",
  "pH for a residual metal",
  "complex dissociation",
  "hydroxide solubility in a buffer",
]);

const text = z.union([z.string(), z.number().transform(String)]);
const ion = z.object({ ion: z.string(), z: z.coerce.number().int(), conc: text });
const component = z.object({ family: z.string(), lost: z.coerce.number().int(), conc: text });

const caseShape = z.object({
  id: z.string(),
  families: z.array(z.object({ name: z.string(), z0: z.number().int(), pKa: z.array(text) })),
  components: z.array(component),
  strong: z.array(ion),
  activity: z.string(),
  A: text.optional(),
  davies: z.object({ A: text }).optional(),
  pKw: text.optional(),
  h_added: text.nullish(),
  oh_added: text.nullish(),
  expect: z.object({
    pH: text,
    ionicStrength: text.optional(),
    H: text.optional(),
    OH: text.optional(),
    fractions: z.record(z.string(), z.array(text)).default({}),
  }),
});
export type BankCase = z.infer<typeof caseShape>;

const inputsShape = z.looseObject({
  kind: z.string().optional(),
  temperatureC: text.nullish(),
  pKw: text.optional(),
  activity: z.string().optional(),
  davies: z.object({ A: text, linear: text }).optional(),
  families: z.array(z.object({ family: z.string(), z0: z.number().int(), pKa: z.array(text) })).optional(),
  components: z.array(component).optional(),
  strong: z.array(ion).optional(),
});
const itemShape = z.object({
  id: z.string(),
  inputs: inputsShape,
  quantity: z.string(),
  printed: text,
  tolerance: text,
});
export type WorkedItem = z.infer<typeof itemShape>;

const fileShape = z.looseObject({ cases: z.array(z.unknown()).optional(), items: z.array(z.unknown()).optional() });

/** `deviation` is a share of what is allowed: 1 is the limit. */
export type Verdict =
  | { id: string; verdict: "passed" | "failed"; deviation: number; detail: string }
  | { id: string; verdict: "refused" | "not-for-this-solver"; detail: string };

export type BankReport = { file: string; cases: Verdict[]; items: Verdict[] };

/** Runs one file. Throws when it is not a bank at all; a single unreadable case is a failed case. */
export function runBank(file: string): BankReport {
  const content = fileShape.parse(JSON.parse(readFileSync(file, "utf8")));
  if (content.cases === undefined && content.items === undefined)
    throw new Error(`${file} holds neither "cases" nor "items".`);
  return {
    file,
    cases: (content.cases ?? []).map((one, k) => judged(caseShape, one, `cases[${k}]`, judgeCase)),
    items: (content.items ?? []).map((one, k) => judged(itemShape, one, `items[${k}]`, judgeItem)),
  };
}

function judged<T>(shape: z.ZodType<T>, raw: unknown, fallbackId: string, judge: (one: T) => Verdict): Verdict {
  const parsed = shape.safeParse(raw);
  if (parsed.success) return judge(parsed.data);
  const id = z.object({ id: z.string() }).safeParse(raw);
  const detail = parsed.error.issues.map((issue) => `${issue.path.join(".")}: ${issue.message}`).join("; ");
  return { id: id.success ? id.data.id : fallbackId, verdict: "failed", deviation: Number.POSITIVE_INFINITY, detail };
}

export function judgeCase(one: BankCase): Verdict {
  if (one.activity !== "ideal" && one.activity !== "davies")
    return { id: one.id, verdict: "refused", detail: `activity model "${one.activity}" is not in the core yet` };
  const solved = solveText({
    families: one.families,
    components: one.components.map(({ family, lost, conc }) => ({ family, lost, concentration: conc })),
    ions: one.strong.map((strong) => ({ name: strong.ion, z: strong.z, concentration: strong.conc })),
    activity: one.activity,
    A: one.A ?? one.davies?.A ?? BANK_A,
    pKw: one.pKw ?? BANK_PKW,
  });
  if (solved.kind === "refused") return { id: one.id, verdict: "refused", detail: solved.reason };
  if (solved.kind === "failed") return failed(one.id, solved.reason);
  const { root, total, netStrongAcid } = solved;
  const added = numberOf(one.h_added ?? "0") - numberOf(one.oh_added ?? "0");
  const isStated = one.h_added != null || one.oh_added != null;
  if (isStated && Math.abs(added - netStrongAcid) > 1e-12 * total)
    return failed(one.id, `the ions say that ${netStrongAcid} mol/L of strong acid was added, the case says ${added}`);
  const worst = { share: 0, what: "" };
  const compare = (what: string, got: number, expected: number, allowed: number) => {
    const share = Math.abs(got - expected) / allowed;
    if (!(share <= worst.share)) {
      worst.share = share;
      worst.what = `${what} ${got} for ${expected}`;
    }
  };
  const pHAllowed = Math.max(PH_FLOOR, (PH_PER_CONDITION * total) / root.beta);
  compare("pH", root.pH, numberOf(one.expect.pH), pHAllowed);
  for (const [f, family] of one.families.entries()) {
    const expected = one.expect.fractions[family.name] ?? [];
    if (expected.length > 0 && expected.length !== root.fractions[f]?.length)
      return failed(one.id, `${family.name}: ${expected.length} fractions expected`);
    expected.forEach((value, lost) => {
      const fraction = numberOf(value);
      const got = root.fractions[f]?.[lost] ?? Number.NaN;
      if (fraction > FRACTION_FLOOR)
        compare(`fraction ${lost} of ${family.name}`, got, fraction, FRACTION_RELATIVE * fraction);
    });
  }
  const relative = (what: string, got: number, expected: string | undefined) => {
    // The digits of pH become relative digits of a concentration, times ln 10.
    if (expected !== undefined) compare(what, got, numberOf(expected), Math.LN10 * pHAllowed * numberOf(expected));
  };
  relative("[H+]", root.H, one.expect.H);
  relative("[OH-]", root.OH, one.expect.OH);
  relative("ionic strength", root.ionicStrength, one.expect.ionicStrength);
  const reference = numberOf(one.expect.pH);
  const { lowPH, highPH } = root.enclosure;
  const isEnclosed = lowPH - ENCLOSURE_SLACK <= reference && reference <= highPH + ENCLOSURE_SLACK;
  if (!isEnclosed && worst.share <= 1)
    return failed(one.id, `the enclosure ${lowPH} to ${highPH} does not hold ${reference}`);
  return { id: one.id, verdict: worst.share <= 1 ? "passed" : "failed", deviation: worst.share, detail: worst.what };
}

type SolvedText =
  | { kind: "solved"; root: Extract<Solution, { ok: true }>["root"]; total: number; netStrongAcid: number }
  | { kind: "refused"; reason: string }
  | { kind: "failed"; reason: string };

/** Solves, has the second opinion look at it, and returns the root, or what went wrong. */
function solveText(mixtureText: MixtureText): SolvedText {
  const read = mixtureFromText(mixtureText);
  if (!read.ok) return { kind: "refused", reason: read.reason };
  const solution = solve(read.mixture);
  if (!solution.ok) return { kind: "failed", reason: solution.reason };
  const opinion = checkCharge(read.mixture, solution.root);
  if (!opinion.agrees)
    return { kind: "failed", reason: `the charge balance contradicts the root: ${opinion.imbalance} mol/L` };
  const sum = (parts: { concentration: Exact }[]) => parts.reduce((all, part) => all + asNumber(part.concentration), 0);
  return {
    kind: "solved",
    root: solution.root,
    total: sum(read.mixture.components) + sum(read.mixture.ions),
    netStrongAcid: asNumber(read.mixture.netStrongAcid),
  };
}

function asNumber(value: Exact): number {
  // Test side only: numerator and denominator may be long, so both are cut to a length that a double holds.
  const excess = Math.max(0, value.denominator.toString(16).length - 200);
  const cut = BigInt(excess * 4);
  return Number(value.numerator >> cut) / Number(value.denominator >> cut);
}

export function judgeItem(one: WorkedItem): Verdict {
  const { kind } = one.inputs;
  if (kind !== undefined && NOT_FOR_THIS_SOLVER.has(kind))
    return { id: one.id, verdict: "not-for-this-solver", detail: kind };
  const got = computeItem(one);
  if (typeof got === "string") return { id: one.id, verdict: "refused", detail: got };
  if (typeof got === "object") return failed(one.id, got.failed);
  const share = Math.abs(got - numberOf(one.printed)) / numberOf(one.tolerance);
  const verdict = share <= 1 + EDGE ? "passed" : "failed";
  return {
    id: one.id,
    verdict,
    deviation: share,
    detail: `${one.quantity} ${got} for ${one.printed} ± ${one.tolerance}`,
  };
}

/** The number asked for, or the reason why the core does not give it yet. */
function computeItem(one: WorkedItem): number | string | { failed: string } {
  switch (one.inputs.kind) {
    case undefined:
    case "buffer capacity":
      return computeSolution(one);
    case "fraction": {
      const shape = z.object({ pKa: z.array(text), lost: text, pH: text });
      const { pKa, lost, pH } = shape.parse(one.inputs);
      return fractions(pKa.map(numberOf), numberOf(pH))[numberOf(lost)] ?? "no such form";
    }
    case "ionic strength": {
      const { ions } = z.object({ ions: z.array(ion) }).parse(one.inputs);
      return ions.reduce((sum, { z: charge, conc }) => sum + (charge * charge * numberOf(conc)) / 2, 0);
    }
    case "activity coefficient": {
      const shape = z.object({ model: z.string(), A: text, z: text, ionicStrength: text });
      const { model, A, z: charge, ionicStrength } = shape.parse(one.inputs);
      if (model.toLowerCase() !== "davies") return `activity model "${model}" is not in the core yet`;
      return Math.exp(numberOf(charge) ** 2 * lnGammaOfUnitCharge("davies", numberOf(A), numberOf(ionicStrength)));
    }
    default:
      return `kind "${one.inputs.kind}" belongs to a later issue`;
  }
}

function computeSolution(one: WorkedItem): number | string | { failed: string } {
  const { activity = "ideal", families, components, strong, temperatureC, davies } = one.inputs;
  if (activity !== "ideal" && activity !== "davies") return `activity model "${activity}" is not in the core yet`;
  if (families === undefined || components === undefined || strong === undefined) return "no composition is given";
  if (temperatureC != null && numberOf(temperatureC) !== numberOf(TEMPERATURE_C))
    return `temperature ${temperatureC} °C: constants are held for ${TEMPERATURE_C} °C only`;
  if (davies !== undefined && numberOf(davies.linear) !== 0.3) return `Davies with linear term ${davies.linear}`;
  const solved = solveText({
    families: families.map(({ family, z0, pKa }) => ({ name: family, z0, pKa })),
    components: components.map(({ family, lost, conc }) => ({ family, lost, concentration: conc })),
    ions: strong.map((added) => ({ name: added.ion, z: added.z, concentration: added.conc })),
    activity,
    A: davies?.A ?? debyeHuckelA25.value,
    pKw: one.inputs.pKw ?? BANK_PKW,
  });
  if (solved.kind === "refused") return solved.reason;
  if (solved.kind === "failed") return { failed: solved.reason };
  const { root } = solved;
  switch (one.quantity) {
    case "pH":
      return root.pH;
    case "pOH":
      return -Math.log10(root.OH * root.gamma1);
    case "[H+]":
      return root.H;
    case "[OH-]":
      return root.OH;
    case "beta":
      return root.beta;
    case "ionic strength":
      return root.ionicStrength;
    default:
      return formConcentration(one, root.fractions) ?? `quantity "${one.quantity}" is not known here`;
  }
}

/** "[H2A]" and its like: the form of the only family that has so many protons left. */
function formConcentration(one: WorkedItem, values: number[][]): number | null {
  const match = /^\[H?(\d*)A(?:\^?[\d+-]*)?\]$/.exec(one.quantity);
  const family = one.inputs.families?.length === 1 ? one.inputs.families[0] : undefined;
  if (match === null || family === undefined) return null;
  const protons = one.quantity.startsWith("[H") ? Number(match[1] === "" ? "1" : match[1]) : 0;
  const total = (one.inputs.components ?? []).reduce((sum, part) => sum + numberOf(part.conc), 0);
  const fraction = values[0]?.[family.pKa.length - protons];
  return fraction === undefined ? null : fraction * total;
}

function failed(id: string, detail: string): Verdict {
  return { id, verdict: "failed", deviation: Number.POSITIVE_INFINITY, detail };
}

function numberOf(value: string): number {
  return parseDecimal(value)?.number ?? Number.NaN;
}

/** One file's report as lines. */
export function reportLines(report: BankReport): string[] {
  const lines = [report.file];
  for (const [form, verdicts] of [
    ["cases", report.cases],
    ["items", report.items],
  ] as const) {
    if (verdicts.length === 0) continue;
    const of = (kind: Verdict["verdict"]) => verdicts.filter((one) => one.verdict === kind);
    lines.push(
      `  ${form}: ${verdicts.length} read, ${of("passed").length} passed, ${of("failed").length} failed, ` +
        `${of("refused").length} refused, ${of("not-for-this-solver").length} not for this solver`,
    );
    const run = verdicts.flatMap((one) => ("deviation" in one ? [one] : []));
    const worst = run.reduce<(typeof run)[number] | null>(
      (most, one) => (most === null || !(one.deviation <= most.deviation) ? one : most),
      null,
    );
    if (worst !== null)
      lines.push(`  worst: ${worst.id}, ${worst.deviation.toExponential(2)} of what is allowed (${worst.detail})`);
    for (const one of of("failed")) lines.push(`  FAILED ${one.id}: ${one.detail}`);
    for (const one of of("refused")) lines.push(`  refused: ${one.id}: ${one.detail}`);
    for (const one of of("not-for-this-solver")) lines.push(`  not for this solver: ${one.id}: ${one.detail}`);
  }
  return lines;
}

function main(files: string[]): number {
  if (files.length === 0) {
    process.stderr.write("Name at least one file: npm run bank -- FILE.json\n");
    return 1;
  }
  let failures = 0;
  for (const file of files) {
    try {
      const report = runBank(file);
      process.stdout.write(`${reportLines(report).join("\n")}\n`);
      failures += [...report.cases, ...report.items].filter((one) => one.verdict === "failed").length;
    } catch (error) {
      process.stderr.write(`${file}: ${error instanceof Error ? error.message : String(error)}\n`);
      failures += 1;
    }
  }
  process.stdout.write(failures === 0 ? "bank: all passed\n" : `bank: ${failures} failed\n`);
  return failures === 0 ? 0 : 1;
}

if (process.argv[1] !== undefined && import.meta.url.endsWith(process.argv[1].split("/").at(-1) ?? "?"))
  process.exitCode = main(process.argv.slice(2));
