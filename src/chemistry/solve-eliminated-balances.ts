import { ManyAtoms } from "./solve-eliminated-many.ts";
import type { EliminatedStructure } from "./solve-eliminated-structure.ts";
import type { UnrolledBalances } from "./solve-eliminated-unrolled.ts";
import type { EliminatedTerms } from "./solve-eliminated-terms.ts";

/**
 * The balances of the kept components and the matrix left when the others are eliminated exactly, in two steps: moments of the terms, which
 * depend on the kept free concentrations alone, and their combination at given totals. A solve that starts where the last one ended has its moments already.
 */
export class EliminatedBalances {
  readonly free: Float64Array; // per kept component, mol/L: set it, then call `moments`
  readonly gradient: Float64Array; // balance of each kept component, mol/L
  readonly hessian: Float64Array; // lower triangle, k x k
  readonly freeGone: Float64Array; // per eliminated component, mol/L, after `combine`
  private readonly structure: EliminatedStructure;
  private terms: EliminatedTerms;
  private readonly power: Float64Array;
  private readonly sum: Float64Array; // per block: total over free of the species with one atom
  private readonly first: Float64Array; // per segment: sum of exponent times term, mixed terms included
  private readonly second: Float64Array; // per segment: sum of exponent squared times term
  private readonly cross: Float64Array; // per segment: second derivative towards ln of the eliminated component
  private readonly mixedValue: Float64Array;
  private readonly manyAtoms: ManyAtoms;
  private readonly plainPair: boolean;

  constructor(terms: EliminatedTerms) {
    const { structure } = terms;
    const { k } = structure;
    this.structure = structure;
    this.terms = terms;
    this.free = new Float64Array(k);
    this.gradient = new Float64Array(k);
    this.hessian = new Float64Array(k * k);
    this.freeGone = new Float64Array(structure.gone.length);
    this.power = new Float64Array(structure.powerStart[k]!);
    this.sum = new Float64Array(structure.nBlocks);
    this.first = new Float64Array(structure.ligand.length);
    this.second = new Float64Array(structure.ligand.length);
    this.cross = new Float64Array(structure.ligand.length);
    this.mixedValue = new Float64Array(structure.mixed.n);
    this.manyAtoms = new ManyAtoms(terms);
    this.plainPair = k === 2 && structure.mixed.n === 0 && !this.manyAtoms.holdKept;
  }

  /** Takes terms of the same structure with other constants. */
  use(terms: EliminatedTerms): void {
    this.terms = terms;
    this.manyAtoms.use(terms);
  }

  /** Balances and matrix at once, by code made for the structure; leaves no moments. */
  evaluateUnrolled(
    keptTotal: Float64Array,
    goneTotal: Float64Array,
    least: number,
    withMatrix: boolean,
    unrolled: UnrolledBalances,
  ): void {
    const { free: x, gradient: g, hessian: h, freeGone: m, manyAtoms } = this;
    const { constant, polynomial, mixedBeta } = this.terms;
    unrolled(x, keptTotal, goneTotal, constant, polynomial, mixedBeta, g, h, m, manyAtoms, least, withMatrix);
  }

  /** Sums and moments of all terms at the free concentrations. */
  moments(): void {
    this.polynomials();
    if (this.mixedValue.length > 0) this.mixedMoments();
    if (this.manyAtoms.holdKept) this.manyAtoms.values(this.power);
  }

  /** Powers of the free concentrations, sums and moments of the terms of one kept component. Nothing else stands in this function, so that its arrays stay at hand. */
  private polynomials(): void {
    const { free, power, sum, first, second } = this;
    const { k, plan, powerStart } = this.structure;
    const { constant, polynomial } = this.terms;
    for (let l = 0; l < k; l++) {
      const value = free[l]!;
      let product = 1;
      const end = powerStart[l + 1]!;
      for (let p = powerStart[l]!; p < end; p++) {
        product *= value;
        power[p] = product;
      }
    }
    // The plan is one stream of integers and the polynomials one of numbers, read in step: few arrays to keep at hand in this loop.
    const blocks = constant.length;
    let at = 0;
    let q = 0;
    let s = 0;
    for (let block = 0; block < blocks; block++) {
      let total = constant[block]!;
      for (const to = s + plan[at++]!; s < to; s++) {
        let p = plan[at]!;
        const end = p + plan[at + 1]!;
        at += 2;
        const w = polynomial[q++]! * power[p++]!;
        total += w;
        let m1 = w;
        let m2 = w;
        let exponent = 1;
        while (p < end) {
          const term = polynomial[q++]! * power[p++]!;
          exponent += 1;
          const weighted = term * exponent;
          total += term;
          m1 += weighted;
          m2 += weighted * exponent;
        }
        first[s] = m1;
        second[s] = m2;
      }
      sum[block] = total;
    }
  }

  /**
   * The balances at these totals (mol/L) and, `withMatrix`, their matrix; needs `moments`. `least`: the smallest total of a component that is there.
   */
  combine(keptTotal: Float64Array, goneTotal: Float64Array, least: number, withMatrix: boolean): void {
    if (this.plainPair) this.combinePair(keptTotal, goneTotal, least, withMatrix);
    else this.combineAny(keptTotal, goneTotal, least, withMatrix);
    const { k } = this.structure;
    if (withMatrix) for (let l = 0; l < k; l++) if (keptTotal[l] === 0) this.hessian[l * k + l] = 1;
  }

