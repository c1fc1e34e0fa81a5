import { describe, expect, it } from "vitest";
import { solveEquilibrium } from "../../src/chemistry/solve-equilibrium.ts";
import { protonTotalAtNeutrality, solveWithProtonTotal } from "../../src/chemistry/solve-with-proton-total.ts";
import { findRoot } from "../../src/numerics/find-root.ts";
import { seededRandom } from "../../src/numerics/seeded-random.ts";
import { randomSystem } from "../campaigns/random-system.ts";
import { expectRelative } from "../expect-relative.ts";
import { massBalanceProblem } from "./solve-problem.ts";

describe("solveWithProtonTotal", () => {
  const pH = (lnH: number): number => -lnH / Math.LN10;

  it("finds pure water, strong acid and strong base", () => {
    const water = massBalanceProblem([
      [0, 1],
      [-14, -1],
    ]);
    for (const total of [0, 0.1, -0.1, 1e-7, -1e-7, 1e-9]) {
      const result = solveWithProtonTotal(water, [0], total);
      expect(result.status).toBe("converged");
      const larger = (Math.abs(total) + Math.sqrt(total * total + 4e-14)) / 2; // the root that does not cancel
      expectRelative(pH(result.lnFree[0]!), total < 0 ? 14 + Math.log10(larger) : -Math.log10(larger), 1e-13);
    }
  });

  it("finds a weak acid: 0.1 mol/L with pKa 4.76 from the cubic of its charge balance", () => {
    const acid = massBalanceProblem([
      [0, 1, 0],
      [0, 0, 1],
      [-14, -1, 0],
      [4.76, 1, 1],
    ]); // H, A, OH, HA
    const totals = [0, 0.1];
    const result = solveWithProtonTotal(acid, totals, protonTotalAtNeutrality([1, -1], totals, 0));
    const ka = 10 ** -4.76;
    const charge = (h: number): number => h - 1e-14 / h - (0.1 * ka) / (h + ka);
    expectRelative(Math.exp(result.lnFree[0]!), findRoot(charge, 1e-4, 1e-2).x, 1e-11);
    const base = solveWithProtonTotal(acid, totals, protonTotalAtNeutrality([1, -1], totals, 0.1)); // its sodium salt
    const salt = (h: number): number => h + 0.1 - 1e-14 / h - (0.1 * ka) / (h + ka);
    expectRelative(Math.exp(base.lnFree[0]!), findRoot(salt, 1e-10, 1e-7).x, 1e-9);
  });

  it("inverts the solve at fixed protons on random systems, negative proton totals included", () => {
    let negative = 0;
    for (let index = 0; index < 60; index++) {
      const { problem, totals, fixedLnFree } = randomSystem(41, index);
      const lnH = -Math.LN10 * (1 + 12 * seededRandom(42, index).uniform());
      fixedLnFree[0] = lnH;
      const fixed = solveEquilibrium(problem, totals, { fixedLnFree });
      let protons = 0;
      let bulk = 0;
      for (let i = 0; i < problem.nSpecies; i++) {
        const a = problem.stoichiometry[i * problem.nComponents]!;
        protons += a * fixed.speciesMolPerL[i]!;
        bulk += Math.abs(a) * fixed.speciesMolPerL[i]!;
      }
      if (protons < 0) negative++;
      const result = solveWithProtonTotal(problem, totals, protons);
      expect(result.status).toBe("converged");
      // the proton total is known to its rounding only: what that allows in the free protons is checked through the balance
      expect(result.residual).toBeLessThanOrEqual(1e-12);
      const back = solveEquilibrium(problem, totals, {
        fixedLnFree: fixedLnFree.map((v, j) => (j === 0 ? result.lnFree[0]! : v)),
      });
      let again = 0;
      for (let i = 0; i < problem.nSpecies; i++)
        again += problem.stoichiometry[i * problem.nComponents]! * back.speciesMolPerL[i]!;
      expect(Math.abs(again - protons)).toBeLessThanOrEqual(1e-11 * bulk);
    }
    expect(negative).toBeGreaterThan(5);
  });

  it("gives free protons that rise with their total", () => {
    const { problem, totals } = randomSystem(43, 2);
    let before = -Infinity;
    for (const total of [-1, -1e-2, -1e-5, 0, 1e-5, 1e-2, 1]) {
      const result = solveWithProtonTotal(problem, totals, total);
      expect(result.lnFree[0]!).toBeGreaterThan(before);
      before = result.lnFree[0]!;
    }
  });

  it("refuses protons that are also held fixed, and takes them when unknown", () => {
    const water = massBalanceProblem([
      [0, 1],
      [-14, -1],
    ]);
    expect(() => solveWithProtonTotal(water, [0], 0, { fixedLnFree: [-16] })).toThrow(/unknown/);
    expect(solveWithProtonTotal(water, [0], 0, { fixedLnFree: [NaN] }).status).toBe("converged");
  });
});
