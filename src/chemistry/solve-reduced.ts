import { factorScaled, solveScaled } from "../numerics/cholesky.ts";
import { compensatedDot } from "../numerics/compensated-dot.ts";
import { greedyBasis } from "../numerics/integer-basis.ts";
import type { SolveStructure } from "./solve-structure.ts";

const TARGET = 2e-15; // of the sum of magnitudes in a balance: what correctly rounded sums can reach
const ENOUGH = 1e-13; // accepted when rounding stops further progress
const OVERTAKEN = 20; // a species this much above its basis species calls for another basis
const SMALL_STEP = 0.05; // below it concentrations are updated by factors, so that no digit is lost in large exponents
const MAX_STEP = 6; // ln units of any basis species in one step
const MAX_GROWTH = 40; // doublings and halvings of one line search
const FLATTENED = 0.1; // the search goes on while the slope still falls by more than this share of the first one
const OVERSHOT = 0.9; // and turns back when it rises by more than this share
const MAX_SHIFT = 8; // ln units by which a solid taken in is brought towards saturation per iteration
const CAP = 600; // exponents are capped here in trials: larger ones only say "far too much"

/** What the reduced method ended with. */
export interface ReducedOutcome {
  readonly status: "converged" | "maxIterations" | "nonFinite";
  readonly iterations: number;
  /** Largest ratio of the magnitudes that cancel in a transformed total to what is left: 10^digits lost by nearly equal totals. */
  readonly cancellation: number;
}

/** The change of variables at one point: basis species (after the active solids) instead of components. */
interface Basis {
  readonly rows: Int32Array; // chosen local rows; the first w are solids (m + s)
  readonly inverse: Float64Array;
  readonly denominator: number;
  readonly total: Float64Array; // transformed totals, per basis element
  readonly magnitude: Float64Array; // sum of magnitudes in those
  readonly start: Int32Array; // sparse rows of N: species, then solids, over basis elements
  readonly column: Int32Array;
  readonly value: Float64Array;
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
  const trial = new Float64Array(m);
  let best = Infinity;
  let stalled = 0;
  let iteration = 0;
  let status: ReducedOutcome["status"] = "maxIterations";
  fillConcentrations(exponent, concentration, m);
  for (; ; iteration++) {
    const unsaturated = approachSaturation(st, basis, w);
    if (overtaken(basis, exponent, m, w)) {
      basis = chooseBasis(st, active);
      if (basis === null) return { status: "nonFinite", iterations: iteration, cancellation: 1 };
    }
    const error = balances(basis, concentration, m, n, gradient, bulk);
    let worst = 0;
    for (let k = w; k < n; k++) worst = Math.max(worst, error[k]!);
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
    assemble(basis, concentration, m, w, free, matrix);
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
    const t = searchSlope(st, basis, w, direction, damping, change, trial);
    for (let i = 0; i < all; i++) exponent[i] = exponent[i]! + t * change[i]!;
    fillConcentrations(exponent, concentration, m);
  }
  for (let s = 0; s < w; s++) st.scratch.amount[active[s]!] = -gradient[s]!;
  let cancellation = 1;
  for (let k = w; k < n; k++) cancellation = Math.max(cancellation, basis.magnitude[k]! / bulk[k]!);
  for (let j = 0; j < n; j++) {
    const i = st.unit[j]!;
    const c = concentration[i]!;
    x[j] = c > 1e-290 ? Math.log(c) : exponent[i]!;
  }
  return { status, iterations: iteration, cancellation };
}

