import { describe, expect, it } from "vitest";
import { eliminatedSolver } from "../../src/chemistry/solve-eliminated.ts";
import { ABSENT_LN_FREE, solveEquilibrium } from "../../src/chemistry/solve-equilibrium.ts";
import { randomSystem } from "../campaigns/random-system.ts";
import { runEliminated } from "../campaigns/eliminated.ts";
import { expectRelative } from "../expect-relative.ts";
import { massBalanceProblem } from "./solve-problem.ts";

describe("eliminatedSolver", () => {
  // M, N, L, A, H, ML, NL, MA, MA2, NA, HL, HA
  const problem = massBalanceProblem([
    [0, 1, 0, 0, 0, 0],
    [0, 0, 1, 0, 0, 0],
    [0, 0, 0, 1, 0, 0],
    [0, 0, 0, 0, 1, 0],
    [0, 0, 0, 0, 0, 1],
    [16.5, 1, 0, 1, 0, 0],
    [10.7, 0, 1, 1, 0, 0],
    [2.3, 1, 0, 0, 1, 0],
    [4.6, 1, 0, 0, 2, 0],
    [1.1, 0, 1, 0, 1, 0],
    [10.2, 0, 0, 1, 0, 1],
    [9.3, 0, 0, 0, 1, 1],
  ]);
  const fixedLnFree = [NaN, NaN, NaN, NaN, -9 * Math.LN10];

  it("follows a titration to the same answers as the general solver, without help from it", () => {
    const solver = eliminatedSolver(problem, fixedLnFree, [0, 1])!;
    const lnFree = Float64Array.of(-12, -12, -30, -4, 0);
    for (let point = 1; point <= 60; point++) {
      const totals = [1e-3, 1e-3, point * 5e-5, 0.1, 0];
      const evidence = solver.solve(totals, lnFree);
      const general = solveEquilibrium(problem, totals, { fixedLnFree });
      expect([evidence.status, evidence.method]).toEqual(["converged", "eliminated"]);
      expect(evidence.residual).toBeLessThanOrEqual(1e-12);
      general.lnFree.forEach((value, j) => expectRelative(1 + lnFree[j]! - value, 1, 1e-10));
    }
  });

  it("leaves out components that are absent, kept or eliminated", () => {
    const solver = eliminatedSolver(problem, fixedLnFree, [0, 1])!;
    const lnFree = Float64Array.of(-12, -12, -30, -4, 0);
    for (const totals of [
      [0, 1e-3, 1e-4, 0.1, 0],
      [1e-3, 1e-3, 0, 0.1, 0],
      [1e-3, 1e-3, 1e-4, 0, 0],
      [1e-3, 1e-3, 5e-4, 0.1, 0],
    ]) {
      const evidence = solver.solve(totals, lnFree);
      expect(evidence.status).toBe("converged");
      const general = solveEquilibrium(problem, totals, { fixedLnFree });
      general.lnFree.forEach((value, j) => expectRelative(1 + lnFree[j]! - value, 1, 1e-10));
      totals.slice(0, 4).forEach((total, j) => {
        if (total === 0) expect(lnFree[j]).toBe(ABSENT_LN_FREE);
      });
    }
  });

  it("hands over to the general solver where nearly equal totals would cost digits", () => {
    const strong = massBalanceProblem([
      [0, 1, 0],
      [0, 0, 1],
      [30, 1, 1],
    ]);
    const free = [NaN, NaN];
    const solver = eliminatedSolver(strong, free, [0])!;
    const lnFree = Float64Array.of(-30, -30);
    expect(solver.solve([1e-3, 1e-3], lnFree)).toMatchObject({ status: "converged", method: "general" });
    expectRelative(lnFree[0]!, 0.5 * Math.log(1e-33), 1e-12);
    expect(solver.solve([1e-3, 2e-3], lnFree)).toMatchObject({ status: "converged", method: "eliminated" });
  });

  it("eliminates exactly a metal that also stands in species with several of its atoms, however much they hold", () => {
    for (const log10Beta of [2, 4, 9, 14]) {
      const dinuclear = massBalanceProblem([
        [0, 1, 0],
        [0, 0, 1],
        [6, 1, 1],
        [log10Beta, 2, 1],
        [log10Beta + 3, 3, 2],
      ]);
      const lnFree = Float64Array.of(-14, -8);
      const evidence = eliminatedSolver(dinuclear, [NaN, NaN], [0])!.solve([1e-4, 1e-3], lnFree);
      expect(evidence.method).toBe("eliminated");
      const general = solveEquilibrium(dinuclear, [1e-4, 1e-3]);
      general.lnFree.forEach((value, j) => expectRelative(1 + lnFree[j]! - value, 1, 1e-12));
    }
  });

  it("includes species of two metals as a correction while they are few, and hands over when they are not", () => {
    for (const [log10Beta, method] of [
      [4, "eliminated"],
      [2, "eliminated"],
      [13, "general"],
    ] as const) {
      const mixed = massBalanceProblem([
        [0, 1, 0, 0],
        [0, 0, 1, 0],
        [0, 0, 0, 1],
        [6, 1, 0, 1],
        [5, 0, 1, 1],
        [log10Beta, 1, 1, 1],
      ]);
      const totals = [1e-4, 2e-4, 1e-3];
      const lnFree = Float64Array.of(-14, -14, -8);
      const evidence = eliminatedSolver(mixed, [NaN, NaN, NaN], [0, 1])!.solve(totals, lnFree);
      const general = solveEquilibrium(mixed, totals);
      expect(evidence.method).toBe(method);
      general.lnFree.forEach((value, j) => expectRelative(1 + lnFree[j]! - value, 1, 1e-12));
      expectRelative(evidence.polynuclearShare, general.speciesMolPerL[5]! / 1e-4, 1e-3);
    }
  });

  it("does not apply to an unknown of mixed sign, and applies once that is held", () => {
    const { problem: mixed, fixedLnFree: held } = randomSystem(61, 0);
    const none = new Float64Array(mixed.nComponents).fill(NaN);
    expect(eliminatedSolver(mixed, none, [1, 2])).toBe(null);
    expect(eliminatedSolver(mixed, held, [1, 2])).not.toBe(null);
  });

  it("takes other constants and another acidity as if it had been made with them", () => {
    let compared = 0;
    for (let index = 0; index < 60; index++) {
      const { problem: mixed, totals, fixedLnFree: held, metals } = randomSystem(77, index);
      const moved = { ...mixed, lnBeta: mixed.lnBeta.slice() };
      const solver = eliminatedSolver(moved, held, metals);
      moved.lnBeta.forEach((value, i) => (moved.lnBeta[i] = i < mixed.nComponents ? value : value + Math.sin(i)));
      const other = held.map((value) => value - 0.4);
      const anew = eliminatedSolver(moved, other, metals);
      if (!solver || !anew || !solver.refill(other)) continue;
      const start = solveEquilibrium(moved, totals, { fixedLnFree: other }).lnFree;
      const [a, b] = [start.slice(), start.slice()];
      const method = solver.solve(totals, a).method;
      expect(anew.solve(totals, b).method).toBe(method);
      expect([...a]).toEqual([...b]);
      if (method === "eliminated") compared++;
    }
    expect(compared).toBeGreaterThan(10);
  });

  it("agrees with the general solver on 200 random systems from a disturbed start", () => {
    const figures = runEliminated(20261204, 200);
    expect(figures.notConverged).toBe(0);
    expect(figures.byElimination).toBeGreaterThan(40);
    expect(figures.worstDifferenceLn).toBeLessThanOrEqual(1e-10);
    expect(figures.worstResidual).toBeLessThanOrEqual(1e-12);
  });
});
