/**
 * Factors a symmetric positive definite matrix in place after scaling it to unit diagonal: D^-1/2 A D^-1/2 = L L'.
 *
 * `a` holds the lower triangle row-major (n x n); on return it holds L. `scale` (length n) receives 1/sqrt(A_jj).
 * Returns the smallest pivot of the scaled matrix (1 = perfectly conditioned, near 0 = singular in doubles); pivots
 * below `floor` are raised to it, so that a solve stays finite. Returns 0 when a diagonal element is not positive.
 */
export function factorScaled(a: Float64Array, n: number, scale: Float64Array, floor: number): number {
  for (let j = 0; j < n; j++) {
    const diagonal = a[j * n + j]!;
    if (!(diagonal > 0) || diagonal === Infinity) return 0;
    scale[j] = 1 / Math.sqrt(diagonal);
  }
  let smallest = 1;
  for (let j = 0; j < n; j++) {
    const rowJ = j * n;
    const scaleJ = scale[j]!;
    for (let k = 0; k < j; k++) {
      const rowK = k * n;
      let sum = a[rowJ + k]! * scaleJ * scale[k]!;
      for (let q = 0; q < k; q++) sum -= a[rowJ + q]! * a[rowK + q]!;
      a[rowJ + k] = sum * a[rowK + k]!; // the diagonal of L is stored inverted
    }
    let pivot = 1;
    for (let q = 0; q < j; q++) {
      const l = a[rowJ + q]!;
      pivot -= l * l;
    }
    if (pivot < smallest) smallest = pivot;
    if (!(pivot > floor)) pivot = floor;
    a[rowJ + j] = 1 / Math.sqrt(pivot);
  }
  return smallest > 0 ? smallest : 0;
}

/**
 * Solves A d = b with the factor that `factorScaled` left in `a` and `scale`; `b` (length n) is overwritten by d.
 */
export function solveScaled(a: Float64Array, n: number, scale: Float64Array, b: Float64Array): void {
  for (let j = 0; j < n; j++) {
    const rowJ = j * n;
    let sum = b[j]! * scale[j]!;
    for (let q = 0; q < j; q++) sum -= a[rowJ + q]! * b[q]!;
    b[j] = sum * a[rowJ + j]!;
  }
  for (let j = n - 1; j >= 0; j--) {
    let sum = b[j]!;
    for (let q = j + 1; q < n; q++) sum -= a[q * n + j]! * b[q]!;
    b[j] = sum * a[j * n + j]!;
  }
  for (let j = 0; j < n; j++) b[j] = b[j]! * scale[j]!;
}
