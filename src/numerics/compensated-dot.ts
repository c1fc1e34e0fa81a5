const SPLITTER = 134217729; // 2^27 + 1: splits a double into two halves whose products are exact (Dekker 1971)

/**
 * Dot product of `left` (from `offset`, step `stride`) and `right` (length n) as if computed in twice the precision.
 *
 * Needed where totals nearly cancel: a plain sum would lose exactly the difference that decides the answer.
 * Magnitudes must stay below 1e290. Method: Dot2 of Ogita, Rump and Oishi, SIAM J. Sci. Comput. 26 (2005) 1955, algorithm 5.3.
 */
export function compensatedDot(
  left: ArrayLike<number>,
  offset: number,
  stride: number,
  right: ArrayLike<number>,
  n: number,
): number {
  let sum = 0;
  let correction = 0;
  for (let i = 0; i < n; i++) {
    const a = left[offset + i * stride]!;
    const b = right[i]!;
    const product = a * b;
    let t = SPLITTER * a;
    const aHigh = t - (t - a);
    const aLow = a - aHigh;
    t = SPLITTER * b;
    const bHigh = t - (t - b);
    const bLow = b - bHigh;
    const productError = aLow * bLow - (product - aHigh * bHigh - aLow * bHigh - aHigh * bLow);
    const next = sum + product;
    const back = next - sum;
    correction += sum - (next - back) + (product - back) + productError;
    sum = next;
  }
  return sum + correction;
}
