import { factorScaled, solveScaled } from "../numerics/cholesky.ts";
import { ManyAtoms } from "./solve-eliminated-many.ts";
import type { EliminatedTerms } from "./solve-eliminated-terms.ts";
import { ABSENT_LN_FREE } from "./solve-load.ts";

const TOLERANCE = 5e-13; // as the plain iteration of the general solver
const SMALL_LAST_STEP = 1e-5;
const MAX_STEP = 2; // ln units
const ITERATIONS = 30; // beyond it the general solver takes over
const WELL_CONDITIONED = 1e-7; // least share of a total that still buffers its free concentration; below it digits are lost

/** Newton on the components that are kept, with its scratch arrays. */
export class EliminatedNewton {
  readonly heldBefore: Float64Array;
  residual = 0;
  worst = -1;
  private readonly terms: EliminatedTerms;
  private readonly free: Float64Array;
  private readonly power: Float64Array;
  private readonly sum: Float64Array; // per eliminated component: total / free
  private readonly first: Float64Array; // per segment
  private readonly second: Float64Array;
  private readonly mixedValue: Float64Array;
  private readonly manyAtoms: ManyAtoms;
  private readonly gradient: Float64Array;
  private readonly hessian: Float64Array;
  private readonly scale: Float64Array;

  constructor(terms: EliminatedTerms) {
    const { k } = terms;
    this.terms = terms;
    this.heldBefore = new Float64Array(terms.nComponents);
    this.free = new Float64Array(k);
    this.power = new Float64Array(terms.powerStart[k]!);
    this.sum = new Float64Array(terms.gone.length);
    this.first = new Float64Array(terms.ligand.length);
    this.second = new Float64Array(terms.ligand.length);
    this.mixedValue = new Float64Array(terms.mixed.beta.length);
    this.manyAtoms = new ManyAtoms(terms);
    this.gradient = new Float64Array(k);
    this.hessian = new Float64Array(k * k);
    this.scale = new Float64Array(k);
  }

  /** Iterates from `lnFree` and writes the answer there; returns the iterations, or their negative minus one when it did not get there. */
  newton(keptTotal: Float64Array, goneTotal: Float64Array, lnFree: Float64Array): number {
    const { terms, free, gradient, hessian, scale } = this;
    const { k, kept, gone } = terms;
    for (let l = 0; l < k; l++) {
      const start = lnFree[kept[l]!]!;
      if (keptTotal[l] === 0) free[l] = 0;
      else if (keptTotal[l]! > 1e-290 && start > ABSENT_LN_FREE && start < 600) free[l] = Math.exp(start);
      else return -1;
    }
    for (let e = 0; e < gone.length; e++) if (!(goneTotal[e]! >= 0)) return -1;
    let lastStep = Infinity;
    let conditioned = false;
    for (let iteration = 0; ; iteration++) {
      this.evaluate(keptTotal, goneTotal);
      let worst = 0;
      let at = -1;
      for (let l = 0; l < k; l++) {
        if (keptTotal[l] === 0) continue;
        const relative = Math.abs(gradient[l]!) / keptTotal[l]!;
        if (!(relative <= worst)) {
          worst = relative;
          at = l;
        }
      }
      if (worst <= TOLERANCE && (k === 0 || lastStep <= SMALL_LAST_STEP)) {
        if (k > 0 && !conditioned) return -1 - iteration;
        this.residual = worst;
        this.worst = at;
        return this.finish(keptTotal, goneTotal, lnFree) ? iteration : -1 - iteration;
      }
      if (iteration >= ITERATIONS || !(worst < 1e290)) return -1 - iteration;
      conditioned = true;
      for (let l = 0; l < k; l++)
        if (keptTotal[l]! > 0 && !(hessian[l * k + l]! > WELL_CONDITIONED * keptTotal[l]!)) conditioned = false;
      lastStep = 0;
      if (k === 1) {
        gradient[0] = hessian[0]! > 0 ? -gradient[0]! / hessian[0]! : NaN;
      } else if (k === 2) {
        const a = hessian[0]!;
        const b = hessian[2]!;
        const c = hessian[3]!;
        const determinant = a * c - b * b;
        const g0 = gradient[0]!;
        const g1 = gradient[1]!;
        if (!(determinant > WELL_CONDITIONED * a * c)) conditioned = false;
        gradient[0] = (b * g1 - c * g0) / determinant;
        gradient[1] = (b * g0 - a * g1) / determinant;
      } else {
        for (let l = 0; l < k; l++) gradient[l] = -gradient[l]!;
        if (!(factorScaled(hessian, k, scale, 1e-30) > WELL_CONDITIONED)) conditioned = false;
        solveScaled(hessian, k, scale, gradient);
      }
      for (let l = 0; l < k; l++) {
        const size = Math.abs(gradient[l]!);
        if (!(size <= lastStep)) lastStep = size;
      }
      if (!(lastStep < Infinity)) return -1 - iteration;
      const damping = lastStep > MAX_STEP ? MAX_STEP / lastStep : 1;
      for (let l = 0; l < k; l++) free[l] = free[l]! * Math.exp(damping * gradient[l]!);
    }
  }

