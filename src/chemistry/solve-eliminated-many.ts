import type { EliminatedTerms } from "./solve-eliminated-terms.ts";

const ROOT_TOLERANCE = 1e-15; // ln units
const ITERATIONS = 60;

/** Blocks whose eliminated component also stands in species with several of its atoms, with scratch arrays. */
export class ManyAtoms {
  private readonly terms: EliminatedTerms;
  private readonly value: Float64Array; // per homonuclear term: beta times powers of the kept components
  private readonly cross: Float64Array; // per segment: second derivative towards ln of the eliminated component

  constructor(terms: EliminatedTerms) {
    this.terms = terms;
    this.value = new Float64Array(terms.homonuclear.beta.length);
    this.cross = new Float64Array(terms.ligand.length);
  }

  /**
   * Adds what a block holds to the balances and, its component eliminated, to the matrix.
   * `m`: free concentration of the component; `sumOfSingle`: total over free of its species with one atom; `from`, `to`: its segments.
   */
  add(
    block: number,
    m: number,
    sumOfSingle: number,
    from: number,
    to: number,
    first: Float64Array,
    second: Float64Array,
    gradient: Float64Array,
    hessian: Float64Array,
  ): void {
    const { cross, value } = this;
    const { k, homonuclear, ligand } = this.terms;
    const { start, segment, exponent, atoms } = homonuclear;
    const begin = homonuclear.blockStart[block]!;
    const end = homonuclear.blockStart[block + 1]!;
    let curvature = m * sumOfSingle;
    for (let r = from; r < to; r++) {
      const l = ligand[r]!;
      cross[r] = m * first[r]!;
      gradient[l] = gradient[l]! + cross[r]!;
      hessian[l * k + l] = hessian[l * k + l]! + m * second[r]!;
    }
    for (let i = begin; i < end; i++) {
      const n = atoms[i]!;
      const c = value[i]! * m ** n;
      curvature += n * n * c;
      for (let p = start[i]!; p < start[i + 1]!; p++) {
        const l = ligand[segment[p]!]!;
        const bound = exponent[p]! * c;
        cross[segment[p]!] = cross[segment[p]!]! + n * bound;
        gradient[l] = gradient[l]! + bound;
        for (let q = start[i]!; q <= p; q++) {
          const cell = l * k + ligand[segment[q]!]!;
          hessian[cell] = hessian[cell]! + bound * exponent[q]!;
        }
      }
    }
    if (!(curvature > 0)) return; // nothing of it is there
    for (let r = from; r < to; r++)
      for (let c = from; c <= r; c++) {
        const cell = ligand[r]! * k + ligand[c]!;
        hessian[cell] = hessian[cell]! - (cross[r]! * cross[c]!) / curvature;
      }
  }

  /**
   * Free concentration m of the component of a block: the root of total = m sum + (atoms times value times m^atoms, summed),
   * found in ln m, where the balance is convex and rising.
   */
  free(block: number, sumOfSingle: number, total: number, power: Float64Array): number {
    const { value } = this;
    const { homonuclear, ligand, powerStart } = this.terms;
    const { beta, start, segment, exponent, atoms } = homonuclear;
    const begin = homonuclear.blockStart[block]!;
    const end = homonuclear.blockStart[block + 1]!;
    for (let i = begin; i < end; i++) {
      let w = beta[i]!;
      for (let p = start[i]!; p < start[i + 1]!; p++) w *= power[powerStart[ligand[segment[p]!]!]! + exponent[p]! - 1]!;
      value[i] = w;
    }
    let m = total / sumOfSingle; // an upper bound: Newton in ln m comes down to the root without passing it
    if (!(m > 0)) return 0;
    for (let iteration = 0; iteration < ITERATIONS; iteration++) {
      let held = m * sumOfSingle;
      let slope = held;
      for (let i = begin; i < end; i++) {
        const n = atoms[i]!;
        const c = n * value[i]! * m ** n;
        held += c;
        slope += n * c;
      }
      const step = (Math.log(held / total) * held) / slope;
      m *= Math.exp(-step);
      if (Math.abs(step) <= ROOT_TOLERANCE) break;
    }
    return m;
  }
}
