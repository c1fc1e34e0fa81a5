import { eliminatedSolver } from "../../src/chemistry/solve-eliminated.ts";
import { solveEquilibrium } from "../../src/chemistry/solve-equilibrium.ts";
import { randomSystem } from "./random-system.ts";

/** Figures of the fast form beside the general solver. */
export interface EliminatedFigures {
  readonly systems: number;
  readonly notConverged: number;
  readonly byElimination: number; // systems answered without the general solver
  readonly worstDifferenceLn: number; // worst |ln free - ln free of the general solver| where no digits are lost
  readonly worstResidual: number;
  readonly withPolynuclear: number; // answered by elimination with a polynuclear share above zero
}

/** Solves `count` random systems both ways, the fast form from a disturbed answer. */
export function runEliminated(seed: number, count: number): EliminatedFigures {
  let notConverged = 0;
  let byElimination = 0;
  let worstDifferenceLn = 0;
  let worstResidual = 0;
  let withPolynuclear = 0;
  for (let index = 0; index < count; index++) {
    const { problem, totals, fixedLnFree, metals } = randomSystem(seed, index);
    const general = solveEquilibrium(problem, totals, { fixedLnFree });
    const solver = eliminatedSolver(problem, fixedLnFree, metals);
    if (solver === null) continue;
    const lnFree = general.lnFree.map((value, j) => value + 0.3 * Math.sin(5 * j + index));
    const evidence = solver.solve(totals, lnFree);
    if (evidence.status !== "converged") notConverged++;
    if (evidence.method === "eliminated") {
      byElimination++;
      if (evidence.polynuclearShare > 0) withPolynuclear++;
    }
    worstResidual = Math.max(worstResidual, evidence.residual);
    // with up to seven digits lost by nearly equal totals the difference says what the totals allow, not what the form does
    if (general.lostDigits < 2)
      lnFree.forEach(
        (value, j) => (worstDifferenceLn = Math.max(worstDifferenceLn, Math.abs(value - general.lnFree[j]!))),
      );
  }
  return { systems: count, notConverged, byElimination, worstDifferenceLn, worstResidual, withPolynuclear };
}
