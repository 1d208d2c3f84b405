// `npm run bench`, the numerical core's part: the root against a grid sweep of the same residual in the same run, with what comes
// along with a root, with Davies, and whole blocks. Prints `name: value unit` lines. tests/bench.ts runs it.

import { solveBlock, sweepBlock } from "../../chem/index.ts";
import type { Mixture, Work } from "../../chem/mixture.ts";
import { prepare, takeNearestLevels } from "../../chem/mixture.ts";
import { evaluate, fillFractions, findRoot, setIonicStrength } from "../../chem/root.ts";
import { enclose, mixtureFromText } from "../../chem/solve.ts";
import { block, molar, row } from "./library.ts";

const GRID_POINTS = 1401;
const GRID_LOW = 0;
const GRID_HIGH = 14;
/** The best of several short slices: what else runs on the machine then hardly counts. */
const SLICES = 12;
const SLICE_MS = 40;
const WARM_UP_MS = 200;
/** Strong base added, mol/L: another composition for every solve, from acid to alkaline. */
const VARIATIONS = 64;

/** Runs the core's benchmarks; returns the lines that it printed. */
export function runChemBench(print: (line: string) => void = (line) => process.stdout.write(`${line}\n`)): string[] {
  const lines: string[] = [];
  const say = (name: string, value: number, unit: string) => {
    const line = `${name}: ${value >= 100 ? Math.round(value) : value.toPrecision(3)} ${unit}`;
    lines.push(line);
    print(line);
  };
  const ideal = prepare(threeFamilies("ideal"));
  const davies = prepare(threeFamilies("davies"));
  const found = { h: 0, ionicStrength: 0, iterations: 0 };
  const ends = new Float64Array(4);
  const alpha = new Float64Array(ideal.maxSteps + 1);

  const complete = (work: Work) => (k: number) => {
    vary(work, k);
    findRoot(work, found);
    for (let f = 0; f < work.families; f++) fillFractions(work, f, found.h, alpha);
    enclose(work, found.h, ends);
    return found.h;
  };
  const [root = 0, grid = 0, bisection = 0, completeIdeal = 0, completeDavies = 0] = ratesPerSecond([
    (k) => {
      vary(ideal, k);
      findRoot(ideal, found);
      return found.h;
    },
    (k) => {
      vary(ideal, k);
      return sweepGrid(ideal);
    },
    (k) => {
      vary(ideal, k);
      return bisect(ideal);
    },
    complete(ideal),
    complete(davies),
  ]);
  say("chem root alone, ideal, three families", root, "roots/s");
  say("chem grid of 1,401 points, same residual", grid, "sweeps/s");
  say("chem root against grid", root / grid, "times");
  say("chem textbook bisection, same residual", bisection, "roots/s");
  say("chem root against bisection", root / bisection, "times");
  say("chem complete, ideal (fractions, enclosure)", completeIdeal, "roots/s");
  say("chem complete, Davies (fractions, enclosure, ionic strength)", completeDavies, "roots/s");
  for (const families of [1, 2, 4, 8, 16, 32]) {
    const work = prepare(manyFamilies(families));
    const rate = ratePerSecond(() => {
      findRoot(work, found);
      return found.h;
    });
    say(`chem root alone, ideal, ${families} families of three steps`, 1e6 / rate, "µs");
  }

  const reagents = [
    "citric-acid-monohydrate",
    "trisodium-citrate-dihydrate",
    "disodium-hydrogen-phosphate",
    "boric-acid",
  ];
  const big = block(
    Array.from({ length: 40 }, (_, k) => row(`r${k + 1}`, reagents[k % 4] ?? "boric-acid", molar("0.002"))),
  );
  const solved = solveBlock(big);
  if (!solved.ok) throw new Error("the bench's own block is refused");
  say("chem solveBlock, 40 rows, Davies", 1000 / ratePerSecond(() => Number(solveBlock(big).ok)), "ms");
  say(
    "chem sweepBlock, 40 rows, coarse and refined",
    1000 / ratePerSecond(() => sweepBlock(big, solved.value).coarse.pH.length),
    "ms",
  );
  return lines;
}

