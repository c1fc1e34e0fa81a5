import { AppError } from "../errors.ts";
import {
  columnsOf,
  groupSpecies,
  kindOf,
  pairsOf,
  sparseRows,
  FIXED,
  UNKNOWN,
  type MatrixRows,
  type Rows,
} from "./solve-structure-rows.ts";
import type { MassBalanceProblem } from "./types.ts";

export { ABSENT, FIXED, UNKNOWN } from "./solve-structure-rows.ts";

/**
 * The index lists and scratch arrays of one pattern of unknown, fixed and absent components; local numbering throughout.
 * `species` and `solids` map to the problem's rows; a dense copy serves the change of basis.
 */
export interface SolveStructure {
  readonly n: number; // unknown components
  readonly m: number; // groups of species with the same coefficients over the unknowns (they keep a fixed ratio)
  readonly unknown: Int32Array; // local component -> component of the problem
  readonly species: Int32Array; // species that hold an unknown and nothing absent, group by group
  readonly groupStart: Int32Array; // per group: its first place in `species`
  readonly constantSpecies: Int32Array; // species made of fixed components only
  readonly solids: Int32Array; // solids that hold an unknown and nothing absent
  readonly rows: Rows; // groups, then solids, over local unknowns
  readonly fixedRows: Rows; // species, then solids, over fixed components (numbers of the problem)
  readonly dense: Float64Array; // (m + solids.length) x n
  readonly unit: Int32Array; // local component -> group of its free species
  readonly balanceStart: Int32Array; // per unknown: entries of the balance ...
  readonly balanceRow: Int32Array; // ... groups
  readonly balanceValue: Float64Array;
  readonly hessianIndex: Int32Array; // entries of the lower triangle that are not zero: position j * n + k
  readonly hessianStart: Int32Array;
  readonly hessianRow: Int32Array;
  readonly hessianValue: Float64Array;
  readonly mixedSign: Uint8Array; // 1 where an unknown has a negative coefficient in some species of the problem
  readonly nonNegative: boolean; // no unknown is of mixed sign
  readonly scratch: Scratch;
}

/** Arrays reused from solve to solve; nothing in them outlives one call. */
export interface Scratch {
  readonly folded: Float64Array; // ln beta with fixed components folded in; species, then solids
  readonly share: Float64Array; // of each species in its group
  readonly base: Float64Array; // the same summed over each group; groups, then solids
  readonly total: Float64Array;
  readonly x: Float64Array;
  readonly trial: Float64Array;
  readonly exponent: Float64Array; // groups, then solids
  readonly concentration: Float64Array; // groups
  readonly gradient: Float64Array;
  readonly step: Float64Array;
  readonly hessian: Float64Array;
  readonly scale: Float64Array;
  readonly amount: Float64Array; // solids, mol/L
}

/** A problem made ready for solving: one structure per pattern of unknown, fixed and absent components. */
export interface CompiledProblem {
  readonly nComponents: number;
  /** 1 where every coefficient of the component is >= 0, so that a total of zero means absent. */
  readonly nonNegativeColumn: Uint8Array;
  structure(state: ArrayLike<number>): SolveStructure;
}

const NO_SOLIDS = new Int8Array(0);
const cache = new WeakMap<Int8Array, WeakMap<Int8Array, CompiledProblem>>();

/**
 * Prepares the index lists of a problem once. Keyed by its stoichiometry arrays (species and solids), which must not be changed afterwards;
 * `lnBeta` is read afresh at each solve, so problems that share the arrays (other constants, same species) share the work.
 *
 * @throws AppError "solver-input" when lengths disagree or a component has no free species (a unit row).
 */
