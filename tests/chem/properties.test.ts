import fc from "fast-check";
import { describe, expect, it } from "vitest";
import type { MixtureText, Root } from "../../chem/index.ts";
import { checkCharge, fractions, mixtureFromText, solve } from "../../chem/index.ts";
import { LEFT, prepare, RIGHT, takeNearestLevels } from "../../chem/mixture.ts";
import { evaluate } from "../../chem/root.ts";
import { roundingBound } from "../../chem/solve.ts";

const RUNS = { seed: 20260101, numRuns: 2000 };

const concentration = fc
  .tuple(fc.integer({ min: 1, max: 9999 }), fc.integer({ min: -11, max: -4 }))
  .map(([digits, power]) => `${digits}e${power}`);
const pKa = fc.integer({ min: -3000, max: 15000 }).map((thousandths) => String(thousandths / 1000));
const family = fc.record({ z0: fc.integer({ min: -1, max: 3 }), pKa: fc.array(pKa, { minLength: 1, maxLength: 6 }) });
const poured = fc.array(fc.record({ family: fc.nat(2), lost: fc.nat(6), concentration }), { maxLength: 6 });

/** Up to three families of up to six protons, constants in any order, forms of any charge, strong acid or base on top. */
const mixtureText = (activity: MixtureText["activity"]): fc.Arbitrary<MixtureText> =>
  fc
    .record({
      families: fc.array(family, { minLength: 1, maxLength: 3 }),
      poured,
      sodium: concentration,
      chloride: concentration,
    })
    .map(({ families, poured: parts, sodium, chloride }) => {
      const named = families.map((one, f) => ({ name: `F${f}`, ...one }));
      const components = parts.map((part) => {
        const f = part.family % named.length;
        const steps = named[f]?.pKa.length ?? 0;
        return { family: `F${f}`, lost: part.lost % (steps + 1), concentration: part.concentration };
      });
      const counterions = components.flatMap((part) => {
        const z = (named.find((one) => one.name === part.family)?.z0 ?? 0) - part.lost;
        return z === 0 ? [] : [{ name: "counter", z: -z, concentration: part.concentration }];
      });
      const ions = [
        ...counterions,
        { name: "Na+", z: 1, concentration: sodium },
        { name: "Cl-", z: -1, concentration: chloride },
      ];
      return { families: named, components, ions, activity, A: "0.509", pKw: "14.00" };
    });

const ideal = mixtureText("ideal");
const davies = mixtureText("davies");
const either = fc.oneof(ideal, davies);

function mixtureOf(text: MixtureText) {
  const read = mixtureFromText(text);
  if (!read.ok) throw new Error(read.reason);
  return read.mixture;
}

function rootOf(text: MixtureText): Root {
  const solution = solve(mixtureOf(text));
  if (!solution.ok) throw new Error(`${solution.reason} ${JSON.stringify(text)}`);
  return solution.root;
}

/** Difference in pH that rounding explains. */
function rounding(text: MixtureText, root: Root): number {
  const total = [...text.components, ...text.ions].reduce((sum, one) => sum + Number(one.concentration), 0);
  return Math.max(1e-12, (2e-15 * total) / root.beta);
}

