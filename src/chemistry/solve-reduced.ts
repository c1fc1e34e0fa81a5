import { factorScaled, solveScaled } from "../numerics/cholesky.ts";
import {
  assembleMatrix,
  type Basis,
  CAP,
  balances,
  chooseBasis,
  fillConcentrations,
  isOvertaken,
} from "./solve-basis.ts";
import type { SolveStructure } from "./solve-structure.ts";

const TARGET = 2e-15; // of the sum of magnitudes in a balance: what correctly rounded sums can reach
const ENOUGH = 1e-13; // accepted when rounding stops further progress
const SMALL_STEP = 0.05; // below it concentrations are updated by factors, so that no digit is lost in large exponents
const MAX_STEP = 6; // ln units of any basis species in one step
const MAX_GROWTH = 40; // doublings and halvings of one line search
const FLATTENED = 0.1; // the search goes on while the slope still falls by more than this share of the first one
const OVERSHOT = 0.9; // and turns back when it rises by more than this share
const MAX_SHIFT = 8; // ln units by which a solid taken in is brought towards saturation per iteration

/** What the reduced method ended with. */
export interface ReducedOutcome {
  readonly status: "converged" | "maxIterations" | "nonFinite";
  readonly iterations: number;
  /** Largest ratio of the magnitudes that cancel in a transformed total to what is left: 10^digits lost by nearly equal totals. */
  readonly cancellation: number;
}

/**
 * Newton on the same convex function in the variables that suit the point: ln of the n largest independent species.
 *
 * In them the matrix scaled by its diagonal has a condition bounded by the stoichiometry alone, whatever the constants, and
 * the totals enter through integer combinations formed without rounding; so nearly equal totals cost no more digits than
 * they must. `active` lists local solids held in equilibrium: their logs are basis variables fixed at zero and their
 * amounts are what is left of their balances (possibly negative: the caller decides). Starts from `scratch.x`;
 * leaves x, exponents, concentrations and amounts in scratch. Globally convergent: a line search on the slope
 * of a convex function along each direction.
 */
export function solveReduced(st: SolveStructure, active: readonly number[], maxIterations: number): ReducedOutcome {
  const { n, m } = st;
  const { x, exponent, concentration, base } = st.scratch;
  const w = active.length;
  const free = n - w;
  const all = m + st.solids.length;
  const rowsOf = st.rows;
  for (let i = 0; i < all; i++) {
    let e = base[i]!;
    for (let p = rowsOf.start[i]!; p < rowsOf.start[i + 1]!; p++) e += rowsOf.value[p]! * x[rowsOf.column[p]!]!;
    exponent[i] = e;
  }
  let basis = chooseBasis(st, active);
  if (basis === null) return { status: "nonFinite", iterations: 0, cancellation: 1 };
  const gradient = new Float64Array(n);
  const bulk = new Float64Array(n);
  const direction = new Float64Array(n);
  const matrix = new Float64Array(n * n);
  const scale = new Float64Array(n);
  const change = new Float64Array(all);
  let best = Infinity;
  let stalled = 0;
  let iteration = 0;
  let status: ReducedOutcome["status"] = "maxIterations";
  fillConcentrations(exponent, concentration, m);
  for (; ; iteration++) {
    const unsaturated = approachSaturation(st, basis, w);
    if (isOvertaken(basis, exponent, m, w)) {
      basis = chooseBasis(st, active);
      if (basis === null) return { status: "nonFinite", iterations: iteration, cancellation: 1 };
    }
    const worst = balances(basis, concentration, m, w, gradient, bulk);
    if (!Number.isFinite(worst)) {
      status = "nonFinite";
      break;
    }
    if (worst <= TARGET && !unsaturated) {
      status = "converged";
      break;
    }
    if (unsaturated) {
      best = Infinity;
    } else if (worst < 0.5 * best) {
      best = worst;
      stalled = 0;
    } else if (worst <= ENOUGH && ++stalled >= 2) {
      status = "converged";
      break;
    }
    if (iteration >= maxIterations) break;
    assembleMatrix(basis, concentration, m, w, free, matrix);
    for (let k = 0; k < free; k++) direction[k] = -gradient[k + w]!;
    factorScaled(matrix, free, scale, 1e-30);
    solveScaled(matrix, free, scale, direction);
    let largest = 0;
    for (let k = 0; k < free; k++) largest = Math.max(largest, Math.abs(direction[k]!));
    if (!Number.isFinite(largest)) {
      status = "nonFinite";
      break;
    }
    const damping = largest > MAX_STEP ? MAX_STEP / largest : 1;
    let steepest = 0;
    for (let i = 0; i < all; i++) {
      let sum = 0;
      for (let p = basis.start[i]!; p < basis.start[i + 1]!; p++) {
        const k = basis.column[p]! - w;
        if (k >= 0) sum += basis.value[p]! * direction[k]!;
      }
      change[i] = sum * damping;
      if (i < m) steepest = Math.max(steepest, Math.abs(change[i]!));
    }
    if (steepest <= SMALL_STEP) {
      for (let i = 0; i < m; i++) concentration[i] = concentration[i]! * Math.exp(change[i]!);
      for (let i = 0; i < all; i++) exponent[i] = exponent[i]! + change[i]!;
      continue;
    }
    let slope = 0;
    for (let k = 0; k < free; k++) slope += gradient[k + w]! * direction[k]! * damping;
    const t = searchSlope(concentration, change, slope);
    for (let i = 0; i < all; i++) exponent[i] = exponent[i]! + t * change[i]!;
    fillConcentrations(exponent, concentration, m);
  }
  for (let s = 0; s < w; s++) st.scratch.amount[active[s]!] = -gradient[s]!;
  let cancellation = 1;
  for (let k = w; k < n; k++) cancellation = Math.max(cancellation, basis.magnitude[k]! / bulk[k]!);
  for (let j = 0; j < n; j++) {
    const i = st.unit[j]!;
    const c = concentration[i]!;
    x[j] = (c > 1e-290 ? Math.log(c) : exponent[i]!) - base[i]!;
  }
  return { status, iterations: iteration, cancellation };
}