/** Species by falling concentration after the active solids, greedily independent; then N = A B^-1 and the totals in it. */
function chooseBasis(st: SolveStructure, active: readonly number[]): Basis | null {
  const { n, m, dense } = st;
  const { exponent, total } = st.scratch;
  const order = new Int32Array(m + active.length);
  const byConcentration = new Int32Array(m);
  for (let i = 0; i < m; i++) byConcentration[i] = i;
  byConcentration.sort((a, b) => exponent[b]! - exponent[a]! || a - b);
  active.forEach((s, k) => (order[k] = m + s));
  order.set(byConcentration, active.length);
  const chosen = greedyBasis(dense, n, order, order.length);
  if (chosen === null) return null;
  const { rows, inverse, denominator } = chosen;
  const all = m + st.solids.length;
  const start = new Int32Array(all + 1);
  const column: number[] = [];
  const value: number[] = [];
  const { start: rowStart, column: rowColumn, value: rowValue } = st.rows;
  for (let i = 0; i < all; i++) {
    for (let k = 0; k < n; k++) {
      let sum = 0;
      for (let p = rowStart[i]!; p < rowStart[i + 1]!; p++) sum += rowValue[p]! * inverse[rowColumn[p]! * n + k]!;
      if (Math.abs(sum) < 1e-9) continue;
      column.push(k);
      value.push(sum / denominator);
    }
    start[i + 1] = column.length;
  }
  const transformed = new Float64Array(n);
  const magnitude = new Float64Array(n);
  for (let k = 0; k < n; k++) {
    transformed[k] = compensatedDot(inverse, k, n, total, n) / denominator;
    let sum = 0;
    for (let j = 0; j < n; j++) sum += Math.abs(inverse[j * n + k]! * total[j]!);
    magnitude[k] = sum / denominator;
  }
  return {
    rows,
    inverse,
    denominator,
    total: transformed,
    magnitude,
    start,
    column: Int32Array.from(column),
    value: Float64Array.from(value),
  };
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

function fillConcentrations(exponent: Float64Array, concentration: Float64Array, m: number): void {
  for (let i = 0; i < m; i++) concentration[i] = Math.exp(Math.min(exponent[i]!, CAP));
}

function overtaken(basis: Basis, exponent: Float64Array, m: number, w: number): boolean {
  const margin = Math.log(OVERTAKEN);
  for (let i = 0; i < m; i++) {
    const e = exponent[i]! - margin;
    for (let p = basis.start[i]!; p < basis.start[i + 1]!; p++) {
      const k = basis.column[p]!;
      if (k >= w && e > exponent[basis.rows[k]!]!) return true;
    }
  }
  return false;
}

/** Gradient N'c - total and its error relative to the magnitudes in each balance. */
function balances(
  basis: Basis,
  concentration: Float64Array,
  m: number,
  n: number,
  gradient: Float64Array,
  bulk: Float64Array,
): Float64Array {
  const { start, column, value, total } = basis;
  gradient.fill(0);
  bulk.fill(0);
  for (let i = 0; i < m; i++) {
    const c = concentration[i]!;
    for (let p = start[i]!; p < start[i + 1]!; p++) {
      const k = column[p]!;
      const term = value[p]! * c;
      gradient[k] = gradient[k]! + term;
      bulk[k] = bulk[k]! + Math.abs(term);
    }
  }
  const error = new Float64Array(n);
  for (let k = 0; k < n; k++) {
    gradient[k] = gradient[k]! - total[k]!;
    error[k] = Math.abs(gradient[k]!) / bulk[k]!;
  }
  return error;
}

function assemble(
  basis: Basis,
  concentration: Float64Array,
  m: number,
  w: number,
  free: number,
  matrix: Float64Array,
): void {
  const { start, column, value } = basis;
  matrix.fill(0);
  for (let i = 0; i < m; i++) {
    const c = concentration[i]!;
    const end = start[i + 1]!;
    for (let p = start[i]!; p < end; p++) {
      const k = column[p]! - w;
      if (k < 0) continue;
      const weighted = value[p]! * c;
      for (let q = start[i]!; q <= p; q++) {
        const l = column[q]! - w;
        if (l >= 0) matrix[k * free + l] = matrix[k * free + l]! + weighted * value[q]!;
      }
    }
  }
}

/** Step length along a descent direction: the slope of the convex function there is still falling, or has risen to little. */
function searchSlope(
  st: SolveStructure,
  basis: Basis,
  w: number,
  direction: Float64Array,
  damping: number,
  change: Float64Array,
  trial: Float64Array,
): number {
  const { m } = st;
  const { exponent } = st.scratch;
  let rate = 0; // d(total . y)/dt
  for (let k = w; k < st.n; k++) rate += basis.total[k]! * direction[k - w]! * damping;
  const slope = (t: number): number => {
    for (let i = 0; i < m; i++) trial[i] = exponent[i]! + t * change[i]!;
    fillConcentrations(trial, trial, m);
    let sum = 0;
    for (let i = 0; i < m; i++) sum += trial[i]! * change[i]!;
    return sum - rate;
  };
  const first = slope(0);
  let t = 1;
  let low = 0;
  let high = Infinity;
  for (let trialCount = 0; trialCount < MAX_GROWTH; trialCount++) {
    const here = slope(t);
    if (here >= FLATTENED * first && here <= -OVERSHOT * first) return t;
    if (here < 0) low = t;
    else high = t;
    t = high === Infinity ? 2 * t : 0.5 * (low + high);
  }
  return low > 0 ? low : t;
}
