import { describe, expect, it } from "vitest";
import { solveEquilibrium } from "../../src/chemistry/solve-equilibrium.ts";
import { equilibriumSensitivity } from "../../src/chemistry/solve-sensitivity.ts";
import { highPrecisionSolution } from "../campaigns/high-precision-solution.ts";
import { randomSystem } from "../campaigns/random-system.ts";
import { expectRelative } from "../expect-relative.ts";
import { massBalanceProblem } from "./solve-problem.ts";

describe("equilibriumSensitivity", () => {
  it("agrees with finite differences of solved answers, solids present or not", () => {
    let compared = 0;
    for (let index = 0; index < 24; index++) {
      const { problem, totals, fixedLnFree } = randomSystem(51, index, index % 2 === 0 ? {} : { solids: 3 });
      const result = solveEquilibrium(problem, totals, { fixedLnFree });
      const sensitivity = equilibriumSensitivity(problem, totals, result, { fixedLnFree })!;
      if (sensitivity.condition > 100) continue; // differences say little there; the oracle test below covers it
      const n = problem.nComponents;
      const h = 1e-5;
      const present = result.solidsMolPerL.map((amount) => (amount > 0 ? 1 : 0));
      const difference = (changed: (sign: number) => ReturnType<typeof solveEquilibrium>): Float64Array | null => {
        const [up, down] = [changed(1), changed(-1)];
        const same = [up, down].every((r) => r.solidsMolPerL.every((amount, s) => (amount > 0 ? 1 : 0) === present[s]));
        return same ? up.lnFree.map((value, j) => (value - down.lnFree[j]!) / (2 * h)) : null;
      };
      for (let k = 1; k < n; k++) {
        const slopes = difference((sign) =>
          solveEquilibrium(
            problem,
            totals.map((t, j) => (j === k ? t * (1 + sign * h) : t)),
            { fixedLnFree },
          ),
        );
        slopes?.forEach((slope, j) => expectRelative(1e3 + sensitivity.byTotal[j * n + k]!, 1e3 + slope, 1e-8));
        compared++;
      }
      for (let i = index % 5; i < problem.nSpecies; i += 5) {
        const slopes = difference((sign) =>
          solveEquilibrium({ ...problem, lnBeta: problem.lnBeta.map((b, q) => (q === i ? b + sign * h : b)) }, totals, {
            fixedLnFree,
          }),
        );
        slopes?.forEach((slope, j) =>
          expectRelative(1e3 + sensitivity.bySpecies[j * problem.nSpecies + i]!, 1e3 + slope, 1e-8),
        );
      }
      for (let s = 0; s < problem.solids.n; s++) {
        const slopes = difference((sign) => {
          const lnBeta = problem.solids.lnBeta.map((b, q) => (q === s ? b + sign * h : b));
          return solveEquilibrium({ ...problem, solids: { ...problem.solids, lnBeta } }, totals, { fixedLnFree });
        });
        slopes?.forEach((slope, j) =>
          expectRelative(1e3 + sensitivity.bySolid[j * problem.solids.n + s]!, 1e3 + slope, 1e-8),
        );
      }
    }
    expect(compared).toBeGreaterThan(50);
  });

  it("gives the condition that the 50-digit oracle gives, also where nine digits are lost", () => {
    const problem = massBalanceProblem([
      [0, 1, 0],
      [0, 0, 1],
      [30, 1, 1],
    ]);
    for (const totals of [
      [1e-3, 2e-3],
      [1e-3, 1e-3 * (1 + 1e-9)],
      [1e-3, 1e-3],
    ]) {
      const result = solveEquilibrium(problem, totals);
      const exact = highPrecisionSolution(problem, totals, [NaN, NaN], result.lnFree);
      expectRelative(equilibriumSensitivity(problem, totals, result)!.condition, exact.condition, 1e-7); // the answer's own rounding, 1e-15 in 1e-9
    }
  });

  it("is null for an answer that did not converge", () => {
    const { problem, totals, fixedLnFree } = randomSystem(51, 0);
    const stopped = solveEquilibrium(problem, totals, { fixedLnFree, maxIterations: 0 });
    expect(equilibriumSensitivity(problem, totals, stopped, { fixedLnFree })).toBe(null);
    const solved = solveEquilibrium(problem, totals, { fixedLnFree });
    expect(equilibriumSensitivity(problem, totals, solved, { fixedLnFree })).not.toBe(null);
  });
});
