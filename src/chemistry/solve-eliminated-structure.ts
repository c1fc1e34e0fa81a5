import type { MassBalanceProblem } from "./types.ts";

/** A species that the eliminated form cannot hold. */
interface PolynuclearRow {
  readonly component: Int32Array;
  readonly coefficient: Float64Array;
}

/** Where the constant of each species of the problem goes, so that other constants can be put in without sorting the species again. */
interface Sources {
  readonly list: Uint8Array; // per species: CONSTANT, ... POLYNUCLEAR, or NOWHERE
  readonly place: Int32Array; // per species: its place in that list
  readonly fixedStart: Int32Array; // per species: its first fixed component ...
  readonly fixedComponent: Int32Array;
  readonly fixedCoefficient: Float64Array;
}
export const NOWHERE = 0; // made of fixed components only
export const CONSTANT = 1;
export const POLYNOMIAL = 2;
export const MIXED = 3;
export const HOMONUCLEAR = 4;
export const POLYNUCLEAR = 5;

/** Terms of one or several kept components at once: sparse rows of (place among the segments, exponent). */
interface MixedRows {
  readonly n: number;
  readonly blockStart: Int32Array; // per block: its first term
  readonly start: Int32Array; // per term
  readonly segment: Int32Array; // number of the segment, over all blocks
  readonly exponent: Float64Array;
}

/** Species with several atoms of one eliminated component: powers of the kept ones, and how many atoms. */
interface HomonuclearRows extends MixedRows {
  readonly atoms: Int32Array; // per term
}

/**
 * How the species of a problem fall into blocks, whatever their constants; see `eliminatedSolver`. Block 0 holds the species without an
 * eliminated component, block e + 1 those of eliminated component e. A block is a constant, one polynomial in each kept component it
 * holds (a segment), and mixed terms.
 */
export interface EliminatedStructure {
  readonly nComponents: number;
  readonly k: number; // kept components
  readonly kept: Int32Array; // their numbers in the problem
  readonly gone: Int32Array; // eliminated components
  readonly fixed: Int32Array; // components held
  readonly nBlocks: number;
  /** Per block: number of segments; then per segment: first power in the table, number of powers (1 or more). */
  readonly plan: Int32Array;
  readonly segmentStart: Int32Array; // per block: its first segment
  readonly ligand: Int32Array; // per segment: the kept component, rising within a block
  readonly segmentLength: Int32Array; // per segment: number of powers (1 or more)
  readonly nCoefficients: number; // of the polynomials: per segment those of powers 1, 2, ...
  readonly mixed: MixedRows;
  readonly homonuclear: HomonuclearRows;
  readonly powerStart: Int32Array; // per kept component: its first power in a table of powers
  /** Species that hold two different eliminated components. */
  readonly polynuclear: readonly PolynuclearRow[];
  readonly sources: Sources;
}