describe("the solver, for any legal mixture", () => {
  it("gives finite numbers only, with the root inside its enclosure and fractions that add up to 1", () => {
    fc.assert(
      fc.property(either, (text) => {
        const root = rootOf(text);
        const { residual, enclosure, fractions: values, ...numbers } = root;
        expect(Object.values(numbers).every(Number.isFinite)).toBe(true);
        expect(root.pH > enclosure.lowPH && root.pH < enclosure.highPH).toBe(true);
        expect(Math.abs(residual.value)).toBeLessThanOrEqual(residual.bound);
        for (const shares of values) {
          expect(shares.every((share) => share >= 0 && share <= 1)).toBe(true);
          expect(Math.abs(shares.reduce((sum, share) => sum + share, 0) - 1)).toBeLessThan(1e-14);
        }
      }),
      RUNS,
    );
  });

  it("has the second opinion on its side: charge is conserved in double-double arithmetic", () => {
    fc.assert(
      fc.property(either, (text) => {
        const mixture = mixtureOf(text);
        const solution = solve(mixture);
        expect(solution.ok && checkCharge(mixture, solution.root).agrees).toBe(true);
      }),
      RUNS,
    );
  });

  it("has a P that falls strictly with pH", () => {
    fc.assert(
      fc.property(
        ideal,
        fc.double({ min: -2, max: 16, noNaN: true }),
        fc.double({ min: 0.01, max: 3, noNaN: true }),
        (text, pH, step) => {
          const work = prepare(mixtureOf(text));
          const residualAt = (at: number) => {
            evaluate(work, 10 ** -at);
            takeNearestLevels(work);
            evaluate(work, 10 ** -at);
            return { value: (work.sums[LEFT] ?? 0) - (work.sums[RIGHT] ?? 0), bound: roundingBound(work) };
          };
          const [before, after] = [residualAt(pH), residualAt(pH + step)];
          expect(after.value).toBeLessThan(before.value + before.bound + after.bound);
          // [H+] and [OH-] alone make it fall by this much at least.
          const fall = 10 ** -pH - 10 ** -(pH + step) + 10 ** (pH + step - 14) - 10 ** (pH - 14);
          expect(before.value - after.value).toBeGreaterThan(fall * (1 - 1e-9) - before.bound - after.bound);
        },
      ),
      RUNS,
    );
  });

  it("does not depend on the order of rows and families", () => {
    fc.assert(
      fc.property(either, (text) => {
        const turned = {
          ...text,
          families: [...text.families].reverse(),
          components: [...text.components].reverse(),
          ions: [...text.ions].reverse(),
        };
        const [one, other] = [rootOf(text), rootOf(turned)];
        expect(Math.abs(one.pH - other.pH)).toBeLessThan(rounding(text, one));
      }),
      RUNS,
    );
  });

  it("never lowers the pH when strong base is added (ideal)", () => {
    fc.assert(
      fc.property(ideal, concentration, (text, added) => {
        const more = { ...text, ions: [...text.ions, { name: "K+", z: 1, concentration: added }] };
        const before = rootOf(text);
        expect(rootOf(more).pH).toBeGreaterThan(before.pH - rounding(more, before));
      }),
      RUNS,
    );
  });

  it("does not move (ideal) when a neutral salt is added, however much", () => {
    fc.assert(
      fc.property(ideal, (text) => {
        const salted = {
          ...text,
          ions: [
            ...text.ions,
            { name: "K+", z: 1, concentration: "7.77" },
            { name: "Br-", z: -1, concentration: "7.77" },
          ],
        };
        expect(rootOf(salted).pH).toBe(rootOf(text).pH);
      }),
      { ...RUNS, numRuns: 500 },
    );
  });

  it("is a mirror: exchanging acid and base turns pH into pKw − pH (ideal)", () => {
    fc.assert(
      fc.property(ideal, (text) => {
        const mirrored: MixtureText = {
          ...text,
          families: text.families.map(({ name, z0, pKa: steps }) => ({
            name,
            z0: steps.length - z0,
            pKa: [...steps].reverse().map((value) => String(Number((14 - Number(value)).toFixed(6)))),
          })),
          components: text.components.map((part) => {
            const steps = text.families.find((one) => one.name === part.family)?.pKa.length ?? 0;
            return { ...part, lost: steps - part.lost };
          }),
          ions: text.ions.map((one) => ({ ...one, z: -one.z })),
        };
        const root = rootOf(text);
        expect(Math.abs(14 - rootOf(mirrored).pH - root.pH)).toBeLessThan(10 * rounding(text, root));
      }),
      RUNS,
    );
  });

  it("has a buffer capacity that differences of the residual confirm (ideal)", () => {
    fc.assert(
      fc.property(ideal, (text) => {
        const root = rootOf(text);
        const work = prepare(mixtureOf(text));
        const step = 1e-4;
        const residualAt = (pH: number) => {
          evaluate(work, 10 ** -pH);
          takeNearestLevels(work);
          evaluate(work, 10 ** -pH);
          return (work.sums[LEFT] ?? 0) - (work.sums[RIGHT] ?? 0);
        };
        const slope = (residualAt(root.pH - step) - residualAt(root.pH + step)) / (2 * step);
        expect(Math.abs(slope / root.beta - 1)).toBeLessThan(1e-5);
      }),
      RUNS,
    );
  });
});

describe("fractions", () => {
  it("sum to 1 for twelve steps from pH −2 to 16, constants in any order, without overflow", () => {
    const steps = fc.array(fc.double({ min: -40, max: 40, noNaN: true }), { minLength: 1, maxLength: 12 });
    fc.assert(
      fc.property(steps, fc.double({ min: -2, max: 16, noNaN: true }), (constants, pH) => {
        const values = fractions(constants, pH);
        expect(values.every((value) => value >= 0 && value <= 1)).toBe(true);
        expect(Math.abs(values.reduce((sum, value) => sum + value, 0) - 1)).toBeLessThan(1e-14);
      }),
      RUNS,
    );
  });

  it("agree with Henderson and Hasselbalch for a single step", () => {
    fc.assert(
      fc.property(
        fc.double({ min: -3, max: 15, noNaN: true }),
        fc.double({ min: -2, max: 16, noNaN: true }),
        (constant, pH) => {
          const [acid = 0, base = 0] = fractions([constant], pH);
          expect(Math.abs(acid / (1 / (1 + 10 ** (pH - constant))) - 1)).toBeLessThan(1e-12);
          expect(Math.abs(base / (1 / (1 + 10 ** (constant - pH))) - 1)).toBeLessThan(1e-12);
        },
      ),
      RUNS,
    );
  });
});
