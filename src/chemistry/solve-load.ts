import { AppError } from "../errors.ts";
import { ABSENT, compileProblem, FIXED, type SolveStructure, UNKNOWN } from "./solve-structure.ts";
import type { MassBalanceProblem } from "./types.ts";

/** ln of the free concentration reported for a component that is not there (total zero), mol/L: exp of it is about 1e-300. */
export const ABSENT_LN_FREE = -690;

/** How one equilibrium is to be solved; everything has a default. */
export interface SolveOptions {
  /** Per component: NaN = unknown, else ln of a free concentration (mol/L) that is held; it then has no balance. */
  readonly fixedLnFree?: ArrayLike<number>;
  /** lnFree of a near answer, per component. Entries that are not finite or at the absent floor are ignored. */
  readonly start?: ArrayLike<number>;
  /** Newton iterations allowed in all (default 500). */
  readonly maxIterations?: number;
  /** "equilibrium" (default): solids form by complementarity. "saturation-only": none forms, the indices are reported. */
  readonly solids?: "equilibrium" | "saturation-only";
  /** Per solid: not zero = may form (default all). The others only have their index reported. */
  readonly solidsAllowed?: ArrayLike<number>;
  /** Solids expected to be present, by index: a start for the search, not a promise. */
  readonly activeSolids?: readonly number[];
}

/**
 * Checks the input of a solve and puts totals and constants into the scratch of its structure; null when a number is not finite.
 *
 * @throws AppError "solver-input" as `solveEquilibrium`.
 */
export function loadProblem(
  problem: MassBalanceProblem,
  totals: ArrayLike<number>,
  options: SolveOptions,
): { readonly st: SolveStructure; readonly state: Uint8Array } | null {
  const compiled = compileProblem(problem);
  const n = problem.nComponents;
  if (totals.length !== n)
    throw new AppError("solver-input", `expected ${n} totals, got ${totals.length}`, {
      expected: n,
      got: totals.length,
    });
  const state = new Uint8Array(n);
  let finite = true;
  for (let j = 0; j < n; j++) {
    const fixed = options.fixedLnFree === undefined ? NaN : options.fixedLnFree[j]!;
    if (!Number.isNaN(fixed)) {
      state[j] = FIXED;
      if (!Number.isFinite(fixed)) finite = false;
      continue;
    }
    const total = totals[j]!;
    state[j] = UNKNOWN;
    if (!Number.isFinite(total)) finite = false;
    else if (compiled.nonNegativeColumn[j] === 1) {
      if (total < 0)
        throw new AppError("solver-input", `total of component ${j} is ${total}: expected 0 or more`, {
          component: j,
          total,
        });
      if (total < 1e-290) state[j] = ABSENT; // below this, products with it leave the range of doubles
    }
  }
  const st = compiled.structure(state);
  if (!finite || !loadBase(problem, st, options.fixedLnFree)) return null;
  for (let j = 0; j < st.n; j++) st.scratch.total[j] = totals[st.unknown[j]!]!;
  return { st, state };
}

/**
 * Folds fixed components into ln beta and sums the constants of each group of species (those with the same coefficients over the
 * unknowns); skipped where nothing changed since the last solve. False when a constant is not finite.
 */
function loadBase(
  problem: MassBalanceProblem,
  st: SolveStructure,
  fixedLnFree: ArrayLike<number> | undefined,
): boolean {
  const { species, solids, groupStart, m } = st;
  const { folded, share, base } = st.scratch;
  const { start, column, value } = st.fixedRows;
  const nSpecies = species.length;
  let check = 0;
  let changed = false;
  for (let i = 0; i < folded.length; i++) {
    let sum = i < nSpecies ? problem.lnBeta[species[i]!]! : problem.solids.lnBeta[solids[i - nSpecies]!]!;
    for (let p = start[i]!; p < start[i + 1]!; p++) sum += value[p]! * fixedLnFree![column[p]!]!;
    check += sum;
    if (folded[i] === sum) continue;
    folded[i] = sum;
    changed = true;
  }
  if (!Number.isFinite(check)) {
    folded.fill(NaN);
    return false;
  }
  if (!changed) return true;
  for (let g = 0; g < m; g++) {
    const first = groupStart[g]!;
    const end = groupStart[g + 1]!;
    let largest = folded[first]!;
    for (let i = first + 1; i < end; i++) largest = Math.max(largest, folded[i]!);
    let sum = 0;
    for (let i = first; i < end; i++) {
      share[i] = Math.exp(folded[i]! - largest);
      sum += share[i]!;
    }
    for (let i = first; i < end; i++) share[i] = share[i]! / sum;
    base[g] = sum === 1 ? largest : largest + Math.log(sum);
  }
  for (let s = 0; s < solids.length; s++) base[m + s] = folded[nSpecies + s]!;
  return true;
}
