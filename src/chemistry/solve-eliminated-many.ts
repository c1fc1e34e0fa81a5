import type { EliminatedStructure } from "./solve-eliminated-structure.ts";
import type { EliminatedTerms } from "./solve-eliminated-terms.ts";

const NOTHING = 1e-17; // share of every total below which species with several atoms change no digit
const LAST_STEP = 1e-9; // relative; Newton squares it
const ITERATIONS = 60;

/** Blocks whose eliminated component also stands in species with several of its atoms, with scratch arrays. */
export class ManyAtoms {
  readonly inBlock: Uint8Array; // per block: 1 where it has such species
  readonly holdKept: boolean; // whether any such species holds a kept component
  inverseCurvature = 0; // of the balance last solved by `free`: 1 / (second derivative towards ln of the eliminated component)
  private readonly structure: EliminatedStructure;
  private beta: Float64Array;
  private value: Float64Array; // per term: beta times powers of the kept components
  private readonly concentration: Float64Array; // per term, mol/L

  constructor(terms: EliminatedTerms) {
    const { structure, homonuclearBeta } = terms;
    const { n, blockStart, segment } = structure.homonuclear;
    this.structure = structure;
    this.inBlock = Uint8Array.from({ length: structure.nBlocks }, (_, block) =>
      blockStart[block + 1]! > blockStart[block]! ? 1 : 0,
    );
    this.holdKept = segment.length > 0;
    this.beta = homonuclearBeta;
    this.value = this.holdKept ? new Float64Array(n) : homonuclearBeta;
    this.concentration = new Float64Array(n);
  }

  /** Takes terms of the same structure with other constants. */
  use({ homonuclearBeta }: EliminatedTerms): void {
    this.beta = homonuclearBeta;
    if (!this.holdKept) this.value = homonuclearBeta;
  }

  /** Takes in the powers of the kept components, where these species hold any. */
  values(power: Float64Array): void {
    const { beta } = this;
    const { homonuclear, ligand, powerStart } = this.structure;
    const { start, segment, exponent } = homonuclear;
    for (let i = 0; i < beta.length; i++) {
      let w = beta[i]!;
      for (let p = start[i]!; p < start[i + 1]!; p++) w *= power[powerStart[ligand[segment[p]!]!]! + exponent[p]! - 1]!;
      this.value[i] = w;
    }
  }

  /**
   * Free concentration m of the component of a block: the root of total = m sum + (atoms times value times m^atoms, summed). The sum of the
   * right side is convex and rising in m, so Newton from above comes down to the root without passing it.
   */
  free(block: number, sumOfSingle: number, total: number, least: number): number {
    let m = total / sumOfSingle;
    this.inverseCurvature = 0;
    if (!(m > 0)) {
      this.clear(block);
      return m === 0 ? 0 : m;
    }
    let several = this.hold(block, m);
    if (several <= NOTHING * least) {
      this.inverseCurvature = 1 / total;
      return m;
    }
    if (several > total) {
      m = this.upperBound(block, m, total);
      several = this.hold(block, m);
    }
    for (let iteration = 0; iteration < ITERATIONS; iteration++) {
      const step = (m * sumOfSingle + several - total) / (m * sumOfSingle + this.slope(block));
      m -= step * m;
      several = this.hold(block, m);
      if (Math.abs(step) <= LAST_STEP) break;
    }
    this.inverseCurvature = 1 / (m * sumOfSingle + this.slope(block));
    return m;
  }

  /** Adds what the species of a block with several atoms hold of the kept components to balances, cross derivatives and matrix. */
  add(block: number, gradient: Float64Array, cross: Float64Array, hessian: Float64Array, withMatrix: boolean): void {
    if (!this.holdKept) return;
    const { concentration } = this;
    const { k, homonuclear, ligand } = this.structure;
    const { start, segment, exponent, atoms } = homonuclear;
    for (let i = homonuclear.blockStart[block]!; i < homonuclear.blockStart[block + 1]!; i++)
      for (let p = start[i]!; p < start[i + 1]!; p++) {
        const l = ligand[segment[p]!]!;
        const bound = exponent[p]! * concentration[i]!;
        cross[segment[p]!] = cross[segment[p]!]! + atoms[i]! * bound;
        gradient[l] = gradient[l]! + bound;
        if (!withMatrix) continue;
        for (let q = start[i]!; q <= p; q++) {
          const cell = l * k + ligand[segment[q]!]!;
          hessian[cell] = hessian[cell]! + bound * exponent[q]!;
        }
      }
  }

  /** Amount of the component in species with several atoms at free concentration m, mol/L; leaves the concentration of each. */
  private hold(block: number, m: number): number {
    const { value, concentration } = this;
    const { blockStart, atoms } = this.structure.homonuclear;
    let held = 0;
    const end = blockStart[block + 1]!;
    for (let i = blockStart[block]!; i < end; i++) {
      const n = atoms[i]!;
      let c = value[i]! * m * m;
      for (let a = 2; a < n; a++) c *= m;
      concentration[i] = c;
      held += n * c;
    }
    return held;
  }

  /** Their part of the slope towards ln m. */
  private slope(block: number): number {
    const { concentration } = this;
    const { blockStart, atoms } = this.structure.homonuclear;
    let slope = 0;
    const end = blockStart[block + 1]!;
    for (let i = blockStart[block]!; i < end; i++) slope += atoms[i]! * atoms[i]! * concentration[i]!;
    return slope;
  }

  /** The least free concentration at which one of the species alone would hold the total. */
  private upperBound(block: number, m: number, total: number): number {
    const { value } = this;
    const { blockStart, atoms } = this.structure.homonuclear;
    let bound = m;
    for (let i = blockStart[block]!; i < blockStart[block + 1]!; i++) {
      const n = atoms[i]!;
      if (value[i]! > 0) bound = Math.min(bound, (total / (n * value[i]!)) ** (1 / n));
    }
    return bound;
  }

  private clear(block: number): void {
    const { blockStart } = this.structure.homonuclear;
    this.concentration.fill(0, blockStart[block], blockStart[block + 1]);
  }
}
