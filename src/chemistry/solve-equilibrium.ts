import { ABSENT_LN_FREE, loadProblem, type SolveOptions } from "./solve-load.ts";
import { newtonFromNear } from "./solve-newton.ts";
import { solveReduced } from "./solve-reduced.ts";
import { type EquilibriumResult, failed, resultOf, type Run } from "./solve-result.ts";
import { solveActiveSet } from "./solve-solids.ts";
import { coldStart } from "./solve-start.ts";
import type { SolveStructure } from "./solve-structure.ts";
import type { MassBalanceProblem } from "./types.ts";

export { ABSENT_LN_FREE, type SolveOptions } from "./solve-load.ts";
export { BALANCE_TOLERANCE, type EquilibriumResult } from "./solve-result.ts";

const NEAR_TOLERANCE = 5e-13; // the plain iteration's, with room for the residual to be summed in another order
const COLD_TOLERANCE = 5e-14; // from a cold start, with the pivot below: an error of at most 5e-11 in ln free
const COLD_PIVOT = 1e-3; // scaled pivot from which the plain variables may answer a cold start; below it the safe method keeps the digits
const DEFAULT_ITERATIONS = 500;
const NEAR_ITERATIONS = 30; // the plain iteration gets this many before the safe method takes over

/**
 * Solves the mass balances of a problem for its free concentrations, from any start.
 *
 * `totals`: mol/L per component (ignored where fixed). A total of zero means the component is absent when no species holds it
 * with a negative coefficient: its lnFree is reported as `ABSENT_LN_FREE`, its species and solids as zero. Totals may be
 * negative only for a component that some species holds negatively (protons). Returns lnFree (per component), species (mol/L, rows of the
 * problem), solids (mol/L) and saturation indices (log10, not below -1000) with the evidence: status, worst relative
 * residual and its component, iterations. Residuals are relative to the total, or for a component with negative
 * coefficients to the sum of the magnitudes in its balance. No value is NaN or infinite whatever the status.
 *
 * Method: the balances are the gradient of a convex function of the logs; damped Newton in the plain variables, and where
 * those would lose digits or do not get there in the variables that suit the point (see `solveReduced`); solids by an active set.
 *
 * @throws AppError "solver-input" for wrong lengths, or a negative total that no species can meet.
 */
export function solveEquilibrium(
  problem: MassBalanceProblem,
  totals: ArrayLike<number>,
  options: SolveOptions = {},
): EquilibriumResult {
  const loaded = loadProblem(problem, totals, options);
  if (loaded === null) return failed(problem);
  const run = iterate(loaded.st, options);
  return resultOf(problem, loaded.st, loaded.state, totals, options, run);
}

function iterate(st: SolveStructure, options: SolveOptions): Run {
  const limit = options.maxIterations ?? DEFAULT_ITERATIONS;
  const allowed = new Uint8Array(st.solids.length);
  let anyAllowed = false;
  if (options.solids !== "saturation-only")
    for (let s = 0; s < allowed.length; s++)
      if (options.solidsAllowed === undefined || options.solidsAllowed[st.solids[s]!] !== 0) {
        allowed[s] = 1;
        anyAllowed = true;
      }
  if (st.n === 0) return { status: "converged", iterations: 0, active: [], cancellation: 1 };
  const near = loadStart(st, options.start);
  if (!near) coldStart(st);
  let spent = 0;
  let guess = anyAllowed ? (options.activeSolids ?? []).map((s) => st.solids.indexOf(s)).filter((s) => s >= 0) : [];
  if (st.nonNegative && guess.length === 0) {
    st.scratch.trial.set(st.scratch.x);
    const fast = newtonFromNear(st, near ? NEAR_TOLERANCE : COLD_TOLERANCE, Math.min(limit, NEAR_ITERATIONS));
    spent = fast.iterations;
    if (fast.ok && (near || fast.pivot >= COLD_PIVOT)) {
      const solid = anyAllowed ? mostSupersaturated(st, allowed) : -1;
      if (solid < 0)
        return { status: "converged", iterations: spent, active: [], cancellation: near ? 1 : 1 / fast.pivot };
      guess = [solid]; // what the search for solids would take in first
    } else st.scratch.x.set(st.scratch.trial);
  }
  const left = Math.max(0, limit - spent);
  if (!anyAllowed) {
    const outcome = solveReduced(st, [], left);
    return { ...outcome, iterations: spent + outcome.iterations, active: [] };
  }
  const outcome = solveActiveSet(st, allowed, guess, left);
  return { ...outcome, iterations: spent + outcome.iterations };
}

function loadStart(st: SolveStructure, start: ArrayLike<number> | undefined): boolean {
  if (start === undefined) return false;
  for (let j = 0; j < st.n; j++) {
    const value = start[st.unknown[j]!]!;
    if (!(value > ABSENT_LN_FREE) || value === Infinity) return false;
    st.scratch.x[j] = value;
  }
  return true;
}

/** The allowed local solid that is furthest above saturation at the present point, -1 where none is. */
function mostSupersaturated(st: SolveStructure, allowed: Uint8Array): number {
  const { x, base } = st.scratch;
  const { start, column, value } = st.rows;
  let found = -1;
  let highest = 0;
  for (let s = 0; s < allowed.length; s++) {
    const row = st.m + s;
    let sum = base[row]!;
    for (let p = start[row]!; p < start[row + 1]!; p++) sum += value[p]! * x[column[p]!]!;
    if (allowed[s] !== 1 || !(sum > highest)) continue;
    highest = sum;
    found = s;
  }
  return found;
}
