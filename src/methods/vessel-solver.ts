import { eliminatedSolver } from "../chemistry/solve-eliminated.ts";
import { ABSENT_LN_FREE, solveEquilibrium } from "../chemistry/solve-equilibrium.ts";
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
    for (let p = start[row]!; p < end; p++) {
      const ln = this.lnFree[column[p]!]!;
      if (ln <= ABSENT_LN_FREE) return 0; // made of what is not there
      sum += coefficient[p]! * ln;
    }
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
  const noSolids = new Float64Array(nSolids);
  const lying = new Map<string, LyingSolver | null>();
  const lyingSolver = (active: readonly number[]): LyingSolver | null => {
    const key = active.join();
    let known = lying.get(key);
    if (known === undefined) lying.set(key, (known = underHydroxides(problem, fixedLnFree, columns, active)));
    return known;
  };
  let warm: Float64Array | null = near ? near.lnFree : null;
  let activeSolids: readonly number[] =
    near === null || near.solids.length === 0
      ? []
      : system.solidRows.flatMap((s, i) => (near.solids.includes(s.id) ? [i] : []));
  return (totals) => {
    if (fast && warm && activeSolids.length === 0) {
      const lnFree = withNewcomers(warm.slice(), totals);
      const { status, residual, iterations } = fast.solve(totals, lnFree);
      if (status === "converged" && !oneForms(problem, lnFree, activeSolids)) {
        warm = lnFree;
        return new VesselSolution(problem, { ok: true, residual, iterations, lnFree, solidsMolPerL: noSolids }, null);
      }
    } else if (fast && warm) {
      const found = lyingSolver(activeSolids)?.(totals, withNewcomers(warm.slice(), totals));
      if (found) {
        warm = found.lnFree;
        return new VesselSolution(problem, { ...found, ok: true }, null);
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
      activeSolids = nSolids === 0 ? [] : [...result.solidsMolPerL.keys()].filter((i) => result.solidsMolPerL[i]! > 0);
    }
    return new VesselSolution(problem, { ...result, ok }, result.speciesMolPerL);
  };
}

/** Whether a solid would form at these free concentrations that is not among those that lie already. */
function oneForms(
  { solids, nComponents }: MassBalanceProblem,
  lnFree: Float64Array,
  lying: readonly number[],
): boolean {
  for (let s = 0; s < solids.n; s++) {
    let sum = solids.lnBeta[s]!;
    for (let j = 0; j < nComponents; j++) {
      const n = solids.stoichiometry[s * nComponents + j]!;
      if (n !== 0) sum += n * lnFree[j]!;
    }
    if (sum > 0 && !lying.includes(s)) return true;
  }
  return false;
}

type Solved = Pick<SolveResult, "residual" | "iterations" | "lnFree" | "solidsMolPerL">;

/** Solves a vessel from a near answer, which it overwrites; null where the solids it counts on do not all lie, or another forms. */
type LyingSolver = (totals: Float64Array, lnFree: Float64Array) => Solved | null;

/**
 * A solver for a vessel in which these solids lie, each the hydroxide of a metal of its own: at a fixed pH such a solid fixes the free
 * concentration of its metal, whatever lies of it, and the rest is a vessel without solids. Null where a solid is of another kind.
 */
function underHydroxides(
  problem: MassBalanceProblem,
  fixedLnFree: Float64Array,
  metals: readonly number[],
  active: readonly number[],
): LyingSolver | null {
  const { solids, nComponents } = problem;
  const held = fixedLnFree.slice();
  const parts: { readonly solid: number; readonly metal: number; readonly atoms: number }[] = [];
  for (const solid of active) {
    const row = solids.stoichiometry.subarray(solid * nComponents, (solid + 1) * nComponents);
    const metal = row.findIndex((n, j) => j > 0 && n !== 0);
    const alone = metal > 0 && row.every((n, j) => j === 0 || j === metal || n === 0);
    if (!alone || !metals.includes(metal) || !(row[metal]! > 0) || !Number.isNaN(held[metal]!)) return null;
    const atoms = row[metal]!;
    held[metal] = -(solids.lnBeta[solid]! + row[0]! * fixedLnFree[0]!) / atoms;
    parts.push({ solid, metal, atoms });
  }
  const free = metals.filter((metal) => Number.isNaN(held[metal]!));
  const solver = eliminatedSolver(problem, held, free);
  if (solver === null) return null;
  return (totals, lnFree) => {
    for (const { metal } of parts) lnFree[metal] = held[metal]!;
    const { status, residual, iterations } = solver.solve(totals, lnFree);
    if (status !== "converged") return null;
    for (const { metal } of parts) lnFree[metal] = held[metal]!;
    if (oneForms(problem, lnFree, active)) return null;
    const solidsMolPerL = new Float64Array(solids.n);
    for (const { solid, metal, atoms } of parts) {
      const amount = (totals[metal]! - dissolved(problem, lnFree, metal)) / atoms;
      if (!(amount > 0)) return null;
      solidsMolPerL[solid] = amount;
    }
    return { residual, iterations, lnFree, solidsMolPerL };
  };
}

/** All of a component that is dissolved, mol/L. */
function dissolved(problem: MassBalanceProblem, lnFree: Float64Array, component: number): number {
  const { stoichiometry, lnBeta, nComponents, nSpecies } = problem;
  const { start, column, coefficient } = sparseRowsOf(problem);
  let total = 0;
  for (let row = 0; row < nSpecies; row++) {
    const n = stoichiometry[row * nComponents + component]!;
    if (n === 0) continue;
    let sum = lnBeta[row]!;
    for (let p = start[row]!; p < start[row + 1]!; p++) sum += coefficient[p]! * lnFree[column[p]!]!;
    total += n * Math.exp(sum);
  }
  return total;
}