/** Phosphoric, citric and acetic acid 0.04 mol/L each; pKa of ordinary tables. */
function threeFamilies(activity: "ideal" | "davies"): Mixture {
  return mixtureOf(
    [
      { name: "phosphoric acid", z0: 0, pKa: ["2.148", "7.198", "12.375"] },
      { name: "citric acid", z0: 0, pKa: ["3.127", "4.759", "6.397"] },
      { name: "acetic acid", z0: 0, pKa: ["4.756"] },
    ],
    "0.04",
    activity,
  );
}

function manyFamilies(count: number): Mixture {
  const families = Array.from({ length: count }, (_, k) => ({
    name: `family ${k}`,
    z0: 0,
    pKa: [2, 5, 9].map((pKa) => String(pKa + k / count)),
  }));
  return mixtureOf(families, "0.01", "ideal");
}

function mixtureOf(
  families: { name: string; z0: number; pKa: string[] }[],
  concentration: string,
  activity: "ideal" | "davies",
): Mixture {
  const components = families.map(({ name }) => ({ family: name, lost: 0, concentration }));
  const read = mixtureFromText({ families, components, ions: [], activity, A: "0.509", pKw: "14.00" });
  if (!read.ok) throw new Error(read.reason);
  return read.mixture;
}

/** Changes the strong base in the mixture and with it the sodium ions, and forgets where the last search ended. */
function vary(work: Work, k: number): void {
  const base = (0.35 * ((k * 29) % VARIATIONS)) / VARIATIONS;
  work.base = { hi: base, lo: 0 };
  work.ionsI = base / 2;
  work.nearest.fill(0);
  takeNearestLevels(work);
}

function sweepGrid(work: Work): number {
  setIonicStrength(work, 0);
  let best = 0;
  let smallest = Number.POSITIVE_INFINITY;
  for (let k = 0; k < GRID_POINTS; k++) {
    const pH = GRID_LOW + ((GRID_HIGH - GRID_LOW) * k) / (GRID_POINTS - 1);
    evaluate(work, 10 ** -pH);
    const residual = Math.abs((work.sums[0] ?? 0) - (work.sums[1] ?? 0));
    if (residual < smallest) {
      smallest = residual;
      best = pH;
    }
  }
  return best;
}

function bisect(work: Work): number {
  setIonicStrength(work, 0);
  let low = GRID_LOW - 2;
  let high = GRID_HIGH + 2;
  while (high - low > 1e-13) {
    const middle = (low + high) / 2;
    if (middle <= low || middle >= high) break;
    evaluate(work, 10 ** -middle);
    if ((work.sums[0] ?? 0) > (work.sums[1] ?? 0)) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

// What the runs return is added up, so that nothing can be left out as unused.
let sink = 0;

function ratePerSecond(run: (k: number) => number): number {
  const [rate = 0] = ratesPerSecond([run]);
  return rate;
}

/** Rates of several runs whose slices take turns, so that ratios compare like with like on a busy machine. */
function ratesPerSecond(runs: ((k: number) => number)[]): number[] {
  for (const run of runs) measure(run, WARM_UP_MS);
  const best = runs.map(() => 0);
  for (let slice = 0; slice < SLICES; slice++)
    runs.forEach((run, r) => {
      best[r] = Math.max(best[r] ?? 0, measure(run, SLICE_MS));
    });
  return best;
}

function measure(run: (k: number) => number, milliseconds: number): number {
  const start = performance.now();
  let count = 0;
  let elapsed = 0;
  let batch = 1;
  while (elapsed < milliseconds) {
    for (let k = 0; k < batch; k++) sink += run(count + k);
    count += batch;
    elapsed = performance.now() - start;
    if (elapsed < milliseconds / 20) batch *= 2;
  }
  if (Number.isNaN(sink)) throw new Error("a benchmark returned no number");
  return (count * 1000) / elapsed;
}