/**
 * Moves the point towards "every active solid saturated", leaving the other basis species as they are; true while not there.
 * In steps, because one long move can send other species hundreds of ln units away.
 */
function approachSaturation(st: SolveStructure, basis: Basis, w: number): boolean {
  const { exponent, concentration } = st.scratch;
  const shift = new Float64Array(w);
  let unsaturated = false;
  for (let k = 0; k < w; k++) {
    const e = exponent[basis.rows[k]!]!;
    if (e === 0) continue;
    shift[k] = Math.max(-MAX_SHIFT, Math.min(MAX_SHIFT, -e));
    unsaturated = true;
  }
  if (!unsaturated) return false;
  for (let i = 0; i < exponent.length; i++) {
    let sum = 0;
    for (let p = basis.start[i]!; p < basis.start[i + 1]!; p++) {
      const k = basis.column[p]!;
      if (k < w) sum += basis.value[p]! * shift[k]!;
    }
    exponent[i] = exponent[i]! + sum;
  }
  fillConcentrations(exponent, concentration, st.m);
  return unsaturated;
}

/**
 * Step length along a descent direction: where the slope of the convex function has nearly vanished, or has risen to little.
 *
 * Slopes are the first one plus what the concentrations' changes add to it, so that species which the direction hardly
 * moves do not drown it in their rounding. `first` < 0 is the slope at the start; `change` the exponents' change at t = 1.
 */
function searchSlope(concentration: Float64Array, change: Float64Array, first: number): number {
  const m = concentration.length;
  let t = 1;
  let low = 0;
  let high = Infinity;
  for (let trialCount = 0; trialCount < MAX_GROWTH; trialCount++) {
    let here = first;
    for (let i = 0; i < m; i++) {
      const move = change[i]!;
      if (move !== 0) here += move * concentration[i]! * Math.expm1(Math.min(t * move, CAP));
    }
    if (here >= FLATTENED * first && here <= -OVERSHOT * first) return t;
    if (here < 0) low = t;
    else high = t;
    t = high === Infinity ? 2 * t : 0.5 * (low + high);
  }
  return low > 0 ? low : t;
}