  /** Balances of the kept components (gradient) and the matrix left when the others are eliminated exactly (hessian, lower triangle). */
  private evaluate(keptTotal: Float64Array, goneTotal: Float64Array): void {
    const { terms, free, power, sum, first, second, gradient, hessian } = this;
    const { k, constant, plan, ligand, polynomial, powerStart, homonuclear } = terms;
    for (let l = 0; l < k; l++) {
      const value = free[l]!;
      let product = 1;
      const end = powerStart[l + 1]!;
      for (let p = powerStart[l]!; p < end; p++) {
        product *= value;
        power[p] = product;
      }
      gradient[l] = -keptTotal[l]!;
    }
    for (let q = 0; q < k * k; q++) hessian[q] = 0;
    // The plan is one stream of integers and the polynomials one of numbers, read in step: few arrays to keep at hand in this loop.
    const blocks = constant.length;
    let at = 0;
    let q = 0;
    let s = 0;
    for (let block = 0; block < blocks; block++) {
      const from = s;
      const to = from + plan[at]!;
      const hasMixed = plan[at + 1] === 1;
      at += 2;
      let total = constant[block]!;
      for (; s < to; s++, at += 3) {
        // moments of the exponents over the terms of one kept component
        const count = plan[at + 2]!;
        let p = plan[at + 1]!;
        let m1 = polynomial[q]! * power[p]!;
        let m2 = m1;
        total += m1;
        q++;
        for (let exponent = 2; exponent <= count; exponent++) {
          p++;
          const w = polynomial[q]! * power[p]!;
          q++;
          const we = w * exponent;
          total += w;
          m1 += we;
          m2 += we * exponent;
        }
        first[s] = m1;
        second[s] = m2;
      }
      if (block === 0) {
        for (let r = from; r < to; r++) {
          const l = ligand[r]!;
          gradient[l] = gradient[l]! + first[r]!;
          hessian[l * k + l] = hessian[l * k + l]! + second[r]!;
        }
        if (hasMixed) this.addMixed(block, 1);
        continue;
      }
      if (hasMixed) total += this.mixedTotal(block);
      if (homonuclear.blockStart[block + 1]! > homonuclear.blockStart[block]!) {
        const m = this.manyAtoms.free(block, total, goneTotal[block - 1]!, power);
        sum[block - 1] = m > 0 ? goneTotal[block - 1]! / m : total;
        if (hasMixed) this.addMixed(block, m);
        this.manyAtoms.add(block, m, total, from, to, first, second, gradient, hessian);
        continue;
      }
      sum[block - 1] = total;
      const inverse = 1 / total;
      const unit = goneTotal[block - 1]! * inverse;
      if (hasMixed) this.addMixed(block, unit);
      // Plain differences of moments lose digits only where the matrix is so nearly singular that the answer is refused (WELL_CONDITIONED).
      for (let r = from; r < to; r++) {
        const l = ligand[r]!;
        const m1 = first[r]!;
        const share = unit * m1;
        const slope = share * inverse;
        const row = l * k;
        gradient[l] = gradient[l]! + share;
        hessian[row + l] = hessian[row + l]! + unit * second[r]! - slope * m1;
        for (let c = from; c < r; c++) {
          const cell = row + ligand[c]!;
          hessian[cell] = hessian[cell]! - slope * first[c]!;
        }
      }
    }
    for (let l = 0; l < k; l++) if (keptTotal[l] === 0) hessian[l * k + l] = 1;
  }

  /** Sum of the mixed terms of a block; leaves each term in `mixedValue`. */
  private mixedTotal(block: number): number {
    const { power, mixedValue } = this;
    const { mixed, ligand, powerStart } = this.terms;
    let total = 0;
    for (let i = mixed.blockStart[block]!; i < mixed.blockStart[block + 1]!; i++) {
      let w = mixed.beta[i]!;
      for (let p = mixed.start[i]!; p < mixed.start[i + 1]!; p++)
        w *= power[powerStart[ligand[mixed.segment[p]!]!]! + mixed.exponent[p]! - 1]!;
      mixedValue[i] = w;
      total += w;
    }
    return total;
  }

  /** Adds the mixed terms of a block to its first moments (to the gradient in block 0) and, times `unit`, to the matrix. */
  private addMixed(block: number, unit: number): void {
    const { mixedValue, first, gradient, hessian } = this;
    const { k, mixed, ligand } = this.terms;
    if (block === 0) this.mixedTotal(block);
    for (let i = mixed.blockStart[block]!; i < mixed.blockStart[block + 1]!; i++) {
      const w = mixedValue[i]!;
      for (let p = mixed.start[i]!; p < mixed.start[i + 1]!; p++) {
        const s = mixed.segment[p]!;
        const l = ligand[s]!;
        const we = w * mixed.exponent[p]!;
        if (block === 0) gradient[l] = gradient[l]! + we;
        else first[s] = first[s]! + we;
        for (let q = mixed.start[i]!; q <= p; q++) {
          const cell = l * k + ligand[mixed.segment[q]!]!;
          hessian[cell] = hessian[cell]! + unit * we * mixed.exponent[q]!;
        }
      }
    }
  }

  private finish(keptTotal: Float64Array, goneTotal: Float64Array, lnFree: Float64Array): boolean {
    const { kept, gone, fixed } = this.terms;
    let check = 0;
    for (let l = 0; l < kept.length; l++) {
      const value = keptTotal[l] === 0 ? ABSENT_LN_FREE : Math.log(this.free[l]!);
      lnFree[kept[l]!] = value;
      check += value;
    }
    for (let e = 0; e < gone.length; e++) {
      const value = goneTotal[e] === 0 ? ABSENT_LN_FREE : Math.log(goneTotal[e]! / this.sum[e]!);
      lnFree[gone[e]!] = value;
      check += value;
    }
    for (const { component, lnFree: value } of fixed) lnFree[component] = value;
    return Number.isFinite(check);
  }
}
