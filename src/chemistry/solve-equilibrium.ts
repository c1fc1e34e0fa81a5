import { AppError } from "../errors.ts";
import { newtonFromNear } from "./solve-newton.ts";
import { solveReduced } from "./solve-reduced.ts";
import { solveActiveSet } from "./solve-solids.ts";
import { coldStart } from "./solve-start.ts";
import { ABSENT, compileProblem, FIXED, type SolveStructure, UNKNOWN } from "./solve-structure.ts";
import type { MassBalanceProblem, SolveResult } from "./types.ts";

/** ln of the free concentration reported for a component that is not there (total zero), mol/L: exp of it is about 1e-300. */
export const ABSENT_LN_FREE = -690;

/** Worst relative residual of a mass balance at which a solve counts as converged. */
export const BALANCE_TOLERANCE = 1e-12;

const NEAR_TOLERANCE = 5e-13; // the plain iteration's, with room for the residual to be summed in another order
const DEFAULT_ITERATIONS = 500;
const NEAR_ITERATIONS = 30; // the plain iteration gets this many before the safe method takes over
const LN_10 = Math.LN10;
const SI_FLOOR = -1000; // saturation index reported when it would be lower, or a component is not there

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

/** A solve with what is known of its conditioning. */
export interface EquilibriumResult extends SolveResult {
  /**
   * Decimal digits that nearly equal totals cost, at least as far as the solver saw them: log10 of the ratio of the totals to
   * the difference that decides the answer; 0 where the totals decide it directly.
   */
  readonly lostDigits: number;
}

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
 * Method: the balances are the gradient of a convex function of the logs; damped Newton, in the plain variables when a near start is
 * given, else in the variables that suit the point (see `solveReduced`); solids by an active set.
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
  return assemble(problem, loaded.st, loaded.state, totals, options, run);
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

interface Run {
  readonly status: SolveResult["status"];
  readonly iterations: number;
  readonly active: readonly number[];
  readonly cancellation: number;
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
  let spent = 0;
  const guess = anyAllowed ? (options.activeSolids ?? []).map((s) => st.solids.indexOf(s)).filter((s) => s >= 0) : [];
  if (near && st.nonNegative && guess.length === 0) {
    const fast = newtonFromNear(st, NEAR_TOLERANCE, Math.min(limit, NEAR_ITERATIONS));
    spent = fast.iterations;
    if (fast.ok && !(anyAllowed && supersaturated(st, allowed)))
      return { status: "converged", iterations: spent, active: [], cancellation: 1 };
    if (!fast.ok) loadStart(st, options.start);
  }
  if (!near) coldStart(st);
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

function supersaturated(st: SolveStructure, allowed: Uint8Array): boolean {
  const { x, base } = st.scratch;
  const { start, column, value } = st.rows;
  for (let s = 0; s < allowed.length; s++) {
    const row = st.m + s;
    let sum = base[row]!;
    for (let p = start[row]!; p < start[row + 1]!; p++) sum += value[p]! * x[column[p]!]!;
    if (allowed[s] === 1 && sum > 0) return true;
  }
  return false;
}

function assemble(
  problem: MassBalanceProblem,
  st: SolveStructure,
  state: Uint8Array,
  totals: ArrayLike<number>,
  options: SolveOptions,
  run: Run,
): EquilibriumResult {
  const { nComponents: n, solids } = problem;
  const lnFree = new Float64Array(n);
  const speciesMolPerL = new Float64Array(problem.nSpecies);
  const solidsMolPerL = new Float64Array(solids.n);
  const saturationIndex = new Float64Array(solids.n);
  for (let j = 0; j < n; j++)
    if (state[j] !== UNKNOWN) lnFree[j] = state[j] === FIXED ? options.fixedLnFree![j]! : ABSENT_LN_FREE;
  for (let j = 0; j < st.n; j++) lnFree[st.unknown[j]!] = st.scratch.x[j]!;
  for (let g = 0; g < st.m; g++) {
    const c = st.scratch.concentration[g]!;
    for (let i = st.groupStart[g]!; i < st.groupStart[g + 1]!; i++)
      speciesMolPerL[st.species[i]!] = c * st.scratch.share[i]!;
  }
  for (const i of st.constantSpecies) {
    let e = problem.lnBeta[i]!;
    for (let j = 0; j < n; j++) {
      const a = problem.stoichiometry[i * n + j]!;
      if (a !== 0) e += a * lnFree[j]!;
    }
    speciesMolPerL[i] = Math.exp(Math.min(e, 700));
  }
  for (const s of run.active) solidsMolPerL[st.solids[s]!] = Math.max(0, st.scratch.amount[s]!);
  for (let s = 0; s < solids.n; s++) {
    let e = solids.lnBeta[s]!;
    let absent = false;
    for (let j = 0; j < n; j++) {
      const a = solids.stoichiometry[s * n + j]!;
      if (a === 0) continue;
      if (state[j] === ABSENT) absent = true;
      e += a * lnFree[j]!;
    }
    saturationIndex[s] = absent ? SI_FLOOR : Math.max(SI_FLOOR, e / LN_10);
  }
  for (const s of run.active) saturationIndex[st.solids[s]!] = 0;
  let residual = 0;
  let worstComponent = -1;
  for (let j = 0; j < st.n; j++) {
    const component = st.unknown[j]!;
    const total = totals[component]!;
    let sum = -total;
    let bulk = Math.abs(total);
    for (let p = st.balanceStart[j]!; p < st.balanceStart[j + 1]!; p++) {
      const term = st.balanceValue[p]! * st.scratch.concentration[st.balanceRow[p]!]!;
      sum += term;
      bulk += Math.abs(term);
    }
    for (const s of run.active) {
      const term = st.dense[(st.m + s) * st.n + j]! * solidsMolPerL[st.solids[s]!]!;
      sum += term;
      bulk += Math.abs(term);
    }
    const relative = Math.abs(sum) / (st.mixedSign[j] === 1 ? bulk : total);
    if (relative > residual || worstComponent === -1) {
      residual = Math.max(residual, relative);
      worstComponent = component;
    }
  }
  if (!Number.isFinite(residual)) return failed(problem);
  const status = run.status === "converged" && residual > BALANCE_TOLERANCE ? "maxIterations" : run.status;
  const lostDigits = Math.log10(Math.min(Math.max(run.cancellation, 1), 1e300));
  return {
    status,
    residual,
    iterations: run.iterations,
    worstComponent,
    lnFree,
    speciesMolPerL,
    solidsMolPerL,
    saturationIndex,
    lostDigits,
  };
}

/** The answer when an input or an iterate is not finite: nothing claimed, nothing that is not a number. */
function failed(problem: MassBalanceProblem): EquilibriumResult {
  return {
    status: "nonFinite",
    residual: 1,
    iterations: 0,
    worstComponent: -1,
    lnFree: new Float64Array(problem.nComponents).fill(ABSENT_LN_FREE),
    speciesMolPerL: new Float64Array(problem.nSpecies),
    solidsMolPerL: new Float64Array(problem.solids.n),
    saturationIndex: new Float64Array(problem.solids.n).fill(SI_FLOOR),
    lostDigits: 0,
  };
}
