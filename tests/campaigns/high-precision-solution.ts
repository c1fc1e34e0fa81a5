import { Decimal } from "decimal.js";
import type { MassBalanceProblem } from "../../src/chemistry/types.ts";

/** A solution worth 50 digits, and how strongly it depends on its totals. */
export interface HighPrecisionSolution {
  readonly lnFree: readonly Decimal[]; // per component
  readonly residual: number; // worst relative residual, below 1e-50
  /** Largest |d ln free_j / d ln total_k|: the condition of the problem. Its log10 is the number of digits that totals in doubles lose. */
  readonly condition: number;
}

const Precise = Decimal.clone({ precision: 140, minE: -9e15, maxE: 9e15 });

/**
 * Newton in ln of the free concentrations with 140 decimal digits, from a start that needs only to be in the neighbourhood: the function is convex, so
 * whatever it converges to is the answer. Works out of plain loops over decimal.js numbers; shares nothing with the solver. No solids.
 *
 * `start`: ln free per component. Components whose `fixedLnFree` is not NaN are held. Throws when it does not reach 50 digits.
 */
export function highPrecisionSolution(
  problem: MassBalanceProblem,
  totals: ArrayLike<number>,
  fixedLnFree: ArrayLike<number>,
  start: ArrayLike<number>,
): HighPrecisionSolution {
  const { nComponents, nSpecies, stoichiometry } = problem;
  const unknown = Array.from({ length: nComponents }, (_, j) => j).filter((j) => Number.isNaN(fixedLnFree[j]));
  const n = unknown.length;
  const lnFree = Array.from(
    { length: nComponents },
    (_, j) => new Precise(unknown.includes(j) ? start[j]! : fixedLnFree[j]!),
  );
  const total = unknown.map((j) => new Precise(totals[j]!));
  const beta = Array.from(problem.lnBeta, (value) => new Precise(value).exp());
  const coefficient = (i: number, u: number): number => stoichiometry[i * nComponents + unknown[u]!]!;
  for (let iteration = 0; iteration < 60; iteration++) {
    const free = lnFree.map((value) => value.exp());
    const concentration = beta.map((b, i) => {
      let c = b;
      for (let j = 0; j < nComponents; j++) {
        const a = stoichiometry[i * nComponents + j]!;
        if (a !== 0) c = c.times(free[j]!.pow(a));
      }
      return c;
    });
    const gap = total.map((t) => t.neg());
    const matrix = unknown.map(() => unknown.map(() => new Precise(0)));
    for (let i = 0; i < nSpecies; i++)
      for (let u = 0; u < n; u++) {
        const a = coefficient(i, u);
        if (a === 0) continue;
        const term = concentration[i]!.times(a);
        gap[u] = gap[u]!.plus(term);
        for (let v = 0; v < n; v++)
          if (coefficient(i, v) !== 0) matrix[u]![v] = matrix[u]![v]!.plus(term.times(coefficient(i, v)));
      }
    const residual = Decimal.max(...gap.map((g, u) => g.div(total[u]!).abs())).toNumber();
    const inverse = inverted(matrix);
    const step = inverse.map((row) => row.reduce((sum, value, v) => sum.minus(value.times(gap[v]!)), new Precise(0)));
    const largest = Decimal.max(...step.map((d) => d.abs()));
    if (residual < 1e-50 && largest.lt(1e-50)) {
      let condition = new Precise(1);
      for (const row of inverse)
        row.forEach((value, v) => {
          condition = Decimal.max(condition, value.times(total[v]!).abs());
        });
      return { lnFree, residual, condition: condition.toNumber() };
    }
    const damping = largest.gt(1) ? new Precise(1).div(largest) : new Precise(1);
    unknown.forEach((j, u) => {
      lnFree[j] = lnFree[j]!.plus(step[u]!.times(damping));
    });
  }
  throw new Error("the 50-digit solution was not reached in 60 iterations");
}

/** Gauss-Jordan with pivoting on the largest element of the column. */
function inverted(matrix: readonly (readonly Decimal[])[]): Decimal[][] {
  const n = matrix.length;
  const work = matrix.map((row, r) => [...row, ...row.map((_, c) => new Precise(r === c ? 1 : 0))]);
  for (let c = 0; c < n; c++) {
    let best = c;
    for (let r = c + 1; r < n; r++) if (work[r]![c]!.abs().gt(work[best]![c]!.abs())) best = r;
    [work[c], work[best]] = [work[best]!, work[c]!];
    const pivot = work[c]![c]!;
    work[c] = work[c]!.map((value) => value.div(pivot));
    for (let r = 0; r < n; r++) {
      const factor = work[r]![c]!;
      if (r === c || factor.isZero()) continue;
      work[r] = work[r]!.map((value, k) => value.minus(factor.times(work[c]![k]!)));
    }
  }
  return work.map((row) => row.slice(n));
}
