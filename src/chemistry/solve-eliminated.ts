import { EliminatedNewton, FULL_PRECISION, type EliminatedPrecision } from "./solve-eliminated-newton.ts";
import { compileEliminated } from "./solve-eliminated-terms.ts";
import { solveEquilibrium } from "./solve-equilibrium.ts";
import type { MassBalanceProblem, SolveResult } from "./types.ts";

const POLYNUCLEAR_MOST = 1e-6; // share up to which they are a correction to the totals; above it the general solver takes over
const CORRECTIONS = 6;

/** What one solve ended with. The object is reused by the next solve of the same solver. */
export interface EliminatedEvidence {
  status: SolveResult["status"];
  residual: number; // worst relative mass-balance residual
  iterations: number;
  worstComponent: number;
  /** "general" where the eliminated form did not apply or did not converge and `solveEquilibrium` was used. */
  method: "eliminated" | "general";
  /** Largest share of a total held in species of two different eliminated components; they are included in the answer. */
  polynuclearShare: number;
}

/** A solver for one problem at given fixed components, for many totals. */
export interface EliminatedSolver {
  /**
   * Solves for `totals` (mol/L per component) starting from `lnFree` (per component), which receives the answer; absent components get
   * `ABSENT_LN_FREE`. Allocates nothing while the eliminated form applies.
   */
  readonly solve: (totals: ArrayLike<number>, lnFree: Float64Array) => EliminatedEvidence;
  /**
   * Takes the constants of the problem (its `lnBeta`, which its owner may have changed) and other free concentrations of the same fixed
   * components. Allocates nothing. False where the form does not apply any more (a constant beyond e^600): the solver is then of no use.
   */
  readonly refill: (fixedLnFree: ArrayLike<number>) => boolean;
}

/**
 * A fast solver for systems in which each species holds at most one of the components to `eliminate` (the metals).
 *
 * Each of those has an explicit free concentration once the others are known, total / (sum of beta times powers), so Newton runs on the
 * others alone: the same convex function minimised over the metals first. Species with equal powers of the unknown components (protonation steps and
 * hydroxo complexes at fixed protons) are one term; powers are products. Where a species holds several atoms of one eliminated component,
 * its free concentration is the root of a polynomial instead. Species of two eliminated components enter as a correction of the totals
 * while they hold less than 1e-6 of any, checked afterwards; beyond that, and wherever it fails or would lose digits, the general solver
 * answers. No solids.
 *
 * `fixedLnFree`: as in `solveEquilibrium`. `eliminate`: components, e.g. all metals. Returns null when the form does not apply at all (an
 * unknown of mixed sign, constants beyond e^600).
 * `precision`: full, unless many answers are wanted and none to more digits than draws are.
 */
export function eliminatedSolver(
  problem: MassBalanceProblem,
  fixedLnFree: ArrayLike<number>,
  eliminate: readonly number[],
  precision: EliminatedPrecision = FULL_PRECISION,
): EliminatedSolver | null {
  const fixed = Float64Array.from(fixedLnFree);
  const terms = compileEliminated(problem, fixed, eliminate);
  if (terms === null) return null;
  const { kept, gone, k, polynuclear } = terms.structure;
  const work = EliminatedNewton.of(terms);
  const { keptTotal, goneTotal, held } = work;
  const evidence: EliminatedEvidence = {
    status: "converged",
    residual: 0,
    iterations: 0,
    worstComponent: -1,
    method: "eliminated",
    polynuclearShare: 0,
  };
  const general = (totals: ArrayLike<number>, lnFree: Float64Array): EliminatedEvidence => {
    const result = solveEquilibrium(problem, totals, { fixedLnFree: fixed, start: lnFree, solids: "saturation-only" });
    lnFree.set(result.lnFree);
    evidence.method = "general";
    evidence.status = result.status;
    evidence.residual = result.residual;
    evidence.worstComponent = result.worstComponent;
    evidence.iterations += result.iterations;
    let share = 0;
    terms.polynuclear(lnFree, held);
    for (let j = 0; j < held.length; j++) if (totals[j]! > 0) share = Math.max(share, held[j]! / totals[j]!);
    evidence.polynuclearShare = share;
    return evidence;
  };
  const load = (totals: ArrayLike<number>, corrected: boolean): void => {
    for (let l = 0; l < k; l++) keptTotal[l] = totals[kept[l]!]! - (corrected ? held[kept[l]!]! : 0);
    for (let e = 0; e < gone.length; e++) goneTotal[e] = totals[gone[e]!]! - (corrected ? held[gone[e]!]! : 0);
  };
  const solve = (totals: ArrayLike<number>, lnFree: Float64Array): EliminatedEvidence => {
    evidence.method = "eliminated";
    evidence.iterations = 0;
    evidence.polynuclearShare = 0;
    if (work.terms !== terms) work.use(terms);
    load(totals, false);
    for (let pass = 0; ; pass++) {
      const iterations = work.newton(lnFree, precision);
      evidence.iterations += Math.abs(iterations);
      if (iterations < 0) return general(totals, lnFree);
      if (polynuclear.length === 0) break;
      let share = 0;
      let change = 0;
      const before = work.heldBefore;
      before.set(held);
      terms.polynuclear(lnFree, held);
      for (let j = 0; j < held.length; j++) {
        const amount = held[j]!;
        const total = totals[j]!;
        if (amount === 0 || !(total > 0)) continue;
        share = Math.max(share, amount / total);
        change = Math.max(change, Math.abs(amount - (pass === 0 ? 0 : before[j]!)) / total);
      }
      evidence.polynuclearShare = share;
      if (!(share <= POLYNUCLEAR_MOST) || pass >= CORRECTIONS) return general(totals, lnFree);
      if (change <= precision.polynuclear) break;
      load(totals, true);
    }
    evidence.status = "converged";
    evidence.residual = work.residual;
    evidence.worstComponent = work.worst < 0 ? (gone[0] ?? -1) : kept[work.worst]!;
    return evidence;
  };
  const refill = (to: ArrayLike<number>): boolean => {
    fixed.set(to);
    work.use(terms);
    return terms.refill(problem.lnBeta, fixed);
  };
  return { solve, refill };
}
