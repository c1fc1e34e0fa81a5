import { eliminatedSolver } from "../chemistry/solve-eliminated.ts";
import { solveEquilibrium } from "../chemistry/solve-equilibrium.ts";
import type { MassBalanceProblem, PreparedSystem, SolveResult } from "../chemistry/types.ts";
import type { ComponentId } from "../constants/knowledge.ts";
import { withNewcomers } from "./near-start.ts";

/** A solved vessel: what the equilibrium gives, species counted only when asked for. */
export class VesselSolution {
  readonly ok: boolean;
  readonly residual: number;
  readonly iterations: number;
  readonly lnFree: Float64Array;
  readonly solidsMolPerL: Float64Array;
  readonly #problem: MassBalanceProblem;
  readonly #sparse: SparseRows;
  #species: Float64Array | null;

  constructor(
    problem: MassBalanceProblem,
    solved: Pick<SolveResult, "residual" | "iterations" | "lnFree" | "solidsMolPerL"> & { readonly ok: boolean },
    speciesMolPerL: Float64Array | null,
  ) {
    this.ok = solved.ok;
    this.residual = solved.residual;
    this.iterations = solved.iterations;
    this.lnFree = solved.lnFree;
    this.solidsMolPerL = solved.solidsMolPerL;
    this.#problem = problem;
    this.#sparse = sparseRowsOf(problem);
    this.#species = speciesMolPerL;
  }

  /** Concentration of one species (row of the system), mol/L. */
  species(row: number): number {
    if (this.#species !== null) return this.#species[row]!;
    const { start, column, coefficient } = this.#sparse;
    let sum = this.#problem.lnBeta[row]!;
    const end = start[row + 1]!;
    for (let p = start[row]!; p < end; p++) sum += coefficient[p]! * this.lnFree[column[p]!]!;
    return Math.exp(sum);
  }

  get speciesMolPerL(): Float64Array {
    return (this.#species ??= Float64Array.from({ length: this.#problem.nSpecies }, (_, row) => this.species(row)));
  }
}

/** The stoichiometry of a problem without its zeros, row by row. */
interface SparseRows {
  readonly start: Int32Array;
  readonly column: Int32Array;
  readonly coefficient: Float64Array;
}

const sparse = new WeakMap<Int8Array, SparseRows>();

function sparseRowsOf({ stoichiometry, nComponents, nSpecies }: MassBalanceProblem): SparseRows {
  const known = sparse.get(stoichiometry);
  if (known !== undefined) return known;
  const start = new Int32Array(nSpecies + 1);
  const column: number[] = [];
  const coefficient: number[] = [];
  for (let row = 0; row < nSpecies; row++) {
    for (let j = 0; j < nComponents; j++) {
      const n = stoichiometry[row * nComponents + j]!;
      if (n === 0) continue;
      column.push(j);
      coefficient.push(n);
    }
    start[row + 1] = column.length;
  }
  const made = { start, column: Int32Array.from(column), coefficient: Float64Array.from(coefficient) };
  sparse.set(stoichiometry, made);
  return made;
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
 * @param near an answer close to the first that will be asked for: ln free concentrations by column, and the solids that lie there
 */
export function vesselSolver(
  system: PreparedSystem,
  pH: number,
  metals: ReadonlySet<ComponentId>,
  near: { readonly lnFree: Float64Array; readonly solids: readonly string[] } | null = null,
): (totals: Float64Array) => VesselSolution {
  const { problem } = system;
  const fixedLnFree = protonFixed(system, pH);
  const columns = system.components.flatMap((c, i) => (metals.has(c) ? [i] : []));
  const fast = columns.length > 0 ? eliminatedSolver(problem, fixedLnFree, columns) : null;
  const nSolids = problem.solids.n;
  const supersaturated = nSolids > 0 ? saturationCheck(system) : () => false;
  const noSolids = new Float64Array(nSolids);
  let warm: Float64Array | null = near ? near.lnFree : null;
  let activeSolids: readonly number[] =
    near === null || near.solids.length === 0
      ? []
      : system.solids.flatMap((s, i) => (near.solids.includes(s.id) ? [i] : []));
  return (totals) => {
    if (fast && warm && activeSolids.length === 0) {
      const lnFree = withNewcomers(warm.slice(), totals);
      const { status, residual, iterations } = fast.solve(totals, lnFree);
      if (status === "converged" && !supersaturated(lnFree)) {
        warm = lnFree;
        return new VesselSolution(problem, { ok: true, residual, iterations, lnFree, solidsMolPerL: noSolids }, null);
      }
    }
    const result = solveEquilibrium(
      problem,
      totals,
      warm ? { fixedLnFree, start: withNewcomers(warm.slice(), totals), activeSolids } : { fixedLnFree },
    );
    const ok = result.status === "converged";
    if (ok) {
      warm = result.lnFree;
      activeSolids = nSolids === 0 ? [] : system.solids.flatMap((_, i) => (result.solidsMolPerL[i]! > 0 ? [i] : []));
    }
    return new VesselSolution(problem, { ...result, ok }, result.speciesMolPerL);
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
