import { solveEquilibrium } from "../../src/chemistry/solve-equilibrium.ts";
import { solveWithProtonTotal } from "../../src/chemistry/solve-with-proton-total.ts";
import { median } from "../../src/numerics/quantile.ts";
import type { Campaign } from "./campaign.ts";
import { solutionFaults } from "./check-solution.ts";
import { runEliminated } from "./eliminated.ts";
import { highPrecisionSolution } from "./high-precision-solution.ts";
import { randomSystem } from "./random-system.ts";

/** The solver's campaign: cold and near solves, the 50-digit oracle, solids, unknown protons, the eliminated form. */
export const solverCampaign: Campaign = {
  name: "solver",
  about:
    "10,000 random systems cold and near; 50 against a 50-digit oracle; 500 with up to three solids, 500 with up to eight; 1,000 with unknown protons; 2,000 by elimination",
  run: ({ seed }) => {
    const balances = runBalances(seed, 10_000);
    const oracle = runOracle(seed + 1, 50);
    const solids = runSolids(seed + 2, 500);
    const manySolids = runSolids(seed + 3, 500, 8);
    const protons = runProtons(seed + 4, 1000);
    const eliminated = runEliminated(seed + 5, 2000);
    const solidsHold = [solids, manySolids].every(
      (s) =>
        s.notConverged === 0 &&
        s.worstResidual <= 1e-12 &&
        s.worstSupersaturationLog10 <= 1e-9 &&
        s.worstIndexOfPresentLog10 <= 1e-9 &&
        s.mostNegativeMolPerL === 0,
    );
    const holds =
      solidsHold &&
      [balances, protons, eliminated].every((f) => f.notConverged === 0 && f.worstResidual <= 1e-12) &&
      oracle.worstErrorPerCondition <= 1e-9 &&
      eliminated.worstDifferenceLn <= 1e-10;
    return { figures: { balances, oracle, solids, manySolids, protons, eliminated }, holds };
  },
};

/** Figures of a run over random systems without solids. */
export interface BalanceFigures {
  readonly systems: number;
  readonly notConverged: number;
  readonly worstResidual: number; // as recomputed from the answer
  readonly worstMassActionLn: number;
  readonly worstNearLn: number; // answer from a near start against the cold one, where the totals decide it (no digits lost)
  readonly meanIterations: number;
  readonly mostIterations: number;
  readonly lostOver6Digits: number; // systems in which nearly equal totals cost more than six digits
}

/** Solves `count` random systems from nothing, and each again from a disturbed answer. */
export function runBalances(seed: number, count: number): BalanceFigures {
  let notConverged = 0;
  let worstResidual = 0;
  let worstMassActionLn = 0;
  let worstNearLn = 0;
  let iterations = 0;
  let mostIterations = 0;
  let lostOver6Digits = 0;
  for (let index = 0; index < count; index++) {
    const { problem, totals, fixedLnFree } = randomSystem(seed, index);
    const cold = solveEquilibrium(problem, totals, { fixedLnFree });
    const disturbed = cold.lnFree.map((value, j) => value + 0.3 * Math.sin(7 * j + index));
    const near = solveEquilibrium(problem, totals, { fixedLnFree, start: disturbed });
    for (const result of [cold, near]) {
      if (result.status !== "converged") notConverged++;
      const faults = solutionFaults(problem, totals, fixedLnFree, result);
      worstResidual = Math.max(worstResidual, faults.balance, result.residual);
      worstMassActionLn = Math.max(worstMassActionLn, faults.massAction);
    }
    if (cold.lostDigits < 1)
      near.lnFree.forEach((value, j) => (worstNearLn = Math.max(worstNearLn, Math.abs(value - cold.lnFree[j]!))));
    iterations += cold.iterations;
    mostIterations = Math.max(mostIterations, cold.iterations);
    if (cold.lostDigits > 6) lostOver6Digits++;
  }
  const meanIterations = iterations / count;
  return {
    systems: count,
    notConverged,
    worstResidual,
    worstMassActionLn,
    worstNearLn,
    meanIterations,
    mostIterations,
    lostOver6Digits,
  };
}

/** Figures of a comparison with 50-digit solutions. */
export interface OracleFigures {
  readonly systems: number;
  readonly worstErrorPerCondition: number; // worst |ln free - exact| / condition
  readonly worstErrorLn: number; // worst |ln free - exact| itself
  readonly medianErrorLn: number;
  readonly lostOver3Digits: number; // systems whose condition is above 1e3
  readonly lostOver6Digits: number;
  readonly worstCondition: number;
  readonly worstWithoutLossLn: number; // worst error among systems with a condition of at most 1e3
}

