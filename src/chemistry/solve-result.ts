import { ABSENT_LN_FREE, type SolveOptions } from "./solve-load.ts";
import { ABSENT, FIXED, type SolveStructure, UNKNOWN } from "./solve-structure.ts";
import type { MassBalanceProblem, SolveResult } from "./types.ts";

/** Worst relative residual of a mass balance at which a solve counts as converged. */
export const BALANCE_TOLERANCE = 1e-12;

const LN_10 = Math.LN10;
const SI_FLOOR = -1000; // saturation index reported when it would be lower, or a component is not there

/** A solve with what is known of its conditioning. */
export interface EquilibriumResult extends SolveResult {
  /**
   * Decimal digits that nearly equal totals cost, at least as far as the solver saw them: log10 of the ratio of the totals to
   * the difference that decides the answer; 0 where the totals decide it directly.
   */
  readonly lostDigits: number;
}

/** What the iteration ended with; the numbers are in the scratch arrays. */
export interface Run {
  readonly status: SolveResult["status"];
  readonly iterations: number;
  readonly active: readonly number[];
  readonly cancellation: number;
}

/** Writes the answer of a run out of the scratch arrays, with residuals summed afresh from it. */
export function resultOf(
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
export function failed(problem: MassBalanceProblem): EquilibriumResult {
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
