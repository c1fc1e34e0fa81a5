import { solveEquilibrium } from "./solve-equilibrium.ts";
import type { PreparedSystem, SolveResult } from "./types.ts";

/** Total protons (mol/L, hydroxide counted negative) over all dissolved species of a solved system. */
export function protonTotal(system: PreparedSystem, result: SolveResult): number {
  const { nComponents, nSpecies, stoichiometry } = system.problem;
  let sum = 0;
  for (let row = 0; row < nSpecies; row++) sum += stoichiometry[row * nComponents]! * result.speciesMolPerL[row]!;
  return sum;
}

/** A vessel whose protons are counted: totals (mol/L) in column order, the first (H+) not read. */
export interface Vessel {
  readonly system: PreparedSystem;
  readonly totals: ArrayLike<number>;
}

/**
 * Protons set free per litre when a vessel becomes another at the same hydrogen ion concentration (log10, mol/L): the protons held before
 * minus those held after. Positive when complexation frees protons. NaN never: null where a solve does not converge.
 */
export function protonsSetFree(before: Vessel, after: Vessel, log10H: number): number | null {
  const a = solveAt(before, log10H);
  const b = solveAt(after, log10H);
  if (a.status !== "converged" || b.status !== "converged") return null;
  return protonTotal(before.system, a) - protonTotal(after.system, b);
}

/** Step in log10[H+] of the numerical derivative. */
const STEP = 1e-3;

/** Buffer capacity (mol/L per pH unit) of a whole vessel, metals and titrant included; null where a solve does not converge. */
export function vesselBufferCapacity(vessel: Vessel, log10H: number): number | null {
  const up = solveAt(vessel, log10H + STEP);
  const down = solveAt(vessel, log10H - STEP);
  if (up.status !== "converged" || down.status !== "converged") return null;
  return (protonTotal(vessel.system, up) - protonTotal(vessel.system, down)) / (2 * STEP);
}

function solveAt(vessel: Vessel, log10H: number): SolveResult {
  const fixedLnFree = new Float64Array(vessel.system.components.length).fill(Number.NaN);
  fixedLnFree[0] = log10H * Math.LN10;
  return solveEquilibrium(vessel.system.problem, vessel.totals, { fixedLnFree });
}
