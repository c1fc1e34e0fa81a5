const DEPENDENT = 1e-9; // rows are small integers, so a genuine remainder is far above rounding

/** A basis of the row space of an integer matrix, and its inverse as integers over one denominator. */
export interface IntegerBasis {
  /** Chosen rows, in the order they were taken. */
  readonly rows: Int32Array;
  /** Inverse of the chosen square matrix times `denominator`, n x n row-major; integers whenever they stay exact. */
  readonly inverse: Float64Array;
  readonly denominator: number;
}

/**
 * Takes rows of `matrix` (row-major, n columns) greedily in the given `order` (row indices, best first), skipping those
 * that depend on the rows taken before, until n are found.
 *
 * By the exchange property of matroids every row left out is a combination of rows that came before it in `order`, which
 * is what keeps a change of variables to the basis well conditioned. Returns null when the rows do not span n dimensions.
 */
export function greedyBasis(
  matrix: ArrayLike<number>,
  n: number,
  order: ArrayLike<number>,
  count: number,
): IntegerBasis | null {
  const rows = new Int32Array(n);
  const echelon = new Float64Array(n * n);
  const pivotColumn = new Int32Array(n);
  const work = new Float64Array(n);
  let found = 0;
  for (let o = 0; o < count && found < n; o++) {
    const row = order[o]!;
    for (let j = 0; j < n; j++) work[j] = matrix[row * n + j]!;
    for (let k = 0; k < found; k++) {
      const factor = work[pivotColumn[k]!]!;
      if (factor !== 0) {
        for (let j = 0; j < n; j++) work[j] = work[j]! - factor * echelon[k * n + j]!;
        work[pivotColumn[k]!] = 0;
      }
    }
    let best = 0;
    for (let j = 1; j < n; j++) if (Math.abs(work[j]!) > Math.abs(work[best]!)) best = j;
    if (Math.abs(work[best]!) < DEPENDENT) continue;
    const pivot = work[best]!;
    for (let j = 0; j < n; j++) echelon[found * n + j] = work[j]! / pivot;
    pivotColumn[found] = best;
    rows[found++] = row;
  }
  return found < n ? null : invert(matrix, n, rows);
}

/** Gauss-Jordan with partial pivoting, then the inverse is rounded to exact rationals over the determinant. */
function invert(matrix: ArrayLike<number>, n: number, rows: Int32Array): IntegerBasis | null {
  const width = 2 * n;
  const work = new Float64Array(n * width);
  for (let k = 0; k < n; k++) {
    for (let j = 0; j < n; j++) work[k * width + j] = matrix[rows[k]! * n + j]!;
    work[k * width + n + k] = 1;
  }
  let determinant = 1;
  for (let c = 0; c < n; c++) {
    let best = c;
    for (let r = c + 1; r < n; r++) if (Math.abs(work[r * width + c]!) > Math.abs(work[best * width + c]!)) best = r;
    const pivot = work[best * width + c]!;
    if (Math.abs(pivot) < DEPENDENT) return null;
    determinant *= pivot;
    for (let j = 0; j < width; j++) {
      const held = work[c * width + j]!;
      work[c * width + j] = work[best * width + j]! / pivot;
      if (best !== c) work[best * width + j] = held;
    }
    for (let r = 0; r < n; r++) {
      const factor = work[r * width + c]!;
      if (r === c || factor === 0) continue;
      for (let j = c; j < width; j++) work[r * width + j] = work[r * width + j]! - factor * work[c * width + j]!;
    }
  }
  const denominator = Math.max(1, Math.round(Math.abs(determinant)));
  const inverse = new Float64Array(n * n);
  let exact = denominator < 1e9;
  for (let k = 0; k < n && exact; k++) {
    for (let j = 0; j < n; j++) {
      const value = work[k * width + n + j]! * denominator;
      const rounded = Math.round(value);
      if (Math.abs(value - rounded) > 1e-4) exact = false;
      inverse[k * n + j] = rounded;
    }
  }
  if (exact) return { rows, inverse, denominator };
  for (let k = 0; k < n; k++) for (let j = 0; j < n; j++) inverse[k * n + j] = work[k * width + n + j]!;
  return { rows, inverse, denominator: 1 };
}
