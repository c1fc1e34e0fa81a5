import { factorScaled, solveScaled } from "../numerics/cholesky.ts";
import type { SolveStructure } from "./solve-structure.ts";

const MAX_STEP = 2; // in ln units: keeps the quadratic model of a sum of exponentials meaningful
const WELL_CONDITIONED = 1e-7; // smallest scaled pivot below which the answer in these variables loses too many digits
const SMALL_LAST_STEP = 1e-5; // a last step this small leaves an error of about its square
const OVERFLOW = 690;

/** What the plain iteration ended with; `ok` false means: use the method that changes the basis. */
export interface NewtonOutcome {
  readonly ok: boolean;
  readonly iterations: number;
  readonly pivot: number; // smallest scaled pivot of the last matrix: its inverse says how far the answer magnifies rounding
}

/**
 * Plain damped Newton in ln of the free concentrations, starting from `scratch.x`: the fast path from a near answer.
 *
 * Leaves x, exponents and concentrations in the scratch arrays. Gives up (ok false) on overflow, on a nearly singular
 * matrix (nearly equal totals of strongly bound partners), or after `maxIterations`; it has no line search.
 */
export function newtonFromNear(st: SolveStructure, tolerance: number, maxIterations: number): NewtonOutcome {
  const { n, m } = st;
  const { x, step, hessian, scale, total, concentration, exponent, base } = st.scratch;
  const { start, column, value } = st.rows;
  const { balanceStart, balanceRow, balanceValue, hessianIndex, hessianStart, hessianRow, hessianValue } = st;
  const nPairs = hessianIndex.length;
  let lastStep = Infinity;
  let pivot = 0;
  for (let iteration = 0; ; iteration++) {
    for (let i = 0; i < m; i++) {
      let e = base[i]!;
      const end = start[i + 1]!;
      for (let p = start[i]!; p < end; p++) e += value[p]! * x[column[p]!]!;
      if (!(e < OVERFLOW)) return { ok: false, iterations: iteration, pivot };
      exponent[i] = e;
      concentration[i] = Math.exp(e);
    }
    let worst = 0;
    for (let j = 0; j < n; j++) {
      let sum = 0;
      const end = balanceStart[j + 1]!;
      for (let p = balanceStart[j]!; p < end; p++) sum += balanceValue[p]! * concentration[balanceRow[p]!]!;
      const gap = total[j]! - sum;
      step[j] = gap;
      const relative = Math.abs(gap) / total[j]!;
      if (relative > worst) worst = relative;
    }
    if (worst <= tolerance && lastStep <= SMALL_LAST_STEP && pivot >= WELL_CONDITIONED)
      return { ok: true, iterations: iteration, pivot };
    if (iteration >= maxIterations) return { ok: false, iterations: iteration, pivot };
    hessian.fill(0);
    for (let p = 0; p < nPairs; p++) {
      let sum = 0;
      const end = hessianStart[p + 1]!;
      for (let q = hessianStart[p]!; q < end; q++) sum += hessianValue[q]! * concentration[hessianRow[q]!]!;
      hessian[hessianIndex[p]!] = sum;
    }
    pivot = factorScaled(hessian, n, scale, 1e-300);
    if (!(pivot >= WELL_CONDITIONED)) return { ok: false, iterations: iteration, pivot };
    solveScaled(hessian, n, scale, step);
    lastStep = 0;
    for (let j = 0; j < n; j++) {
      const size = Math.abs(step[j]!);
      if (size > lastStep) lastStep = size;
    }
    const damping = lastStep > MAX_STEP ? MAX_STEP / lastStep : 1;
    for (let j = 0; j < n; j++) x[j] = x[j]! + damping * step[j]!;
  }
}
