import { AppError } from "../errors.ts";

/** Where a root search ended, with its evidence. */
export interface RootEvidence {
  readonly status: "converged" | "noSignChange" | "maxIterations" | "nonFinite";
  readonly x: number; // best estimate; the end with the smaller |f| when there is no sign change
  readonly value: number; // f(x)
  readonly low: number; // the bracket left, low <= x <= high
  readonly high: number;
  readonly evaluations: number;
}

/** Tolerances of a root search. */
export interface RootOptions {
  /** Absolute tolerance in x (default 0: as near as doubles allow). */
  readonly xTolerance?: number;
  /** |f| at or below which x counts as a root (default 0). */
  readonly valueTolerance?: number;
  readonly maxEvaluations?: number; // default 200
  /** f(lo) and f(hi) where they are known already. */
  readonly valueAtLow?: number;
  readonly valueAtHigh?: number;
}

const EPSILON = 2 ** -52;

/**
 * Finds a root of a continuous `f` between `lo` and `hi`, where its values must have opposite signs.
 *
 * Needs no derivative and cannot leave the bracket. Values that are not finite end the search with status "nonFinite". Method:
 * R. P. Brent, "Algorithms for Minimization without Derivatives" (1973), chapter 4.
 *
 * @throws AppError "numerics-input" when an end is not finite or lo is above hi.
 */
export function findRoot(f: (x: number) => number, lo: number, hi: number, options: RootOptions = {}): RootEvidence {
  if (!Number.isFinite(lo) || !Number.isFinite(hi) || lo > hi)
    throw new AppError("numerics-input", `expected finite lo <= hi, got ${lo} and ${hi}`, { lo, hi });
  const xTolerance = options.xTolerance ?? 0;
  const valueTolerance = options.valueTolerance ?? 0;
  const limit = options.maxEvaluations ?? 200;
  let evaluations = 0;
  const evaluate = (x: number): number => {
    evaluations++;
    return f(x);
  };
  let a = lo;
  let b = hi;
  let fa = options.valueAtLow ?? evaluate(a);
  let fb = options.valueAtHigh ?? evaluate(b);
  const end = (status: RootEvidence["status"], x: number, value: number, other: number): RootEvidence => ({
    status,
    x,
    value: Number.isFinite(value) ? value : 0,
    low: Math.min(x, other),
    high: Math.max(x, other),
    evaluations,
  });
  if (!Number.isFinite(fa)) return end("nonFinite", a, fa, b);
  if (!Number.isFinite(fb)) return end("nonFinite", b, fb, a);
  if (Math.abs(fa) <= valueTolerance) return end("converged", a, fa, a);
  if (Math.abs(fb) <= valueTolerance) return end("converged", b, fb, b);
  if (fa > 0 === fb > 0)
    return Math.abs(fa) < Math.abs(fb) ? end("noSignChange", a, fa, b) : end("noSignChange", b, fb, a);
  let c = a;
  let fc = fa;
  let step = b - a;
  let before = step;
  for (;;) {
    if (Math.abs(fc) < Math.abs(fb)) {
      a = b;
      fa = fb;
      b = c;
      fb = fc;
      c = a;
      fc = fa;
    }
    const tolerance = 2 * EPSILON * Math.abs(b) + 0.5 * xTolerance;
    const half = 0.5 * (c - b);
    if (Math.abs(fb) <= valueTolerance || Math.abs(half) <= tolerance) return end("converged", b, fb, c);
    if (evaluations >= limit) return end("maxIterations", b, fb, c);
    if (Math.abs(before) >= tolerance && Math.abs(fa) > Math.abs(fb)) {
      const s = fb / fa;
      let p: number;
      let q: number;
      if (a === c) {
        p = 2 * half * s;
        q = 1 - s;
      } else {
        const r = fb / fc;
        const t = fa / fc;
        p = s * (2 * half * t * (t - r) - (b - a) * (r - 1));
        q = (t - 1) * (r - 1) * (s - 1);
      }
      if (p > 0) q = -q;
      else p = -p;
      if (2 * p < Math.min(3 * half * q - Math.abs(tolerance * q), Math.abs(before * q))) {
        before = step;
        step = p / q;
      } else {
        step = half;
        before = half;
      }
    } else {
      step = half;
      before = half;
    }
    a = b;
    fa = fb;
    b += Math.abs(step) > tolerance ? step : half > 0 ? tolerance : -tolerance;
    fb = evaluate(b);
    if (!Number.isFinite(fb)) return end("nonFinite", b, fb, c);
    if (fb > 0 === fc > 0) {
      c = a;
      fc = fa;
      step = b - a;
      before = step;
    }
  }
}
