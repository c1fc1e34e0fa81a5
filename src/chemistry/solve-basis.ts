import { compensatedDot } from "../numerics/compensated-dot.ts";
import { greedyBasis } from "../numerics/integer-basis.ts";
import type { SolveStructure } from "./solve-structure.ts";

const OVERTAKEN = 20; // a species this much above its basis species calls for another basis
/** Exponents are cut here. */
export const CAP = 600; // exponents are capped here in trials: larger ones only say "far too much"

/** The change of variables at one point: basis species (after the active solids) instead of components. */
export interface Basis {
  readonly rows: Int32Array; // chosen local rows; the first w are solids (m + s)
  readonly inverse: Float64Array;
  readonly denominator: number;
  readonly total: Float64Array; // transformed totals, per basis element
  readonly magnitude: Float64Array; // sum of magnitudes in those
  readonly start: Int32Array; // sparse rows of N: species, then solids, over basis elements
  readonly column: Int32Array;
  readonly value: Float64Array;
}

/** Species by falling concentration after the active solids, greedily independent; then N = A B^-1 and the totals in it. */
export function chooseBasis(st: SolveStructure, active: readonly number[]): Basis | null {
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

/** exp of the exponents, capped so that a wild trial stays finite. */
export function fillConcentrations(exponent: Float64Array, concentration: Float64Array, m: number): void {
  for (let i = 0; i < m; i++) concentration[i] = Math.exp(Math.min(exponent[i]!, CAP));
}

/** Whether some species stands far above a basis species it is made of, so that another basis would be better conditioned. */
export function isOvertaken(basis: Basis, exponent: Float64Array, m: number, w: number): boolean {
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

/**
 * Fills `gradient` with N'c - total and `bulk` with the sums of magnitudes in it, per basis element; returns the worst
 * gradient relative to its magnitudes over the elements from `w` on (those before are solids).
 */
export function balances(
  basis: Basis,
  concentration: Float64Array,
  m: number,
  w: number,
  gradient: Float64Array,
  bulk: Float64Array,
): number {
  const { start, column, value, total } = basis;
  const n = total.length;
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
  let worst = 0;
  for (let k = 0; k < n; k++) {
    const gap = gradient[k]! - total[k]!;
    gradient[k] = gap;
    if (k < w || gap === 0) continue;
    const relative = Math.abs(gap) / bulk[k]!;
    if (Number.isNaN(relative)) return NaN;
    if (relative > worst) worst = relative;
  }
  return worst;
}

/** Fills `matrix` (lower triangle, free x free) with N' diag(c) N over the elements from `w` on. */
export function assembleMatrix(
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
