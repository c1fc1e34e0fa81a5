import type { MassBalanceProblem } from "../../src/chemistry/types.ts";

/** A row as tests write it: log10 beta, then the coefficients over the components. */
export type Row = readonly [log10Beta: number, ...coefficients: number[]];

/** Builds a problem from rows of species and of solids. */
export function massBalanceProblem(species: readonly Row[], solids: readonly Row[] = []): MassBalanceProblem {
  const nComponents = species[0]!.length - 1;
  const part = (rows: readonly Row[]): { stoichiometry: Int8Array; lnBeta: Float64Array; n: number } => ({
    stoichiometry: Int8Array.from(rows.flatMap(([, ...coefficients]) => coefficients)),
    lnBeta: Float64Array.from(rows, ([log10Beta]) => log10Beta * Math.LN10),
    n: rows.length,
  });
  const { stoichiometry, lnBeta } = part(species);
  return { nComponents, nSpecies: species.length, stoichiometry, lnBeta, solids: part(solids) };
}