export function compileProblem(problem: MassBalanceProblem): CompiledProblem {
  const { nComponents: n, nSpecies: m, stoichiometry, solids } = problem;
  const solidsKey = solids.n === 0 ? NO_SOLIDS : solids.stoichiometry;
  let bySolids = cache.get(stoichiometry);
  const known = bySolids?.get(solidsKey);
  if (known !== undefined) return known;
  if (
    stoichiometry.length !== n * m ||
    problem.lnBeta.length !== m ||
    solids.stoichiometry.length !== n * solids.n ||
    solids.lnBeta.length !== solids.n
  )
    throw new AppError("solver-input", `expected ${m} species and ${solids.n} solids over ${n} components`, { n, m });
  const unitRow = new Int32Array(n).fill(-1);
  const nonNegativeColumn = new Uint8Array(n).fill(1);
  for (let i = 0; i < m; i++) {
    let entries = 0;
    let last = -1;
    for (let j = 0; j < n; j++) {
      const value = stoichiometry[i * n + j]!;
      if (value === 0) continue;
      if (value < 0) nonNegativeColumn[j] = 0;
      entries++;
      last = j;
    }
    if (entries === 1 && stoichiometry[i * n + last] === 1 && unitRow[last] === -1) unitRow[last] = i;
  }
  const missing = unitRow.indexOf(-1);
  if (missing >= 0)
    throw new AppError("solver-input", `component ${missing} has no free species (a unit row) among the species`, {
      missing,
    });
  const structures = new Map<string, SolveStructure>();
  const lastState = new Uint8Array(n);
  let last: SolveStructure | null = null;
  const compiled: CompiledProblem = {
    nComponents: n,
    nonNegativeColumn,
    structure(state) {
      let same = last !== null;
      for (let j = 0; j < n && same; j++) same = lastState[j] === state[j];
      if (same) return last!;
      let key = "";
      for (let j = 0; j < n; j++) key += String(state[j]!);
      let found = structures.get(key);
      if (found === undefined) {
        found = buildStructure(problem, state, unitRow, nonNegativeColumn);
        structures.set(key, found);
      }
      lastState.set(state);
      last = found;
      return found;
    },
  };
  bySolids ??= new WeakMap<Int8Array, CompiledProblem>();
  bySolids.set(solidsKey, compiled);
  cache.set(stoichiometry, bySolids);
  return compiled;
}

function buildStructure(
  problem: MassBalanceProblem,
  state: ArrayLike<number>,
  unitRow: Int32Array,
  nonNegativeColumn: Uint8Array,
): SolveStructure {
  const nComponents = problem.nComponents;
  const local = new Int32Array(nComponents).fill(-1);
  const unknown: number[] = [];
  for (let j = 0; j < nComponents; j++) {
    if (state[j] !== UNKNOWN) continue;
    local[j] = unknown.length;
    unknown.push(j);
  }
  const n = unknown.length;
  const { groups, constantSpecies, groupOf } = groupSpecies(problem, state, unknown);
  const groupStart = new Int32Array(groups.length + 1);
  for (let g = 0; g < groups.length; g++) groupStart[g + 1] = groupStart[g]! + groups[g]!.length;
  const solids: number[] = [];
  for (let s = 0; s < problem.solids.n; s++)
    if (kindOf(problem.solids.stoichiometry, s, nComponents, state) === UNKNOWN) solids.push(s);
  const m = groups.length;
  const species = groups.flat();
  const ofSpecies = (rows: readonly number[]): MatrixRows => ({ matrix: problem.stoichiometry, rows });
  const ofSolids: MatrixRows = { matrix: problem.solids.stoichiometry, rows: solids };
  const unknownRows = sparseRows(
    [ofSpecies(groups.map((group) => group[0]!)), ofSolids],
    nComponents,
    state,
    UNKNOWN,
    local,
  );
  const dense = new Float64Array((m + solids.length) * n);
  for (let i = 0; i < m + solids.length; i++)
    for (let p = unknownRows.start[i]!; p < unknownRows.start[i + 1]!; p++)
      dense[i * n + unknownRows.column[p]!] = unknownRows.value[p]!;
  const balance = columnsOf(unknownRows, m, n);
  const hessian = pairsOf(unknownRows, m, n);
  return {
    n,
    m,
    unknown: Int32Array.from(unknown),
    species: Int32Array.from(species),
    groupStart,
    constantSpecies: Int32Array.from(constantSpecies),
    solids: Int32Array.from(solids),
    rows: unknownRows,
    fixedRows: sparseRows([ofSpecies(species), ofSolids], nComponents, state, FIXED, null),
    dense,
    unit: Int32Array.from(unknown, (j) => groupOf[unitRow[j]!]!),
    balanceStart: balance.start,
    balanceRow: balance.column,
    balanceValue: balance.value,
    hessianIndex: hessian.index,
    hessianStart: hessian.start,
    hessianRow: hessian.column,
    hessianValue: hessian.value,
    mixedSign: Uint8Array.from(unknown, (j) => 1 - nonNegativeColumn[j]!),
    nonNegative: unknown.every((j) => nonNegativeColumn[j] === 1),
    scratch: {
      folded: new Float64Array(species.length + solids.length).fill(NaN),
      share: new Float64Array(species.length),
      base: new Float64Array(m + solids.length),
      total: new Float64Array(n),
      x: new Float64Array(n),
      trial: new Float64Array(n),
      exponent: new Float64Array(m + solids.length),
      concentration: new Float64Array(m),
      gradient: new Float64Array(n),
      step: new Float64Array(n),
      hessian: new Float64Array(n * n),
      scale: new Float64Array(n),
      amount: new Float64Array(solids.length),
    },
  };
}
