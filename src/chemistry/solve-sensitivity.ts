import { factorScaled, solveScaled } from "../numerics/cholesky.ts";
import { assembleMatrix, chooseBasis, fillConcentrations } from "./solve-basis.ts";
import { loadProblem, type SolveOptions } from "./solve-load.ts";
import type { MassBalanceProblem, SolveResult } from "./types.ts";

/** How a solved equilibrium moves when its inputs move a little; components that are fixed or absent have zeros. */
export interface Sensitivity {
  /** d ln free_j / d ln total_k, nComponents x nComponents, row-major (for a total of zero or below: d ln free_j / d total_k is not scaled). */
  readonly byTotal: Float64Array;
  /** d ln free_j / d lnBeta_i, nComponents x nSpecies, row-major. */
  readonly bySpecies: Float64Array;
  /** d ln free_j / d lnBeta_s of solids that are present, nComponents x solids.n, row-major. */
  readonly bySolid: Float64Array;
  /** Largest |d ln free_j / d ln total_k|, at least 1; its log10 is the number of digits that totals known to full precision lose. */
  readonly condition: number;
}

/**
 * Derivatives of the free concentrations of a converged `result` by implicit differentiation of the balances.
 *
 * Arguments as given to `solveEquilibrium` for that result. Solids that are present stay present (their saturation holds); at a point where one is about to
 * appear or vanish the derivative is one-sided. Exact to rounding even where nearly equal totals make the balances
 * nearly singular: solved in the basis of the largest species. Returns null for a result that did not converge.
 */
export function equilibriumSensitivity(
  problem: MassBalanceProblem,
  totals: ArrayLike<number>,
  result: SolveResult,
  options: SolveOptions = {},
): Sensitivity | null {
  if (result.status !== "converged") return null;
  const loaded = loadProblem(problem, totals, options);
  if (loaded === null) return null;
  const { st } = loaded;
  const { n, m } = st;
  const nComponents = problem.nComponents;
  const byTotal = new Float64Array(nComponents * nComponents);
  const bySpecies = new Float64Array(nComponents * problem.nSpecies);
  const bySolid = new Float64Array(nComponents * problem.solids.n);
  const active: number[] = [];
  st.solids.forEach((s, k) => {
    if (result.solidsMolPerL[s]! > 0) active.push(k);
  });
  const { exponent, concentration, base, total } = st.scratch;
  const { start, column, value } = st.rows;
  for (let i = 0; i < exponent.length; i++) {
    let e = base[i]!;
    for (let p = start[i]!; p < start[i + 1]!; p++) e += value[p]! * result.lnFree[st.unknown[column[p]!]!]!;
    exponent[i] = e;
  }
  fillConcentrations(exponent, concentration, m);
  const basis = n === 0 ? null : chooseBasis(st, active);
  if (basis === null) return { byTotal, bySpecies, bySolid, condition: 1 };
  const w = active.length;
  const free = n - w;
  const matrix = new Float64Array(n * n);
  const scale = new Float64Array(n);
  const right = new Float64Array(n);
  assembleMatrix(basis, concentration, m, w, free, matrix);
  factorScaled(matrix, free, scale, 1e-30);
  const weight = (j: number, k: number): number => basis.inverse[j * n + k]! / basis.denominator;
  /** `shift`: d e_k of the solid part and d lnBeta of the basis, taken off before going back to components. */
  const write = (
    target: Float64Array,
    width: number,
    at: number,
    shift: (k: number) => number,
    factor: number,
  ): void => {
    for (let j = 0; j < n; j++) {
      let sum = 0;
      for (let k = 0; k < n; k++) sum += weight(j, k) * ((k >= w ? right[k - w]! : 0) - shift(k));
      target[st.unknown[j]! * width + at] = sum * factor;
    }
  };
  let condition = 1;
  for (let t = 0; t < n; t++) {
    for (let k = 0; k < free; k++) right[k] = weight(t, k + w);
    solveScaled(matrix, free, scale, right);
    const factor = total[t]! > 0 ? total[t]! : 1;
    write(byTotal, nComponents, st.unknown[t]!, () => 0, factor);
    for (let j = 0; j < n; j++)
      condition = Math.max(condition, Math.abs(byTotal[st.unknown[j]! * nComponents + st.unknown[t]!]!));
  }
  const positionOf = new Int32Array(exponent.length).fill(-1);
  basis.rows.forEach((row, k) => (positionOf[row] = k));
  for (let i = 0; i < exponent.length; i++) {
    if (i >= m && positionOf[i] === -1) continue;
    const position = positionOf[i]!;
    right.fill(0);
    if (position === -1) {
      for (let p = basis.start[i]!; p < basis.start[i + 1]!; p++) {
        const k = basis.column[p]! - w;
        if (k >= 0) right[k] = -basis.value[p]! * concentration[i]!;
      }
    } else {
      // every species made of this basis element moves the other way, except the element itself, whose own constant moved
      for (let q = 0; q < m; q++) {
        let through = 0;
        for (let p = basis.start[q]!; p < basis.start[q + 1]!; p++)
          if (basis.column[p] === position) through = basis.value[p]!;
        if (through === 0 || q === i) continue;
        for (let p = basis.start[q]!; p < basis.start[q + 1]!; p++) {
          const k = basis.column[p]! - w;
          if (k >= 0) right[k] = right[k]! + basis.value[p]! * concentration[q]! * through;
        }
      }
    }
    solveScaled(matrix, free, scale, right);
    const shift = (k: number): number => (k === position ? 1 : 0);
    if (i < m)
      for (let q = st.groupStart[i]!; q < st.groupStart[i + 1]!; q++)
        write(bySpecies, problem.nSpecies, st.species[q]!, shift, st.scratch.share[q]!);
    else write(bySolid, problem.solids.n, st.solids[i - m]!, shift, 1);
  }
  return { byTotal, bySpecies, bySolid, condition };
}
