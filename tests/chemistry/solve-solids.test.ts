import { describe, expect, it } from "vitest";
import { solveEquilibrium } from "../../src/chemistry/solve-equilibrium.ts";
import { solveActiveSet } from "../../src/chemistry/solve-solids.ts";
import { compileProblem } from "../../src/chemistry/solve-structure.ts";
import { coldStart } from "../../src/chemistry/solve-start.ts";
import { randomSystem } from "../campaigns/random-system.ts";
import { runSolids } from "../campaigns/solver.ts";
import { expectRelative } from "../expect-relative.ts";
import { massBalanceProblem } from "./solve-problem.ts";

describe("solveEquilibrium with solids", () => {
  const silver = (): ReturnType<typeof massBalanceProblem> =>
    massBalanceProblem(
      // Ag, Cl, I; solids AgCl (pKsp 9.7), AgI (pKsp 16.0)
      [
        [0, 1, 0, 0],
        [0, 0, 1, 0],
        [0, 0, 0, 1],
      ],
      [
        [9.7, 1, 1, 0],
        [16, 1, 0, 1],
      ],
    );

  it("dissolves a 1:1 salt to the square root of its solubility product", () => {
    const result = solveEquilibrium(silver(), [1e-2, 1e-2, 0]);
    expect(result.status).toBe("converged");
    expectRelative(Math.exp(result.lnFree[0]!), 10 ** -4.85, 1e-12);
    expectRelative(result.solidsMolPerL[0]!, 1e-2 - 10 ** -4.85, 1e-12);
    expect(result.saturationIndex[0]).toBe(0);
  });

  it("lets iodide go first and chloride join when its product is reached", () => {
    const early = solveEquilibrium(silver(), [0.5e-2, 1e-2, 1e-2]);
    expect(early.solidsMolPerL[0]).toBe(0);
    expect(early.saturationIndex[0]).toBeLessThan(0);
    expectRelative(early.solidsMolPerL[1]!, 0.5e-2, 1e-9);
    const late = solveEquilibrium(silver(), [1.5e-2, 1e-2, 1e-2]);
    expect([...late.saturationIndex]).toEqual([0, 0]);
    expectRelative(Math.exp(late.lnFree[1]! - late.lnFree[2]!), 10 ** (16 - 9.7), 1e-11); // ratio of the products
    expectRelative(late.solidsMolPerL[0]! + late.solidsMolPerL[1]! + Math.exp(late.lnFree[0]!), 1.5e-2, 1e-12);
  });

  it("forms nothing just below saturation and something just above it", () => {
    const at = 10 ** -4.85;
    expect(solveEquilibrium(silver(), [at * (1 - 1e-6), at * (1 - 1e-6), 0]).solidsMolPerL[0]).toBe(0);
    const above = solveEquilibrium(silver(), [at * (1 + 1e-6), at * (1 + 1e-6), 0]);
    expectRelative(above.solidsMolPerL[0]!, at * 1e-6, 1e-6);
    const on = solveEquilibrium(silver(), [at, at, 0]);
    expect(on.status).toBe("converged");
    expect(Math.abs(on.saturationIndex[0]!)).toBeLessThan(1e-12);
  });

  it("solves a 1:2 salt: CaF2 with equal equivalents follows the cube root", () => {
    const problem = massBalanceProblem(
      [
        [0, 1, 0],
        [0, 0, 1],
      ],
      [[10.4, 1, 2]],
    );
    const result = solveEquilibrium(problem, [1e-2, 2e-2]);
    const solubility = (10 ** -10.4 / 4) ** (1 / 3);
    expectRelative(Math.exp(result.lnFree[0]!), solubility, 1e-12);
    expectRelative(result.speciesMolPerL[1]!, 2 * solubility, 1e-12);
  });

  it("keeps only the less soluble of two solids that compete for one free component", () => {
    // M with two solids of its own at held partners: both rows reduce to M alone
    const problem = massBalanceProblem(
      [
        [0, 1, 0, 0],
        [0, 0, 1, 0],
        [0, 0, 0, 1],
      ],
      [
        [12, 1, 1, 0],
        [9, 1, 0, 1],
      ],
    );
    const fixedLnFree = [NaN, Math.log(1e-4), Math.log(1e-3)];
    for (const activeSolids of [[], [0], [1], [0, 1]]) {
      const result = solveEquilibrium(problem, [1e-3, 0, 0], { fixedLnFree, activeSolids });
      expect(result.status).toBe("converged");
      expectRelative(result.solidsMolPerL[0]!, 1e-3 - 1e-8, 1e-12);
      expect(result.solidsMolPerL[1]).toBe(0);
      expectRelative(result.saturationIndex[1]!, -2, 1e-12);
    }
  });

  it("forms only solids that are allowed and reports the index of the others", () => {
    const result = solveEquilibrium(silver(), [1.5e-2, 1e-2, 1e-2], { solidsAllowed: [0, 1] });
    expect(result.solidsMolPerL[0]).toBe(0);
    expect(result.saturationIndex[0]).toBeGreaterThan(0);
    expect(result.saturationIndex[1]).toBe(0);
    const none = solveEquilibrium(silver(), [1.5e-2, 1e-2, 1e-2], { solids: "saturation-only" });
    expect([...none.solidsMolPerL]).toEqual([0, 0]);
    expectRelative(none.saturationIndex[1]!, 16 + Math.log10(1.5e-2 * 1e-2), 1e-12);
  });

  it("gives the same answer from any guess of the solids present, and by the least-index rule", () => {
    let withSolids = 0;
    for (let index = 0; index < 60; index++) {
      const { problem, totals, fixedLnFree } = randomSystem(31, index, { solids: 6 });
      const result = solveEquilibrium(problem, totals, { fixedLnFree });
      const all = Array.from({ length: problem.solids.n }, (_, s) => s);
      const guessed = solveEquilibrium(problem, totals, { fixedLnFree, activeSolids: all, start: result.lnFree });
      expect(guessed.status).toBe("converged");
      if (result.solidsMolPerL.some((amount) => amount > 0)) withSolids++;
      const state = Uint8Array.from(fixedLnFree, (value) => (Number.isNaN(value) ? 0 : 1));
      const st = compileProblem(problem).structure(state); // its scratch still holds this problem
      coldStart(st);
      const least = solveActiveSet(st, new Uint8Array(st.solids.length).fill(1), [], 500, "least-index");
      expect(least.status).toBe("converged");
      st.unknown.forEach((j, k) => {
        expectRelative(1 + guessed.lnFree[j]! - result.lnFree[j]!, 1, 1e-10);
        expectRelative(1 + st.scratch.x[k]! - result.lnFree[j]!, 1, 1e-10);
      });
    }
    expect(withSolids).toBeGreaterThan(20);
  });

  it("keeps balances and complementarity on 100 random systems with up to eight solids", () => {
    const figures = runSolids(20261203, 100, 8);
    expect(figures.notConverged).toBe(0);
    expect(figures.systemsWithSolid).toBeGreaterThan(30);
    expect(figures.worstResidual).toBeLessThanOrEqual(1e-12);
    expect(figures.worstSupersaturationLog10).toBeLessThanOrEqual(1e-9);
    expect(figures.worstIndexOfPresentLog10).toBeLessThanOrEqual(1e-9);
    expect(figures.mostNegativeMolPerL).toBe(0);
  });
});
