import {
  addHomonuclear,
  addTerm,
  flatten,
  POLYNUCLEAR,
  type Block,
  type BlockLayout,
  type Part,
  type Sources,
} from "./solve-eliminated-blocks.ts";
import type { MassBalanceProblem } from "./types.ts";

/** A species that the eliminated form cannot hold. */
interface PolynuclearRow {
  readonly component: Int32Array;
  readonly coefficient: Float64Array;
}

/**
 * How the species of a problem fall into blocks, whatever their constants; see `eliminatedSolver`. Block 0 holds the species without an
 * eliminated component, block e + 1 those of eliminated component e. A block is a constant, one polynomial in each kept component it
 * holds (a segment), and mixed terms.
 */
export interface EliminatedStructure extends BlockLayout {
  readonly nComponents: number;
  readonly k: number; // kept components
  readonly kept: Int32Array; // their numbers in the problem
  readonly gone: Int32Array; // eliminated components
  readonly fixed: Int32Array; // components held
  /** Species that hold two different eliminated components. */
  readonly polynuclear: readonly PolynuclearRow[];
  readonly sources: Sources;
}

interface KnownStructure {
  readonly isFixed: readonly boolean[];
  readonly eliminate: readonly number[];
  readonly structure: EliminatedStructure | null;
}
const known = new WeakMap<Int8Array, KnownStructure[]>();

/**
 * Groups the species of a problem by eliminated component and by powers of the kept ones, once for each stoichiometry (keyed by the array,
 * which must not be changed afterwards); null where an unknown is of mixed sign.
 * `fixedLnFree`: NaN for the unknown components.
 */
export function eliminatedStructure(
  problem: MassBalanceProblem,
  fixedLnFree: ArrayLike<number>,
  eliminate: readonly number[],
): EliminatedStructure | null {
  let list = known.get(problem.stoichiometry);
  if (list === undefined) {
    list = [];
    known.set(problem.stoichiometry, list);
  }
  const found = list.find(
    (one) =>
      one.eliminate.length === eliminate.length &&
      one.eliminate.every((j, i) => eliminate[i] === j) &&
      one.isFixed.every((fixed, j) => fixed !== Number.isNaN(fixedLnFree[j])),
  );
  if (found !== undefined) return found.structure;
  const isFixed = Array.from({ length: problem.nComponents }, (_, j) => !Number.isNaN(fixedLnFree[j]));
  const structure = buildStructure(problem, isFixed, eliminate);
  list.push({ isFixed, eliminate: [...eliminate], structure });
  return structure;
}

function buildStructure(
  problem: MassBalanceProblem,
  isFixed: readonly boolean[],
  eliminate: readonly number[],
): EliminatedStructure | null {
  const { nComponents: n, nSpecies, stoichiometry } = problem;
  const gone = eliminate.filter((j) => !isFixed[j]);
  const place = new Int32Array(n); // kept component l: l + 1; eliminated component e: -1 - e; fixed: 0
  gone.forEach((j, e) => (place[j] = -1 - e));
  const kept: number[] = [];
  const fixed: number[] = [];
  for (let j = 0; j < n; j++)
    if (isFixed[j]) fixed.push(j);
    else if (place[j] === 0) place[j] = kept.push(j);
  const blocks = Array.from(
    { length: gone.length + 1 },
    (): Block => ({ constant: [], segments: new Map(), mixed: new Map(), homonuclear: [] }),
  );
  const polynuclear: PolynuclearRow[] = [];
  const sources = emptySources(problem, fixed);
  for (let i = 0; i < nSpecies; i++) {
    const parts: Part[] = [];
    let block = 0;
    let metals = 0;
    let atoms = 0;
    let unknowns = 0;
    for (let j = 0, at = i * n; j < n; j++, at++) {
      const coefficient = stoichiometry[at]!;
      if (coefficient === 0 || isFixed[j]) continue;
      if (coefficient < 0) return null;
      unknowns++;
      if (place[j]! > 0) parts.push({ l: place[j]! - 1, exponent: coefficient });
      else {
        metals++;
        atoms += coefficient;
        block = -place[j]!;
      }
    }
    if (unknowns === 0) continue;
    if (metals > 1) {
      sources.list[i] = POLYNUCLEAR;
      sources.place[i] = polynuclear.push(polynuclearRow(problem, i, isFixed)) - 1;
    } else if (atoms > 1) addHomonuclear(blocks[block]!, parts, i, atoms);
    else addTerm(blocks[block]!, parts, i);
  }
  return {
    ...flatten(blocks, kept.length, sources),
    nComponents: n,
    k: kept.length,
    kept: Int32Array.from(kept),
    gone: Int32Array.from(gone),
    fixed: Int32Array.from(fixed),
    polynuclear,
    sources,
  };
}

function emptySources(
  { nComponents: n, nSpecies, stoichiometry }: MassBalanceProblem,
  fixed: readonly number[],
): Sources {
  const start = [0];
  const component: number[] = [];
  const coefficient: number[] = [];
  for (let i = 0; i < nSpecies; i++) {
    for (const j of fixed) {
      const value = stoichiometry[i * n + j]!;
      if (value === 0) continue;
      component.push(j);
      coefficient.push(value);
    }
    start.push(component.length);
  }
  return {
    list: new Uint8Array(nSpecies),
    place: new Int32Array(nSpecies),
    fixedStart: Int32Array.from(start),
    fixedComponent: Int32Array.from(component),
    fixedCoefficient: Float64Array.from(coefficient),
  };
}

function polynuclearRow(
  { stoichiometry, nComponents }: MassBalanceProblem,
  i: number,
  isFixed: readonly boolean[],
): PolynuclearRow {
  const component: number[] = [];
  for (let j = 0; j < nComponents; j++) if (!isFixed[j] && stoichiometry[i * nComponents + j] !== 0) component.push(j);
  return {
    component: Int32Array.from(component),
    coefficient: Float64Array.from(component, (j) => stoichiometry[i * nComponents + j]!),
  };
}
