import { AppError } from "../errors.ts";
import { type EquilibriumResult, type SolveOptions, solveEquilibrium } from "./solve-equilibrium.ts";
import type { MassBalanceProblem } from "./types.ts";

/** Column of H+ in every problem of this program. */
const PROTON = 0;

/**
 * Solves for the free protons too, given their total: the proton condition, from which the pH of a mixture follows.
 *
 * `protonTotalMolPerL` counts H+ as the problem's species do (OH- counts -1), so it may be negative: acid added minus base added
 * plus the protons that came with the components. `totals` is mol/L per component; its entry 0 is ignored. Everything else
 * as in `solveEquilibrium`; the free protons are lnFree[0] (a concentration, not an activity). The same convex function, with one more variable: the
 * solution is unique, because the proton total rises monotonically with the free protons.
 *
 * @throws AppError "solver-input" when the options hold H+ fixed.
 */
export function solveWithProtonTotal(
  problem: MassBalanceProblem,
  totals: ArrayLike<number>,
  protonTotalMolPerL: number,
  options: SolveOptions = {},
): EquilibriumResult {
  if (options.fixedLnFree !== undefined && !Number.isNaN(options.fixedLnFree[PROTON]))
    throw new AppError("solver-input", "expected free H+ to be unknown, got a fixed value", {});
  const all = Float64Array.from(totals);
  all[PROTON] = protonTotalMolPerL;
  return solveEquilibrium(problem, all, options);
}

/**
 * The proton total at which a solution is electrically neutral, mol/L.
 *
 * `componentCharges`: charge of each component as a free ion, H+ first (+1); `totals`: mol/L per component (entry 0 ignored);
 * `inertChargeMolPerL`: sum of charge times concentration over ions that take no part (Na+ positive, perchlorate negative). Charge is conserved
 * by every species and solid, so the charge balance is this linear combination of the mass balances. Every component must have a
 * balance: with a free concentration held fixed, its total is not known and this does not apply.
 */
export function protonTotalAtNeutrality(
  componentCharges: ArrayLike<number>,
  totals: ArrayLike<number>,
  inertChargeMolPerL: number,
): number {
  let charge = inertChargeMolPerL;
  for (let j = 0; j < totals.length; j++) if (j !== PROTON) charge += componentCharges[j]! * totals[j]!;
  return -charge;
}
