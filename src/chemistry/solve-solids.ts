import { type ReducedOutcome, solveReduced } from "./solve-reduced.ts";
import type { SolveStructure } from "./solve-structure.ts";

/** A solid may be this far above saturation (ln units) and still count as at it: rounding of large exponents. */
const SATURATED_LN = 1e-10;
/** An amount this small beside the totals of the solid's components is zero: rounding of the balances. */
const NOTHING = 1e-13;
const MAX_CHANGES = 200;

/** The outcome of the search for the solids that are present. */
export interface SolidsOutcome extends ReducedOutcome {
  readonly active: readonly number[]; // local solids present
  readonly changes: number; // solids taken in or out on the way
}

/**
 * Finds which of the `allowed` local solids are present: present ones saturated with an amount >= 0, absent ones not
 * supersaturated. Starts from the set `guess` and from `scratch.x`.
 *
 * One solid enters (the most supersaturated) or leaves (the most negative amount) at a time, each time with the convex
 * problem solved on the set; one that depends on those present takes the place of the first whose amount it would
 * bring to zero. Should a set come back, the search goes on by the least index that offends instead, which cannot cycle (K. G. Murty,
 * Linear Algebra Appl. 9 (1974) 65: the least-index rule for complementarity with a unique answer). `rule` "least-index" does so from the start.
 */
export function solveActiveSet(
  st: SolveStructure,
  allowed: Uint8Array,
  guess: readonly number[],
  maxIterations: number,
  rule: "worst-first" | "least-index" = "worst-first",
): SolidsOutcome {
  let active = independent(
    st,
    guess.filter((s) => allowed[s] === 1),
  );
  const seen = new Set<string>();
  let leastIndex = rule === "least-index";
  let iterations = 0;
  let changes = 0;
  for (;;) {
    const outcome = solveReduced(st, active, maxIterations);
    iterations += outcome.iterations;
    const done = { ...outcome, iterations, active, changes };
    if (outcome.status !== "converged") return done;
    const next = nextSet(st, allowed, active, leastIndex);
    if (next === null) return done;
    if (changes >= MAX_CHANGES) return { ...done, status: "maxIterations" };
    const key = next.join(",");
    if (seen.has(key)) leastIndex = true;
    seen.add(key);
    changes++;
    active = next;
  }
}

/** The set with one solid taken out or in, or null when complementarity holds. */
function nextSet(
  st: SolveStructure,
  allowed: Uint8Array,
  active: readonly number[],
  leastIndex: boolean,
): readonly number[] | null {
  const { amount, exponent } = st.scratch;
  let leaving = -1;
  let lowest = 0;
  let entering = -1;
  let highest = SATURATED_LN;
  for (let s = 0; s < st.solids.length; s++) {
    if (active.includes(s)) {
      const relative = amount[s]! / solidScale(st, s);
      if (!(relative < -NOTHING && relative < lowest)) continue;
      lowest = relative;
      leaving = s;
    } else {
      if (allowed[s] !== 1 || !(exponent[st.m + s]! > highest)) continue;
      highest = exponent[st.m + s]!;
      entering = s;
    }
    if (leastIndex) break;
  }
  if (leaving >= 0) return active.filter((s) => s !== leaving);
  if (entering < 0) return null;
  const weights = dependence(st, active, entering);
  if (weights === null) return [...active, entering].sort((a, b) => a - b);
  let out = -1;
  let first = Infinity;
  active.forEach((s, k) => {
    const ratio = weights[k]! > 1e-9 ? Math.max(amount[s]!, 0) / weights[k]! : Infinity;
    if (ratio < first) {
      first = ratio;
      out = s;
    }
  });
  return [...active.filter((s) => s !== out), entering].sort((a, b) => a - b);
}

/** The largest amount of a solid its components allow, mol/L: what "nothing" is measured against. */
export function solidScale(st: SolveStructure, s: number): number {
  const { start, column, value } = st.rows;
  const row = st.m + s;
  let scale = Infinity;
  for (let p = start[row]!; p < start[row + 1]!; p++)
    scale = Math.min(scale, Math.abs(st.scratch.total[column[p]!]! / value[p]!));
  return scale > 0 && scale < Infinity ? scale : 1;
}

function independent(st: SolveStructure, guess: readonly number[]): readonly number[] {
  const kept: number[] = [];
  for (const s of guess) if (!kept.includes(s) && dependence(st, kept, s) === null) kept.push(s);
  return kept.sort((a, b) => a - b);
}

/** Weights of the active rows that add up to the row of solid `s`, or null when it is independent of them. */
function dependence(st: SolveStructure, active: readonly number[], s: number): Float64Array | null {
  const { n, m, dense } = st;
  const w = active.length;
  const work = new Float64Array((w + 1) * n);
  const combination = new Float64Array((w + 1) * w);
  const pivots: number[] = [];
  for (let k = 0; k <= w; k++) {
    const source = (m + (k < w ? active[k]! : s)) * n;
    for (let j = 0; j < n; j++) work[k * n + j] = dense[source + j]!;
    if (k < w) combination[k * w + k] = 1;
    pivots.forEach((pivot, q) => {
      const factor = work[k * n + pivot]! / work[q * n + pivot]!;
      if (factor === 0) return;
      for (let j = 0; j < n; j++) work[k * n + j] = work[k * n + j]! - factor * work[q * n + j]!;
      for (let c = 0; c < w; c++) combination[k * w + c] = combination[k * w + c]! - factor * combination[q * w + c]!;
    });
    let best = 0;
    for (let j = 1; j < n; j++) if (Math.abs(work[k * n + j]!) > Math.abs(work[k * n + best]!)) best = j;
    if (k < w) pivots.push(best);
    else if (Math.abs(work[k * n + best]!) > 1e-9) return null;
  }
  return combination.subarray(w * w).map((value) => -value);
}
