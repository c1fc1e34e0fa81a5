import { describe, expect, it } from "vitest";
import { eliminatedSolver } from "../../src/chemistry/solve-eliminated.ts";
import { solveEquilibrium } from "../../src/chemistry/solve-equilibrium.ts";
import { neutralSystem } from "./neutral-system.ts";

describe("the neutral speed system", () => {
  // The value that the C++ and SciPy baselines print for the sum of ln free Zn over the 200 points.
  const check = "-5301.684240";

  it("is solved by the general solver to the check value of the baselines", () => {
    const system = neutralSystem();
    const lnFree = new Float64Array(system.problem.nComponents);
    system.start(lnFree);
    let sum = 0;
    for (let point = 0; point < system.points; point++) {
      const result = solveEquilibrium(system.problem, system.totalsAt(point), { start: lnFree });
      expect(result.status).toBe("converged");
      lnFree.set(result.lnFree);
      sum += lnFree[0]!;
    }
    expect(sum.toFixed(6)).toBe(check);
  });

  it("is solved with the metals eliminated to the same value, without the general solver", () => {
    const system = neutralSystem();
    const { nComponents } = system.problem;
    const solver = eliminatedSolver(system.problem, new Float64Array(nComponents).fill(NaN), system.metals)!;
    const lnFree = new Float64Array(nComponents);
    // often enough that the solver makes code for the structure on the way
    for (let pass = 0; pass < 40; pass++) {
      system.start(lnFree);
      let sum = 0;
      for (let point = 0; point < system.points; point++) {
        const { status, method } = solver.solve(system.totalsAt(point), lnFree);
        if (status !== "converged" || method !== "eliminated") throw new Error(`point ${point}: ${status}, ${method}`);
        sum += lnFree[0]!;
      }
      expect(sum.toFixed(6)).toBe(check);
    }
  });
});
