/** Where the constant of each species of the problem goes, so that other constants can be put in without sorting the species again. */
export interface Sources {
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

/** The blocks of a structure as flat lists. */
export interface BlockLayout {
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
}

/** A kept component in a term, and how many of it. */
export interface Part {
  readonly l: number;
  readonly exponent: number;
}

/** Species of a block by the powers of the kept components they hold; numbers of species as lists. */
export interface Block {
  readonly constant: number[];
  readonly segments: Map<number, number[][]>; // kept component -> species by power, from 1
  readonly mixed: Map<string, { readonly parts: readonly Part[]; readonly species: number[] }>;
  readonly homonuclear: { readonly parts: readonly Part[]; readonly species: number; readonly atoms: number }[];
}

/** Adds a species with at most one atom of an eliminated component. */
export function addTerm(block: Block, parts: readonly Part[], species: number): void {
  for (const { l } of parts) if (!block.segments.has(l)) block.segments.set(l, []);
  if (parts.length === 0) block.constant.push(species);
  else if (parts.length === 1) {
    const { l, exponent } = parts[0]!;
    const powers = block.segments.get(l)!;
    while (powers.length < exponent) powers.push([]);
    powers[exponent - 1]!.push(species);
  } else {
    const key = parts.map(({ l, exponent }) => `${l}:${exponent}`).join(" ");
    const term = block.mixed.get(key);
    if (term === undefined) block.mixed.set(key, { parts, species: [species] });
    else term.species.push(species);
  }
}

/** Adds a species with several atoms of one. */
export function addHomonuclear(block: Block, parts: readonly Part[], species: number, atoms: number): void {
  for (const { l } of parts) if (!block.segments.has(l)) block.segments.set(l, []);
  block.homonuclear.push({ parts, species, atoms });
}

/** Sparse rows of (segment, exponent) under construction. */
interface Rows {
  readonly blockStart: number[];
  readonly start: number[];
  readonly segment: number[];
  readonly exponent: number[];
}

/** Adds a row and returns its number. */
function addRow(rows: Rows, parts: readonly Part[], place: ReadonlyMap<number, number>): number {
  for (const { l, exponent } of parts) {
    rows.segment.push(place.get(l)!);
    rows.exponent.push(exponent);
  }
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

/** Numbers the segments and terms of the blocks, and says in `sources` where each species went. */
export function flatten(blocks: readonly Block[], k: number, sources: Sources): BlockLayout {
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
      for (const { l, exponent } of term.parts) highest[l] = Math.max(highest[l]!, exponent);
    for (const term of block.mixed.values()) goesTo(term.species, MIXED, addRow(mixed, term.parts, place));
    for (const term of block.homonuclear) {
      goesTo([term.species], HOMONUCLEAR, addRow(homonuclear, term.parts, place));
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
