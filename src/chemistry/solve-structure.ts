import { AppError } from "../errors.ts";
import type { MassBalanceProblem } from "./types.ts";

/** What a component is in one solve: solved for, held at a given free concentration, or not there at all. */
export const UNKNOWN = 0;
export const FIXED = 1;
export const ABSENT = 2;

/** Sparse rows over local unknowns or over global components. */
interface Rows {
  readonly start: Int32Array;
  readonly column: Int32Array;
  readonly value: Float64Array;
}

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
  const unknown: number[] = [];
  const local = new Int32Array(nComponents).fill(-1);
  for (let j = 0; j < nComponents; j++) {
    if (state[j] !== UNKNOWN) continue;
    local[j] = unknown.length;
    unknown.push(j);
  }
  const n = unknown.length;
  const classify = (matrix: Int8Array, row: number): "variable" | "constant" | "absent" => {
    let variable = false;
    for (let j = 0; j < nComponents; j++) {
      if (matrix[row * nComponents + j] === 0) continue;
      if (state[j] === ABSENT) return "absent";
      if (state[j] === UNKNOWN) variable = true;
    }
    return variable ? "variable" : "constant";
  };
  const groups = new Map<string, number[]>();
  const constantSpecies: number[] = [];
  for (let i = 0; i < problem.nSpecies; i++) {
    const kind = classify(problem.stoichiometry, i);
    if (kind === "constant") constantSpecies.push(i);
    if (kind !== "variable") continue;
    const key = unknown.map((j) => problem.stoichiometry[i * nComponents + j]!).join(",");
    const group = groups.get(key);
    if (group === undefined) groups.set(key, [i]);
    else group.push(i);
  }
  const members = [...groups.values()];
  const groupStart = new Int32Array(members.length + 1);
  members.forEach((group, g) => (groupStart[g + 1] = groupStart[g]! + group.length));
  const solids: number[] = [];
  for (let s = 0; s < problem.solids.n; s++)
    if (classify(problem.solids.stoichiometry, s) === "variable") solids.push(s);
  const m = members.length;
  const species = members.flat();
  const solidRows = solids.map((row) => ({ matrix: problem.solids.stoichiometry, row }));
  const rows = [...members.map((group) => ({ matrix: problem.stoichiometry, row: group[0]! })), ...solidRows];
  const everyRow = [...species.map((row) => ({ matrix: problem.stoichiometry, row })), ...solidRows];
  const dense = new Float64Array(rows.length * n);
  rows.forEach(({ matrix, row }, i) => {
    for (let j = 0; j < n; j++) dense[i * n + j] = matrix[row * nComponents + unknown[j]!]!;
  });
  const sparse = (select: number, from: typeof rows): Rows => {
    const start = [0];
    const column: number[] = [];
    const value: number[] = [];
    for (const { matrix, row } of from) {
      for (let j = 0; j < nComponents; j++) {
        const coefficient = matrix[row * nComponents + j]!;
        if (coefficient === 0 || state[j] !== select) continue;
        column.push(select === UNKNOWN ? local[j]! : j);
        value.push(coefficient);
      }
      start.push(column.length);
    }
    return { start: Int32Array.from(start), column: Int32Array.from(column), value: Float64Array.from(value) };
  };
  const balance = gather(n, m, (j, i) => dense[i * n + j]!);
  const pairs: number[] = [];
  for (let j = 0; j < n; j++)
    for (let k = 0; k <= j; k++)
      for (let i = 0; i < m; i++)
        if (dense[i * n + j] !== 0 && dense[i * n + k] !== 0) {
          pairs.push(j * n + k);
          break;
        }
  const hessian = gather(pairs.length, m, (p, i) => {
    const j = Math.floor(pairs[p]! / n);
    return dense[i * n + j]! * dense[i * n + (pairs[p]! - j * n)]!;
  });
  return {
    n,
    m,
    unknown: Int32Array.from(unknown),
    species: Int32Array.from(species),
    groupStart,
    constantSpecies: Int32Array.from(constantSpecies),
    solids: Int32Array.from(solids),
    rows: sparse(UNKNOWN, rows),
    fixedRows: sparse(FIXED, everyRow),
    dense,
    unit: Int32Array.from(unknown, (j) => members.findIndex((group) => group.includes(unitRow[j]!))),
    balanceStart: balance.start,
    balanceRow: balance.column,
    balanceValue: balance.value,
    hessianIndex: Int32Array.from(pairs),
    hessianStart: hessian.start,
    hessianRow: hessian.column,
    hessianValue: hessian.value,
    mixedSign: Uint8Array.from(unknown, (j) => 1 - nonNegativeColumn[j]!),
    nonNegative: unknown.every((j) => nonNegativeColumn[j] === 1),
    scratch: {
      folded: new Float64Array(everyRow.length).fill(NaN),
      share: new Float64Array(species.length),
      base: new Float64Array(rows.length),
      total: new Float64Array(n),
      x: new Float64Array(n),
      trial: new Float64Array(n),
      exponent: new Float64Array(rows.length),
      concentration: new Float64Array(m),
      gradient: new Float64Array(n),
      step: new Float64Array(n),
      hessian: new Float64Array(n * n),
      scale: new Float64Array(n),
      amount: new Float64Array(solids.length),
    },
  };
}

/** Lists, for each target, the rows with a coefficient that is not zero. */
function gather(targets: number, m: number, coefficient: (target: number, row: number) => number): Rows {
  const start = [0];
  const column: number[] = [];
  const value: number[] = [];
  for (let target = 0; target < targets; target++) {
    for (let i = 0; i < m; i++) {
      const c = coefficient(target, i);
      if (c === 0) continue;
      column.push(i);
      value.push(c);
    }
    start.push(column.length);
  }
  return { start: Int32Array.from(start), column: Int32Array.from(column), value: Float64Array.from(value) };
}
