import { describe, expect, it } from "vitest";
import { ABSENT_LN_FREE, solveEquilibrium } from "../../src/chemistry/solve-equilibrium.ts";
import type { MassBalanceProblem, SolveResult } from "../../src/chemistry/types.ts";
import { AppError } from "../../src/errors.ts";
import { seededRandom } from "../../src/numerics/seeded-random.ts";
import { randomSystem } from "../campaigns/random-system.ts";
import { runBalances, runOracle } from "../campaigns/solver.ts";
import { expectRelative } from "../expect-relative.ts";
import { massBalanceProblem } from "./solve-problem.ts";

const everyNumber = (result: SolveResult): number[] => [
  result.residual,
  result.iterations,
  ...result.lnFree,
  ...result.speciesMolPerL,
  ...result.solidsMolPerL,
  ...result.saturationIndex,
];

/** Free metal of a 1:1 complex with constant k and totals m, l: the root of the quadratic, in the form that does not cancel. */
const freeMetal = (k: number, m: number, l: number): number => {
  const b = 1 + k * (l - m);
  const root = Math.sqrt(b * b + 4 * k * m);
  return b > 0 ? (2 * m) / (b + root) : (root - b) / (2 * k);
};

describe("solveEquilibrium", () => {
  it("gives the roots of the quadratic for one 1:1 complex, from weak to very strong, from any start", () => {
    for (const log10K of [-3, 0, 4, 10, 16.5, 30, 60])
      for (const [m, l] of [
        [1e-3, 1e-3],
        [1e-3, 2e-3],
        [1, 1e-8],
        [1e-8, 1e-8],
        [1e-3, 1.000001e-3],
      ] as const) {
        const problem = massBalanceProblem([
          [0, 1, 0],
          [0, 0, 1],
          [log10K, 1, 1],
        ]); // M, L, ML
        for (const options of [{}, { start: [-2, -90] }, { start: [5, 5] }]) {
          const result = solveEquilibrium(problem, [m, l], options);
          expect(result.status).toBe("converged");
          // the constant itself is only known to the rounding of its logarithm; a difference of totals to that of the totals
          expectRelative(
            Math.exp(result.lnFree[0]!),
            freeMetal(Math.exp(log10K * Math.LN10), m, l),
            1e-12 + (m === l || Math.abs(l - m) > 0.1 * m ? 0 : 1e-9),
          );
        }
      }
  });

  it("holds fixed components and leaves their totals alone", () => {
    // M, L, H, ML, HL, OH at a held proton concentration
    const problem = massBalanceProblem([
      [0, 1, 0, 0],
      [0, 0, 1, 0],
      [0, 0, 0, 1],
      [8, 1, 1, 0],
      [9, 0, 1, 1],
      [-14, 0, 0, -1],
    ]);
    const lnH = -5 * Math.LN10;
    const result = solveEquilibrium(problem, [1e-3, 1e-2, 123], { fixedLnFree: [NaN, NaN, lnH] });
    const k = 1e8 / (1 + 1e9 * 1e-5);
    expect(result.status).toBe("converged");
    expect(result.lnFree[2]).toBe(lnH);
    expectRelative(Math.exp(result.lnFree[0]!), freeMetal(k, 1e-3, 1e-2), 1e-12);
    expectRelative(result.speciesMolPerL[5]!, 1e-9, 1e-12);
  });

  it("gives species, solids and floors for components that are absent", () => {
    const problem = massBalanceProblem(
      [
        [0, 1, 0],
        [0, 0, 1],
        [8, 1, 1],
      ],
      [[5, 1, 1]],
    );
    const result = solveEquilibrium(problem, [1e-3, 0]);
    expect(result.status).toBe("converged");
    expectRelative(result.speciesMolPerL[0]!, 1e-3, 1e-15);
    expect([...result.speciesMolPerL.subarray(1)]).toEqual([0, 0]);
    expect(result.lnFree[1]).toBe(ABSENT_LN_FREE);
    expect(everyNumber(result).every(Number.isFinite)).toBe(true);
    const nothing = solveEquilibrium(problem, [0, 0]);
    expect([nothing.status, nothing.residual, ...nothing.speciesMolPerL]).toEqual(["converged", 0, 0, 0, 0]);
  });

  it("refuses a negative total and a wrong number of totals, and takes a total of zero", () => {
    const problem = massBalanceProblem([
      [0, 1, 0],
      [0, 0, 1],
      [8, 1, 1],
    ]);
    expect(() => solveEquilibrium(problem, [1e-3, -1e-9])).toThrow(/total of component 1/);
    expect(() => solveEquilibrium(problem, [1e-3])).toThrow(AppError);
    expect(solveEquilibrium(problem, [1e-3, 0]).status).toBe("converged");
  });

  it("refuses a component without a free species", () => {
    expect(() =>
      solveEquilibrium(
        massBalanceProblem([
          [0, 1, 0],
          [8, 1, 1],
        ]),
        [1, 1],
      ),
    ).toThrow(/component 1 has no free species/);
  });

  it("returns nonFinite, and only finite numbers, for totals and constants that are not finite", () => {
    const problem = massBalanceProblem([
      [0, 1, 0],
      [0, 0, 1],
      [8, 1, 1],
    ]);
    const broken = massBalanceProblem([
      [0, 1, 0],
      [0, 0, 1],
      [NaN, 1, 1],
    ]);
    for (const result of [
      solveEquilibrium(problem, [NaN, 1]),
      solveEquilibrium(problem, [1, Infinity]),
      solveEquilibrium(problem, [1, 1], { fixedLnFree: [-Infinity, NaN] }),
      solveEquilibrium(broken, [1, 1]),
    ]) {
      expect(result.status).toBe("nonFinite");
      expect(everyNumber(result).every(Number.isFinite)).toBe(true);
    }
    expect(solveEquilibrium(problem, [1, 1]).status).toBe("converged");
  });

  it("returns maxIterations when the limit is 1, with finite numbers and its residual", () => {
    const { problem, totals, fixedLnFree } = randomSystem(11, 4);
    const result = solveEquilibrium(problem, totals, { fixedLnFree, maxIterations: 1 });
    expect(result.status).toBe("maxIterations");
    expect(result.residual).toBeGreaterThan(1e-12);
    expect(result.worstComponent).toBeGreaterThanOrEqual(0);
    expect(everyNumber(result).every(Number.isFinite)).toBe(true);
    expect(solveEquilibrium(problem, totals, { fixedLnFree }).status).toBe("converged");
  });

  it("does not change its inputs", () => {
    const { problem, totals, fixedLnFree } = randomSystem(11, 5, { solids: 3 });
    const before = JSON.stringify([[...totals], [...fixedLnFree], [...problem.lnBeta], [...problem.stoichiometry]]);
    solveEquilibrium(problem, totals, { fixedLnFree });
    expect(JSON.stringify([[...totals], [...fixedLnFree], [...problem.lnBeta], [...problem.stoichiometry]])).toBe(
      before,
    );
  });

  it("gives the same answer whatever was solved in between", () => {
    const a = randomSystem(12, 1);
    const first = solveEquilibrium(a.problem, a.totals, { fixedLnFree: a.fixedLnFree });
    solveEquilibrium(
      a.problem,
      a.totals.map((t) => t / 3),
      { fixedLnFree: a.fixedLnFree },
    );
    const again = solveEquilibrium(a.problem, a.totals, { fixedLnFree: a.fixedLnFree });
    expect([...again.lnFree]).toEqual([...first.lnFree]);
    expect([...again.speciesMolPerL]).toEqual([...first.speciesMolPerL]);
  });

  it("does not depend on the order of the species", () => {
    for (let index = 0; index < 20; index++) {
      const { problem, totals, fixedLnFree } = randomSystem(13, index);
      const order = shuffled(problem.nSpecies, index);
      const { nComponents: n } = problem;
      const stoichiometry = new Int8Array(problem.stoichiometry.length);
      order.forEach((from, to) => stoichiometry.set(problem.stoichiometry.subarray(from * n, from * n + n), to * n));
      const permuted: MassBalanceProblem = {
        ...problem,
        stoichiometry,
        lnBeta: Float64Array.from(order, (i) => problem.lnBeta[i]!),
      };
      const a = solveEquilibrium(problem, totals, { fixedLnFree });
      const b = solveEquilibrium(permuted, totals, { fixedLnFree });
      a.lnFree.forEach((value, j) => expectRelative(1 + b.lnFree[j]! - value, 1, 1e-11));
    }
  });

  it("scales: all totals times s with constants times s^(1 - atoms) gives all concentrations times s", () => {
    for (let index = 0; index < 20; index++) {
      const { problem, totals, fixedLnFree } = randomSystem(14, index);
      const n = problem.nComponents;
      const lnScale = Math.log(64);
      const lnBeta = problem.lnBeta.map((value, i) => {
        let atoms = 0;
        for (let j = 1; j < n; j++) atoms += problem.stoichiometry[i * n + j]!;
        return atoms === 0 ? value : value + lnScale * (1 - atoms);
      });
      const a = solveEquilibrium(problem, totals, { fixedLnFree });
      const b = solveEquilibrium(
        { ...problem, lnBeta },
        totals.map((t) => 64 * t),
        { fixedLnFree },
      );
      for (let j = 1; j < n; j++) expectRelative(1 + b.lnFree[j]! - a.lnFree[j]! - lnScale, 1, 1e-11);
    }
  });

  it("says how many digits nearly equal totals cost", () => {
    const problem = massBalanceProblem([
      [0, 1, 0],
      [0, 0, 1],
      [30, 1, 1],
    ]);
    expect(solveEquilibrium(problem, [1e-3, 2e-3]).lostDigits).toBeLessThan(1);
    const near = solveEquilibrium(problem, [1e-3, 1e-3 * (1 + 1e-9)]);
    expectRelative(near.lostDigits, 9.3, 0.02); // 2e-3 against a difference of 1e-12
    expectRelative(Math.exp(near.lnFree[1]!), 1e-3 * (1 + 1e-9) - 1e-3 + 1e-21, 1e-12); // free metal: 1e-21
  });

  it("uses a component that the given start lacks", () => {
    const problem = massBalanceProblem([
      [0, 1, 0],
      [0, 0, 1],
      [8, 1, 1],
    ]);
    const without = solveEquilibrium(problem, [1e-3, 0]);
    const withIt = solveEquilibrium(problem, [1e-3, 5e-4], { start: without.lnFree });
    expectRelative(Math.exp(withIt.lnFree[0]!), freeMetal(1e8, 1e-3, 5e-4), 1e-12);
  });
});

describe("solveEquilibrium on random systems", () => {
  it("converges on every one of 400 with residuals of at most 1e-12, cold and from a near start", () => {
    const figures = runBalances(20261201, 400);
    expect(figures.notConverged).toBe(0);
    expect(figures.worstResidual).toBeLessThanOrEqual(1e-12);
    expect(figures.worstMassActionLn).toBeLessThanOrEqual(1e-11);
    expect(figures.worstNearLn).toBeLessThanOrEqual(1e-9);
  });

  it("agrees with the 50-digit oracle within 1e-9 times the condition, and within 1e-11 where no digits are lost", () => {
    const figures = runOracle(20261202, 4);
    expect(figures.worstErrorPerCondition).toBeLessThanOrEqual(1e-9);
    expect(figures.worstWithoutLossLn).toBeLessThanOrEqual(1e-11);
  });
});

function shuffled(n: number, seed: number): number[] {
  const random = seededRandom(seed, 99);
  const order = Array.from({ length: n }, (_, i) => i);
  for (let i = n - 1; i > 0; i--) {
    const k = random.integerBelow(i + 1);
    [order[i], order[k]] = [order[k]!, order[i]!];
  }
  return order;
}
