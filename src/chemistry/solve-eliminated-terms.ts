import type { MassBalanceProblem } from "./types.ts";

const LARGEST_LN = 600; // a constant beyond e^600 leaves no room for the powers beside it

/** A species that the eliminated form cannot hold. */
interface PolynuclearSpecies {
  readonly lnBeta: number; // fixed components folded in
  readonly component: Int32Array;
  readonly coefficient: Float64Array;
}

/** Terms of one or several kept components at once: sparse rows of (place among the block's segments, exponent). */
interface MixedTerms {
  readonly blockStart: Int32Array; // per block: its first mixed term
  readonly beta: Float64Array;
  readonly start: Int32Array; // per mixed term
  readonly segment: Int32Array; // number of the segment, over all blocks
  readonly exponent: Float64Array;
}

/** Species with several atoms of one eliminated component, per block: beta times powers of the kept ones, and how many atoms. */
interface HomonuclearTerms {
  readonly blockStart: Int32Array; // per block: its first term
  readonly beta: Float64Array;
  readonly atoms: Float64Array;
  readonly start: Int32Array; // per term
  readonly segment: Int32Array; // number of the segment, over all blocks
  readonly exponent: Float64Array;
}

/**
 * The terms of one problem at fixed components, grouped in blocks; see `eliminatedSolver`. Block 0 holds the species without an eliminated component,
 * block e + 1 those of eliminated component e. A block is a constant, one polynomial in each kept component it holds (a segment), and
 * mixed terms.
 */
export interface EliminatedTerms {
  readonly nComponents: number;
  readonly k: number; // kept components
  readonly kept: Int32Array; // their numbers in the problem
  readonly gone: Int32Array; // eliminated components
  readonly fixed: readonly { readonly component: number; readonly lnFree: number }[];
  readonly constant: Float64Array; // per block
  /** Per block: number of segments, 1 if it has mixed terms; then per segment: kept component, first power in the table, number of powers (1 or more). */
  readonly plan: Int32Array;
  readonly ligand: Int32Array; // per segment: the kept component
  readonly polynomial: Float64Array; // per segment: coefficients of powers 1, 2, ... ; gaps are 0
  readonly mixed: MixedTerms;
  readonly homonuclear: HomonuclearTerms;
  readonly powerStart: Int32Array; // per kept component: its first power in a table of powers
  /** Species that hold two different eliminated components. */
  readonly polynuclear: readonly PolynuclearSpecies[];
}

interface Block {
  constant: number;
  readonly segments: Map<number, number[]>; // kept component -> coefficients by power, from 1
  readonly mixed: Map<string, { readonly exponents: readonly number[]; beta: number }>;
  readonly homonuclear: { readonly exponents: readonly number[]; readonly beta: number; readonly atoms: number }[];
}

/** Groups the species of a problem by eliminated component and by powers of the kept ones, or null where the form does not apply. */
export function compileEliminated(
  problem: MassBalanceProblem,
  fixedLnFree: ArrayLike<number>,
  eliminate: readonly number[],
): EliminatedTerms | null {
  const { nComponents: n, nSpecies, stoichiometry, lnBeta } = problem;
  const isFixed = (j: number): boolean => !Number.isNaN(fixedLnFree[j]);
  const all = Array.from({ length: n }, (_, j) => j);
  const gone = eliminate.filter((j) => !isFixed(j));
  const kept = all.filter((j) => !isFixed(j) && !gone.includes(j));
  const blocks = Array.from(
    { length: gone.length + 1 },
    (): Block => ({ constant: 0, segments: new Map(), mixed: new Map(), homonuclear: [] }),
  );
  const polynuclear: PolynuclearSpecies[] = [];
  for (let i = 0; i < nSpecies; i++) {
    const coefficient = (j: number): number => stoichiometry[i * n + j]!;
    let ln = lnBeta[i]!;
    for (const j of all) if (isFixed(j) && coefficient(j) !== 0) ln += coefficient(j) * fixedLnFree[j]!;
    if (!(ln < LARGEST_LN)) return null;
    const unknown = all.filter((j) => !isFixed(j) && coefficient(j) !== 0);
    if (unknown.some((j) => coefficient(j) < 0)) return null;
    if (unknown.length === 0) continue;
    const metals = gone.filter((j) => coefficient(j) > 0);
    const atoms = metals.reduce((sum, j) => sum + coefficient(j), 0);
    if (metals.length === 1 && atoms > 1) {
      addHomonuclear(blocks[1 + gone.indexOf(metals[0]!)]!, kept.map(coefficient), Math.exp(ln), atoms);
      continue;
    }
    if (atoms > 1) {
      polynuclear.push({
        lnBeta: ln,
        component: Int32Array.from(unknown),
        coefficient: Float64Array.from(unknown, coefficient),
      });
      continue;
    }
    const block = blocks[atoms === 0 ? 0 : 1 + gone.indexOf(metals[0]!)]!;
    addTerm(block, kept.map(coefficient), Math.exp(ln));
  }
  return {
    ...flatten(blocks, kept.length),
    nComponents: n,
    k: kept.length,
    kept: Int32Array.from(kept),
    gone: Int32Array.from(gone),
    fixed: all.filter(isFixed).map((component) => ({ component, lnFree: fixedLnFree[component]! })),
    polynuclear,
  };
}