  /** Two kept components and no species with both: everything stays in local variables. */
  private combinePair(keptTotal: Float64Array, goneTotal: Float64Array, least: number, withMatrix: boolean): void {
    const { sum, first, second, gradient, hessian, freeGone, manyAtoms } = this;
    const { ligand, segmentStart } = this.structure;
    const blocks = sum.length;
    let g0 = -keptTotal[0]!;
    let g1 = -keptTotal[1]!;
    let h00 = 0;
    let h10 = 0;
    let h11 = 0;
    let r = 0;
    for (let block = 0; block < blocks; block++) {
      let m = 1;
      let inverse = 0; // of the curvature towards ln of the eliminated component
      if (block > 0) {
        const total = goneTotal[block - 1]!;
        if (manyAtoms.inBlock[block] === 1) {
          m = manyAtoms.free(block, sum[block]!, total, least);
          inverse = manyAtoms.inverseCurvature;
        } else {
          m = total / sum[block]!;
          if (total > 0) inverse = 1 / total;
        }
        freeGone[block - 1] = m;
      }
      const to = segmentStart[block + 1]!;
      let c0 = 0;
      if (r < to && ligand[r] === 0) {
        c0 = m * first[r]!;
        g0 += c0;
        h00 = h00 + m * second[r]! - c0 * inverse * c0;
        r++;
      }
      if (r < to) {
        const c1 = m * first[r]!;
        g1 += c1;
        h11 = h11 + m * second[r]! - c1 * inverse * c1;
        h10 -= c1 * inverse * c0;
        r++;
      }
    }
    gradient[0] = g0;
    gradient[1] = g1;
    if (!withMatrix) return;
    hessian[0] = h00;
    hessian[2] = h10;
    hessian[3] = h11;
  }

  private combineAny(keptTotal: Float64Array, goneTotal: Float64Array, least: number, withMatrix: boolean): void {
    const { sum, first, second, cross, gradient, hessian, freeGone, manyAtoms } = this;
    const { k, ligand, segmentStart, mixed } = this.structure;
    const blocks = sum.length;
    for (let l = 0; l < k; l++) gradient[l] = -keptTotal[l]!;
    if (withMatrix) for (let q = k * k - 1; q >= 0; q--) hessian[q] = 0;
    let r = 0;
    for (let block = 0; block < blocks; block++) {
      const from = r;
      const to = segmentStart[block + 1]!;
      let m = 1;
      let inverse = 0; // of the curvature towards ln of the eliminated component
      if (block > 0) {
        const total = goneTotal[block - 1]!;
        if (manyAtoms.inBlock[block] === 1) {
          m = manyAtoms.free(block, sum[block]!, total, least);
          inverse = manyAtoms.inverseCurvature;
        } else {
          m = total / sum[block]!;
          if (total > 0) inverse = 1 / total;
        }
        freeGone[block - 1] = m;
      }
      for (; r < to; r++) {
        const l = ligand[r]!;
        const bound = m * first[r]!;
        gradient[l] = gradient[l]! + bound;
        cross[r] = bound;
      }
      if (block > 0 && manyAtoms.inBlock[block] === 1) manyAtoms.add(block, gradient, cross, hessian, withMatrix);
      if (!withMatrix) continue;
      for (let i = from; i < to; i++) {
        const row = ligand[i]! * k;
        const slope = cross[i]! * inverse;
        hessian[row + ligand[i]!] = hessian[row + ligand[i]!]! + m * second[i]! - slope * cross[i]!;
        for (let j = from; j < i; j++) {
          const cell = row + ligand[j]!;
          hessian[cell] = hessian[cell]! - slope * cross[j]!;
        }
      }
      if (mixed.blockStart[block + 1]! > mixed.blockStart[block]!) this.addMixed(block, m);
    }
  }

  /** Values of the mixed terms, added to the sums and first moments of their blocks. */
  private mixedMoments(): void {
    const { power, mixedValue, sum, first } = this;
    const { mixed, ligand, powerStart } = this.structure;
    const { mixedBeta } = this.terms;
    for (let block = 0; block < sum.length; block++)
      for (let i = mixed.blockStart[block]!; i < mixed.blockStart[block + 1]!; i++) {
        let w = mixedBeta[i]!;
        for (let p = mixed.start[i]!; p < mixed.start[i + 1]!; p++)
          w *= power[powerStart[ligand[mixed.segment[p]!]!]! + mixed.exponent[p]! - 1]!;
        mixedValue[i] = w;
        sum[block] = sum[block]! + w;
        for (let p = mixed.start[i]!; p < mixed.start[i + 1]!; p++) {
          const s = mixed.segment[p]!;
          first[s] = first[s]! + w * mixed.exponent[p]!;
        }
      }
  }

  /** Adds the second moments of the mixed terms of a block, times `m`, to the matrix. */
  private addMixed(block: number, m: number): void {
    const { mixedValue, hessian } = this;
    const { k, mixed, ligand } = this.structure;
    for (let i = mixed.blockStart[block]!; i < mixed.blockStart[block + 1]!; i++)
      for (let p = mixed.start[i]!; p < mixed.start[i + 1]!; p++) {
        const row = ligand[mixed.segment[p]!]! * k;
        const weighted = m * mixedValue[i]! * mixed.exponent[p]!;
        for (let q = mixed.start[i]!; q <= p; q++) {
          const cell = row + ligand[mixed.segment[q]!]!;
          hessian[cell] = hessian[cell]! + weighted * mixed.exponent[q]!;
        }
      }
  }
}
