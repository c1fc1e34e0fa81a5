import { solveEquilibrium } from "./solve-equilibrium.ts";
import type { CurvePoint, Titration } from "./titration.ts";
import { boundRows, LN_NOTHING, titrationColumns } from "./titration.ts";
import type { SolveResult } from "./types.ts";

/** A titration solved point by point, with everything diluted by the titrant; the solver starts each point from the last one. */
export interface GeneralCurve {
  at(volumeML: number): CurvePoint;
  /** The full solution at a volume of titrant (mL): species and solids in the order of the system. */
  solve(volumeML: number): SolveResult;
}

/** The general titration curve of `titration`, by the mass-balance solver: covers ligand depletion, polynuclear species and solids. */
export function generalCurve(titration: Titration): GeneralCurve {
  const { system } = titration;
  const columns = titrationColumns(titration);
  const weights = boundRows(titration, columns);
  let start: Float64Array | null = null;

  const solve = (volumeML: number): SolveResult => {
    const dilution = titration.sampleVolumeML / (titration.sampleVolumeML + volumeML);
    const totals = new Float64Array(system.components.length);
    const fixedLnFree = new Float64Array(system.components.length).fill(Number.NaN);
    system.components.forEach((id, column) => {
      const held = titration.freeMolPerL[id];
      totals[column] = column === 0 ? 0 : (titration.sampleMolPerL[id] ?? 0) * dilution;
      if (column === columns.titrant) totals[column] += titration.titrant.molPerL * (1 - dilution);
      if (column === 0) fixedLnFree[column] = titration.log10H * Math.LN10;
      else if (held !== undefined) fixedLnFree[column] = held > 0 ? Math.log(held) : LN_NOTHING;
      else if (totals[column] === 0) fixedLnFree[column] = LN_NOTHING;
    });
    const warm = start === null ? {} : { start };
    const result = solveEquilibrium(system.problem, totals, { fixedLnFree, ...warm });
    if (result.status === "converged" && volumeML > 0) start = result.lnFree;
    return result;
  };

  const at = (volumeML: number): CurvePoint => {
    const result = solve(volumeML);
    let notBound = 0;
    let bound = 0;
    for (let row = 0; row < system.problem.nSpecies; row++) {
      notBound += weights.notBound[row]! * result.speciesMolPerL[row]!;
      bound += weights.bound[row]! * result.speciesMolPerL[row]!;
    }
    const dilution = titration.sampleVolumeML / (titration.sampleVolumeML + volumeML);
    const followed = columns.follow === columns.titrant ? columns.partners : [columns.follow];
    const total =
      followed.reduce((sum, c) => sum + (titration.sampleMolPerL[system.components[c]!] ?? 0), 0) * dilution;
    return {
      volumeML,
      pM: -result.lnFree[columns.follow]! / Math.LN10,
      pMTotal: -Math.log10(Math.max(notBound, Number.MIN_VALUE)),
      fractionTitrated: total > 0 ? Math.min(bound / total, 1) : 0,
      status: result.status === "converged" && system.outOfModelRange ? "outOfModelRange" : result.status,
      residual: result.residual,
    };
  };
  return { at, solve };
}
