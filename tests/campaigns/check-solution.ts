import type { MassBalanceProblem, SolveResult } from "../../src/chemistry/types.ts";

/** What an answer misses by, computed from the definition and not by the solver's code. */
export interface SolutionFaults {
  readonly balance: number; // worst relative residual over the components with a balance
  readonly massAction: number; // worst |ln c - (ln beta + sum a ln free)| over species above 1e-290 mol/L
  readonly supersaturation: number; // worst log10 above saturation of a solid
  readonly complementarity: number; // worst |SI| of a solid with an amount
  readonly negative: number; // most negative amount of anything, as a positive number
}

/**
 * Checks species, solids and indices of `result` against balances, mass action and complementarity.
 *
 * `totals` mol/L per component; components whose `fixedLnFree` is not NaN have no balance. A component of mixed sign (protons) is measured
 * against the sum of magnitudes in its balance.
 */
export function solutionFaults(
  problem: MassBalanceProblem,
  totals: ArrayLike<number>,
  fixedLnFree: ArrayLike<number>,
  result: SolveResult,
): SolutionFaults {
  const { nComponents: n, nSpecies, stoichiometry, solids } = problem;
  const product = (matrix: Int8Array, row: number, lnBeta: Float64Array): number => {
    let sum = lnBeta[row]!;
    for (let j = 0; j < n; j++) sum += matrix[row * n + j]! * result.lnFree[j]!;
    return sum;
  };
  let balance = 0;
  for (let j = 0; j < n; j++) {
    if (!Number.isNaN(fixedLnFree[j])) continue;
    const terms: number[] = [-totals[j]!];
    for (let i = 0; i < nSpecies; i++) terms.push(stoichiometry[i * n + j]! * result.speciesMolPerL[i]!);
    for (let s = 0; s < solids.n; s++) terms.push(solids.stoichiometry[s * n + j]! * result.solidsMolPerL[s]!);
    const bulk = terms.reduce((sum, term) => sum + Math.abs(term), 0);
    const mixed = terms.slice(1, 1 + nSpecies).some((term) => term < 0);
    terms.sort((a, b) => Math.abs(b) - Math.abs(a));
    const gap = Math.abs(terms.reduce((sum, term) => sum + term, 0));
    if (bulk > 0) balance = Math.max(balance, gap / (mixed ? bulk : totals[j]!));
  }
  let massAction = 0;
  for (let i = 0; i < nSpecies; i++) {
    const c = result.speciesMolPerL[i]!;
    if (c > 1e-290)
      massAction = Math.max(massAction, Math.abs(Math.log(c) - product(stoichiometry, i, problem.lnBeta)));
  }
  let supersaturation = 0;
  let complementarity = 0;
  for (let s = 0; s < solids.n; s++) {
    const index = product(solids.stoichiometry, s, solids.lnBeta) / Math.LN10;
    supersaturation = Math.max(supersaturation, index);
    if (result.solidsMolPerL[s]! > 0) complementarity = Math.max(complementarity, Math.abs(index));
  }
  let negative = 0;
  for (const amount of [...result.speciesMolPerL, ...result.solidsMolPerL]) negative = Math.max(negative, -amount);
  return { balance, massAction, supersaturation, complementarity, negative };
}