/** Species of a block by the powers of the kept components they hold; numbers of species as lists. */
interface Block {
  readonly constant: number[];
  readonly segments: Map<number, number[][]>; // kept component -> species by power, from 1
  readonly mixed: Map<string, { readonly exponents: readonly number[]; readonly species: number[] }>;
  readonly homonuclear: { readonly exponents: readonly number[]; readonly species: number; readonly atoms: number }[];
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
  const all = Array.from({ length: n }, (_, j) => j);
  const gone = eliminate.filter((j) => !isFixed[j]);
  const kept = all.filter((j) => !isFixed[j] && !gone.includes(j));
  const fixed = all.filter((j) => isFixed[j]);
  const blocks = Array.from(
    { length: gone.length + 1 },
    (): Block => ({ constant: [], segments: new Map(), mixed: new Map(), homonuclear: [] }),
  );
  const polynuclear: PolynuclearRow[] = [];
  const sources = emptySources(problem, fixed);
  for (let i = 0; i < nSpecies; i++) {
    const coefficient = (j: number): number => stoichiometry[i * n + j]!;
    const unknown = all.filter((j) => !isFixed[j] && coefficient(j) !== 0);
    if (unknown.some((j) => coefficient(j) < 0)) return null;
    if (unknown.length === 0) continue;
    const metals = gone.filter((j) => coefficient(j) > 0);
    const atoms = metals.reduce((sum, j) => sum + coefficient(j), 0);
    if (metals.length === 1 && atoms > 1) {
      addHomonuclear(blocks[1 + gone.indexOf(metals[0]!)]!, kept.map(coefficient), i, atoms);
      continue;
    }
    if (atoms > 1) {
      sources.list[i] = POLYNUCLEAR;
      sources.place[i] = polynuclear.length;
      polynuclear.push({
        component: Int32Array.from(unknown),
        coefficient: Float64Array.from(unknown, coefficient),
      });
      continue;
    }
    addTerm(blocks[atoms === 0 ? 0 : 1 + gone.indexOf(metals[0]!)]!, kept.map(coefficient), i);
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

function addTerm(block: Block, exponents: readonly number[], species: number): void {
  const held = exponents.map((_, l) => l).filter((l) => exponents[l]! > 0);
  for (const l of held) if (!block.segments.has(l)) block.segments.set(l, []);
  if (held.length === 0) block.constant.push(species);
  else if (held.length === 1) {
    const powers = block.segments.get(held[0]!)!;
    const power = exponents[held[0]!]!;
    while (powers.length < power) powers.push([]);
    powers[power - 1]!.push(species);
  } else {
    const key = exponents.join(",");
    const term = block.mixed.get(key);
    if (term === undefined) block.mixed.set(key, { exponents, species: [species] });
    else term.species.push(species);
  }
}

function addHomonuclear(block: Block, exponents: readonly number[], species: number, atoms: number): void {
  exponents.forEach((exponent, l) => {
    if (exponent > 0 && !block.segments.has(l)) block.segments.set(l, []);
  });
  block.homonuclear.push({ exponents, species, atoms });
}

/** Sparse rows of (segment, exponent) under construction. */
interface Rows {
  readonly blockStart: number[];
  readonly start: number[];
  readonly segment: number[];
  readonly exponent: number[];
}

/** Adds a row and returns its number. */
function addRow(rows: Rows, exponents: readonly number[], place: ReadonlyMap<number, number>): number {
  exponents.forEach((value, l) => {
    if (value === 0) return;
    rows.segment.push(place.get(l)!);
    rows.exponent.push(value);
  });
  rows.start.push(rows.segment.length);
  return rows.start.length - 2;
}

const emptyRows = (): Rows => ({ blockStart: [0], start: [0], segment: [], exponent: [] });

const packed = (rows: Rows): MixedRows => ({
  n: rows.start.length - 1,
  blockStart: Int32Array.from(rows.blockStart),
  start: Int32Array.from(rows.start),
  segment: Int32Array.from(rows.segment),
  exponent: Float64Array.from(rows.exponent),
});

function flatten(
  blocks: readonly Block[],
  k: number,
  sources: Sources,
): Pick<
  EliminatedStructure,
  | "nBlocks"
  | "plan"
  | "segmentStart"
  | "segmentLength"
  | "ligand"
  | "nCoefficients"
  | "mixed"
  | "homonuclear"
  | "powerStart"
> {
  const highest = new Int32Array(k);
  const ligand: number[] = [];
  const segmentStart: number[] = [0];
  const segmentLength: number[] = [];
  let coefficients = 0;
  const mixed = emptyRows();
  const homonuclear = emptyRows();
  const atoms: number[] = [];
  const goesTo = (species: readonly number[], list: number, at: number): void => {
    for (const i of species) {
      sources.list[i] = list;
      sources.place[i] = at;
    }
  };
  blocks.forEach((block, number) => {
    goesTo(block.constant, CONSTANT, number);
    const place = new Map<number, number>();
    for (const [l, powers] of [...block.segments].sort(([a], [b]) => a - b)) {
      place.set(l, ligand.length);
      ligand.push(l);
      if (powers.length === 0) powers.push([]); // held by mixed terms only
      segmentLength.push(powers.length);
      for (const species of powers) goesTo(species, POLYNOMIAL, coefficients++);
      highest[l] = Math.max(highest[l]!, powers.length);
    }
    segmentStart.push(ligand.length);
    for (const term of [...block.mixed.values(), ...block.homonuclear])
      term.exponents.forEach((value, l) => (highest[l] = Math.max(highest[l]!, value)));
    for (const term of block.mixed.values()) goesTo(term.species, MIXED, addRow(mixed, term.exponents, place));
    for (const term of block.homonuclear) {
      goesTo([term.species], HOMONUCLEAR, addRow(homonuclear, term.exponents, place));
      atoms.push(term.atoms);
    }
    mixed.blockStart.push(mixed.start.length - 1);
    homonuclear.blockStart.push(homonuclear.start.length - 1);
  });
  const powerStart = new Int32Array(k + 1);
  for (let l = 0; l < k; l++) powerStart[l + 1] = powerStart[l]! + highest[l]!;
  const plan = blocks.flatMap((block) => [
    block.segments.size,
    ...[...block.segments].sort(([a], [b]) => a - b).flatMap(([l, powers]) => [powerStart[l]!, powers.length]),
  ]);
  return {
    nBlocks: blocks.length,
    plan: Int32Array.from(plan),
    segmentStart: Int32Array.from(segmentStart),
    segmentLength: Int32Array.from(segmentLength),
    ligand: Int32Array.from(ligand),
    nCoefficients: coefficients,
    mixed: packed(mixed),
    homonuclear: { ...packed(homonuclear), atoms: Int32Array.from(atoms) },
    powerStart,
  };
}
