import { eliminatedSolver } from "../chemistry/solve-eliminated.ts";
import { solveEquilibrium } from "../chemistry/solve-equilibrium.ts";
import type { PreparedSystem, SolveResult } from "../chemistry/types.ts";
import type { ComponentId } from "../constants/knowledge.ts";

/** A solved vessel: what the equilibrium gives, species counted only when asked for. */
export interface VesselSolution {
  readonly ok: boolean;
  readonly residual: number;
  readonly iterations: number;
  readonly lnFree: Float64Array;
  /** Concentration of one species (row of the system), mol/L. */
  readonly species: (row: number) => number;
  readonly speciesMolPerL: Float64Array;
  readonly solidsMolPerL: Float64Array;
}

/** ln of the free proton concentration held at this pH (activity scale). */
export const lnProton = (system: PreparedSystem, pH: number): number => Math.LN10 * (-pH - system.log10GammaH);

/** Everything unknown but the proton. */
export function protonFixed(system: PreparedSystem, pH: number): Float64Array {
  const fixed = new Float64Array(system.components.length).fill(Number.NaN);
  fixed[0] = lnProton(system, pH);
  return fixed;
}

/**
 * Solves one vessel for many totals (mol/L per column of the system, H+ held at `pH`), each from the last answer. While no solid
 * is there the metals are eliminated exactly; else, and wherever that form does not hold, the general solver answers.
 * @param metals components to eliminate
 */
export function vesselSolver(
  system: PreparedSystem,
  pH: number,
  metals: ReadonlySet<ComponentId>,
): (totals: Float64Array) => VesselSolution {
  const { problem } = system;
  const fixedLnFree = protonFixed(system, pH);
  const columns = system.components.flatMap((c, i) => (metals.has(c) ? [i] : []));
  const fast = columns.length > 0 ? eliminatedSolver(problem, fixedLnFree, columns) : null;
  const supersaturated = saturationCheck(system);
  let warm: Float64Array | null = null;
  let activeSolids: readonly number[] = [];
  return (totals) => {
    if (fast && warm && activeSolids.length === 0) {
      const lnFree = warm.slice();
      const evidence = fast.solve(totals, lnFree);
      if (evidence.status === "converged" && !supersaturated(lnFree)) {
        warm = lnFree;
        return fromLogs(system, lnFree, evidence.residual, evidence.iterations);
      }
    }
    const result = solveEquilibrium(
      problem,
      totals,
      warm ? { fixedLnFree, start: warm, activeSolids } : { fixedLnFree },
    );
    if (result.status === "converged") {
      warm = result.lnFree;
      activeSolids = system.solids.flatMap((_, i) => (result.solidsMolPerL[i]! > 0 ? [i] : []));
    }
    return fromResult(result);
  };
}

/** Whether any solid of the system would form at these free concentrations. */
function saturationCheck(system: PreparedSystem): (lnFree: Float64Array) => boolean {
  const rows = system.solids.map((solid) => ({
    lnK: Math.LN10 * solid.log10Beta,
    parts: Object.entries(solid.components).map(([c, n]) => ({ column: system.index.get(c), n })),
  }));
  return (lnFree) =>
    rows.some(({ lnK, parts }) => {
      let sum = lnK;
      for (const { column, n } of parts) sum += column === undefined ? -Infinity : n * lnFree[column]!;
      return sum > 0;
    });
}

function fromResult(result: SolveResult): VesselSolution {
  return {
    ok: result.status === "converged",
    residual: result.residual,
    iterations: result.iterations,
    lnFree: result.lnFree,
    species: (row) => result.speciesMolPerL[row]!,
    speciesMolPerL: result.speciesMolPerL,
    solidsMolPerL: result.solidsMolPerL,
  };
}

function fromLogs(system: PreparedSystem, lnFree: Float64Array, residual: number, iterations: number): VesselSolution {
  const { stoichiometry, lnBeta, nComponents, nSpecies } = system.problem;
  const species = (row: number): number => {
    let sum = lnBeta[row]!;
    const at = row * nComponents;
    for (let j = 0; j < nComponents; j++) {
      const n = stoichiometry[at + j]!;
      if (n !== 0) sum += n * lnFree[j]!;
    }
    return Math.exp(sum);
  };
  let all: Float64Array | null = null;
  return {
    ok: true,
    residual,
    iterations,
    lnFree,
    species,
    get speciesMolPerL() {
      all ??= Float64Array.from({ length: nSpecies }, (_, row) => species(row));
      return all;
    },
    solidsMolPerL: new Float64Array(system.solids.length),
  };
}