function addTerm(block: Block, exponents: readonly number[], beta: number): void {
  const held = exponents.map((_, l) => l).filter((l) => exponents[l]! > 0);
  for (const l of held) if (!block.segments.has(l)) block.segments.set(l, []);
  if (held.length === 0) block.constant += beta;
  else if (held.length === 1) {
    const coefficients = block.segments.get(held[0]!)!;
    const power = exponents[held[0]!]!;
    while (coefficients.length < power) coefficients.push(0);
    coefficients[power - 1] = coefficients[power - 1]! + beta;
  } else {
    const key = exponents.join(",");
    const term = block.mixed.get(key);
    if (term === undefined) block.mixed.set(key, { exponents, beta });
    else term.beta += beta;
  }
}

function addHomonuclear(block: Block, exponents: readonly number[], beta: number, atoms: number): void {
  exponents.forEach((exponent, l) => {
    if (exponent > 0 && !block.segments.has(l)) block.segments.set(l, []);
  });
  block.homonuclear.push({ exponents, beta, atoms });
}

/** Sparse rows of (segment, exponent) under construction. */
interface Rows {
  readonly blockStart: number[];
  readonly beta: number[];
  readonly start: number[];
  readonly segment: number[];
  readonly exponent: number[];
}

function addRow(rows: Rows, beta: number, exponents: readonly number[], place: ReadonlyMap<number, number>): void {
  rows.beta.push(beta);
  exponents.forEach((value, l) => {
    if (value === 0) return;
    rows.segment.push(place.get(l)!);
    rows.exponent.push(value);
  });
  rows.start.push(rows.segment.length);
}

const emptyRows = (): Rows => ({ blockStart: [0], beta: [], start: [0], segment: [], exponent: [] });

const packed = (rows: Rows): MixedTerms => ({
  blockStart: Int32Array.from(rows.blockStart),
  beta: Float64Array.from(rows.beta),
  start: Int32Array.from(rows.start),
  segment: Int32Array.from(rows.segment),
  exponent: Float64Array.from(rows.exponent),
});

function flatten(
  blocks: readonly Block[],
  k: number,
): Pick<EliminatedTerms, "constant" | "plan" | "ligand" | "polynomial" | "mixed" | "homonuclear" | "powerStart"> {
  const highest = new Int32Array(k);
  const ligand: number[] = [];
  const polynomial: number[] = [];
  const mixed = emptyRows();
  const homonuclear = emptyRows();
  const atoms: number[] = [];
  for (const block of blocks) {
    const place = new Map<number, number>();
    for (const [l, coefficients] of [...block.segments].sort(([a], [b]) => a - b)) {
      place.set(l, ligand.length);
      ligand.push(l);
      if (coefficients.length === 0) coefficients.push(0); // held by mixed terms only
      polynomial.push(...coefficients);
      highest[l] = Math.max(highest[l]!, coefficients.length);
    }
    for (const term of [...block.mixed.values(), ...block.homonuclear])
      term.exponents.forEach((value, l) => (highest[l] = Math.max(highest[l]!, value)));
    for (const term of block.mixed.values()) addRow(mixed, term.beta, term.exponents, place);
    for (const term of block.homonuclear) {
      addRow(homonuclear, term.beta, term.exponents, place);
      atoms.push(term.atoms);
    }
    mixed.blockStart.push(mixed.beta.length);
    homonuclear.blockStart.push(homonuclear.beta.length);
  }
  const powerStart = new Int32Array(k + 1);
  for (let l = 0; l < k; l++) powerStart[l + 1] = powerStart[l]! + highest[l]!;
  const plan = blocks.flatMap((block) => [
    block.segments.size,
    block.mixed.size > 0 ? 1 : 0,
    ...[...block.segments]
      .sort(([a], [b]) => a - b)
      .flatMap(([l, coefficients]) => [l, powerStart[l]!, coefficients.length]),
  ]);
  return {
    constant: Float64Array.from(blocks, ({ constant }) => constant),
    plan: Int32Array.from(plan),
    ligand: Int32Array.from(ligand),
    polynomial: Float64Array.from(polynomial),
    mixed: packed(mixed),
    homonuclear: { ...packed(homonuclear), atoms: Float64Array.from(atoms) },
    powerStart,
  };
}
