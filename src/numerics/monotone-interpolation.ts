import { AppError } from "../errors.ts";

/** A curve through given points that never overshoots them. */
export interface MonotoneCurve {
  /** Value at x; beyond the ends the end value is held. */
  readonly at: (x: number) => number;
  /** Slope dy/dx at x; zero beyond the ends. */
  readonly slopeAt: (x: number) => number;
}

/**
 * Piecewise cubic Hermite interpolation through (`x`, `y`) that is monotone wherever the data are.
 *
 * `x`: strictly increasing, at least two values; `y`: same length, all finite. Exact at the points, continuous slope. Method: F. N. Fritsch and
 * J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300 (weighted harmonic mean slopes; three-point slopes at the ends).
 *
 * @throws AppError "numerics-input" when lengths, order or values are not as stated.
 */
export function monotoneInterpolation(x: ArrayLike<number>, y: ArrayLike<number>): MonotoneCurve {
  const n = x.length;
  if (n < 2 || y.length !== n)
    throw new AppError("numerics-input", `expected at least 2 points of equal length, got ${n} and ${y.length}`, { n });
  const xs = Float64Array.from(x);
  const ys = Float64Array.from(y);
  for (let i = 0; i < n; i++)
    if (!Number.isFinite(xs[i]) || !Number.isFinite(ys[i]) || (i > 0 && xs[i]! <= xs[i - 1]!))
      throw new AppError(
        "numerics-input",
        `expected finite values and x increasing, got (${xs[i]!}, ${ys[i]!}) at ${i}`,
        { i },
      );
  const width = (i: number): number => xs[i + 1]! - xs[i]!;
  const secant = (i: number): number => (ys[i + 1]! - ys[i]!) / width(i);
  const slopes = new Float64Array(n);
  if (n === 2) slopes.fill(secant(0));
  else {
    for (let i = 1; i < n - 1; i++) {
      const left = secant(i - 1);
      const right = secant(i);
      if (left * right <= 0) continue;
      const w1 = 2 * width(i) + width(i - 1);
      const w2 = width(i) + 2 * width(i - 1);
      slopes[i] = (w1 + w2) / (w1 / left + w2 / right);
    }
    slopes[0] = endSlope(width(0), width(1), secant(0), secant(1));
    slopes[n - 1] = endSlope(width(n - 2), width(n - 3), secant(n - 2), secant(n - 3));
  }
  const segment = (value: number): number => {
    let low = 0;
    let high = n - 1;
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (xs[middle]! <= value) low = middle;
      else high = middle;
    }
    return low;
  };
  return {
    at(value) {
      if (value <= xs[0]!) return ys[0]!;
      if (value >= xs[n - 1]!) return ys[n - 1]!;
      const i = segment(value);
      const h = width(i);
      const t = (value - xs[i]!) / h;
      const u = 1 - t;
      return (
        ys[i]! * (1 + 2 * t) * u * u +
        ys[i + 1]! * t * t * (3 - 2 * t) +
        h * t * u * (slopes[i]! * u - slopes[i + 1]! * t)
      );
    },
    slopeAt(value) {
      if (value < xs[0]! || value > xs[n - 1]!) return 0;
      const i = segment(value);
      const t = (value - xs[i]!) / width(i);
      return 6 * t * (1 - t) * secant(i) + slopes[i]! * (1 - t) * (1 - 3 * t) + slopes[i + 1]! * t * (3 * t - 2);
    },
  };
}

/** Three-point slope at an end, cut back where it would break monotony (Fritsch and Butland). */
function endSlope(near: number, far: number, secantNear: number, secantFar: number): number {
  const slope = ((2 * near + far) * secantNear - near * secantFar) / (near + far);
  if (slope * secantNear <= 0) return 0;
  if (secantNear * secantFar <= 0 && Math.abs(slope) > 3 * Math.abs(secantNear)) return 3 * secantNear;
  return slope;
}