/** Compares `count` random systems with the 50-digit oracle. */
export function runOracle(seed: number, count: number): OracleFigures {
  const errors: number[] = [];
  let worstErrorPerCondition = 0;
  let lostOver3Digits = 0;
  let lostOver6Digits = 0;
  let worstCondition = 1;
  let worstWithoutLossLn = 0;
  for (let index = 0; index < count; index++) {
    const { problem, totals, fixedLnFree } = randomSystem(seed, index);
    const result = solveEquilibrium(problem, totals, { fixedLnFree });
    const exact = highPrecisionSolution(
      problem,
      totals,
      fixedLnFree,
      result.lnFree.map((value, j) => value + Math.sin(3 * j + index)),
    );
    let error = 0;
    exact.lnFree.forEach((value, j) => (error = Math.max(error, value.minus(result.lnFree[j]!).abs().toNumber())));
    errors.push(error);
    worstErrorPerCondition = Math.max(worstErrorPerCondition, error / exact.condition);
    worstCondition = Math.max(worstCondition, exact.condition);
    if (exact.condition > 1e3) lostOver3Digits++;
    else worstWithoutLossLn = Math.max(worstWithoutLossLn, error);
    if (exact.condition > 1e6) lostOver6Digits++;
  }
  return {
    systems: count,
    worstErrorPerCondition,
    worstErrorLn: Math.max(...errors),
    medianErrorLn: median(errors),
    lostOver3Digits,
    lostOver6Digits,
    worstCondition,
    worstWithoutLossLn,
  };
}

/** Figures of a run over systems in which solids may form. */
export interface SolidsFigures {
  readonly systems: number;
  readonly notConverged: number;
  readonly solidsPresent: number;
  readonly systemsWithSolid: number;
  readonly worstResidual: number;
  readonly worstSupersaturationLog10: number;
  readonly worstIndexOfPresentLog10: number;
  readonly mostNegativeMolPerL: number;
  readonly meanIterations: number;
  readonly mostIterations: number;
}

/** Solves `count` random systems with one to `solids` solids that may form. */
export function runSolids(seed: number, count: number, solids = 3): SolidsFigures {
  let notConverged = 0;
  let solidsPresent = 0;
  let systemsWithSolid = 0;
  let worstResidual = 0;
  let worstSupersaturationLog10 = 0;
  let worstIndexOfPresentLog10 = 0;
  let mostNegativeMolPerL = 0;
  let iterations = 0;
  let mostIterations = 0;
  for (let index = 0; index < count; index++) {
    const { problem, totals, fixedLnFree } = randomSystem(seed, index, { solids });
    const result = solveEquilibrium(problem, totals, { fixedLnFree });
    if (result.status !== "converged") notConverged++;
    const faults = solutionFaults(problem, totals, fixedLnFree, result);
    const present = result.solidsMolPerL.filter((amount) => amount > 0).length;
    solidsPresent += present;
    if (present > 0) systemsWithSolid++;
    worstResidual = Math.max(worstResidual, faults.balance, result.residual);
    worstSupersaturationLog10 = Math.max(worstSupersaturationLog10, faults.supersaturation);
    worstIndexOfPresentLog10 = Math.max(worstIndexOfPresentLog10, faults.complementarity);
    mostNegativeMolPerL = Math.max(mostNegativeMolPerL, faults.negative);
    iterations += result.iterations;
    mostIterations = Math.max(mostIterations, result.iterations);
  }
  return {
    systems: count,
    notConverged,
    solidsPresent,
    systemsWithSolid,
    worstResidual,
    worstSupersaturationLog10,
    worstIndexOfPresentLog10,
    mostNegativeMolPerL,
    meanIterations: iterations / count,
    mostIterations,
  };
}

/** Figures of a run with unknown protons. */
export interface ProtonFigures {
  readonly systems: number;
  readonly notConverged: number;
  readonly worstResidual: number;
  readonly negativeTotals: number; // systems with a proton total below zero
  readonly mostIterations: number;
}

/** Solves `count` random systems for the free protons too, with proton totals from -1 to 1 mol/L, one in ten exactly zero. */
export function runProtons(seed: number, count: number): ProtonFigures {
  let notConverged = 0;
  let worstResidual = 0;
  let negativeTotals = 0;
  let mostIterations = 0;
  for (let index = 0; index < count; index++) {
    const { problem, totals } = randomSystem(seed, index, index % 2 === 0 ? {} : { solids: 3 });
    const size = 10 ** (-8 * ((index * 0.618) % 1));
    const protonTotal = index % 10 === 0 ? 0 : index % 3 === 0 ? -size : size;
    if (protonTotal < 0) negativeTotals++;
    const result = solveWithProtonTotal(problem, totals, protonTotal);
    if (result.status !== "converged") notConverged++;
    totals[0] = protonTotal;
    const none = new Float64Array(problem.nComponents).fill(NaN);
    worstResidual = Math.max(worstResidual, result.residual, solutionFaults(problem, totals, none, result).balance);
    mostIterations = Math.max(mostIterations, result.iterations);
  }
  return { systems: count, notConverged, worstResidual, negativeTotals, mostIterations };
}
