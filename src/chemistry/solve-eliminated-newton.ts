import { factorScaled, solveScaled } from "../numerics/cholesky.ts";
import { type EliminatedTerms, FACTORS } from "./solve-eliminated-terms.ts";
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
  private readonly mean: Float64Array;
  private readonly second: Float64Array;
  private readonly gradient: Float64Array;
  private readonly hessian: Float64Array;
  private readonly scale: Float64Array;

  constructor(terms: EliminatedTerms) {
    const { k } = terms;
    this.terms = terms;
    this.heldBefore = new Float64Array(terms.nComponents);
    this.free = new Float64Array(k);
    this.power = new Float64Array(terms.powers);
    this.power[0] = 1;
    this.sum = new Float64Array(terms.gone.length);
    this.mean = new Float64Array(k);
    this.second = new Float64Array(k * k);
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
    const { terms, free, power, sum, gradient, hessian } = this;
    const { k, beta, factor, own, ownCount, goneStart, ligandStart, ligand, table, powerStart } = terms;
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
    for (let i = 0; i < ownCount; i++) {
      const f = i * FACTORS;
      const c = beta[i]! * power[factor[f]!]! * power[factor[f + 1]!]! * power[factor[f + 2]!]!;
      const end = own.start[i + 1]!;
      for (let p = own.start[i]!; p < end; p++) {
        const l = own.column[p]!;
        const ac = own.value[p]! * c;
        gradient[l] = gradient[l]! + ac;
        for (let q = own.start[i]!; q <= p; q++) {
          const at = l * k + own.column[q]!;
          hessian[at] = hessian[at]! + ac * own.value[q]!;
        }
      }
    }
    for (let e = 0; e < sum.length; e++) {
      const first = goneStart[e]!;
      const last = goneStart[e + 1]!;
      const from = ligandStart[e]!;
      const width = ligandStart[e + 1]! - from;
      const amount = goneTotal[e]!;
      // Moments of the coefficients over the terms. Their plain differences below lose digits only where the matrix is so nearly
      // singular that the answer is refused anyway (WELL_CONDITIONED).
      if (width === 1) {
        let total = 0;
        let m1 = 0;
        let m2 = 0;
        for (let i = first; i < last; i++) {
          const w = beta[i]! * power[factor[i * FACTORS]!]!;
          const a = table[i * FACTORS]!;
          total += w;
          m1 += w * a;
          m2 += w * a * a;
        }
        sum[e] = total;
        const mean = m1 / total;
        const l = ligand[from]!;
        gradient[l] = gradient[l]! + amount * mean;
        hessian[l * k + l] = hessian[l * k + l]! + amount * (m2 / total - mean * mean);
      } else if (width === 2) {
        let total = 0;
        let ma = 0;
        let mb = 0;
        let maa = 0;
        let mab = 0;
        let mbb = 0;
        for (let i = first, f = first * FACTORS; i < last; i++, f += FACTORS) {
          const w = beta[i]! * power[factor[f]!]! * power[factor[f + 1]!]!;
          const a = table[f]!;
          const b = table[f + 1]!;
          const wa = w * a;
          const wb = w * b;
          total += w;
          ma += wa;
          mb += wb;
          maa += wa * a;
          mab += wa * b;
          mbb += wb * b;
        }
        sum[e] = total;
        const unit = 1 / total;
        const meanA = ma * unit;
        const meanB = mb * unit;
        const l = ligand[from]!;
        const r = ligand[from + 1]!;
        gradient[l] = gradient[l]! + amount * meanA;
        gradient[r] = gradient[r]! + amount * meanB;
        hessian[l * k + l] = hessian[l * k + l]! + amount * (maa * unit - meanA * meanA);
        hessian[r * k + l] = hessian[r * k + l]! + amount * (mab * unit - meanA * meanB);
        hessian[r * k + r] = hessian[r * k + r]! + amount * (mbb * unit - meanB * meanB);
      } else this.moments(e, amount);
    }
    for (let l = 0; l < k; l++) if (keptTotal[l] === 0) hessian[l * k + l] = 1;
  }

  /** The same sums for an eliminated component whose terms hold none, or three and more, of the kept ones. */
  private moments(e: number, amount: number): void {
    const { terms, power, sum, mean, second, gradient, hessian } = this;
    const { k, beta, factor, goneStart, ligandStart, ligand, holds } = terms;
    const from = ligandStart[e]!;
    const width = ligandStart[e + 1]! - from;
    let total = 0;
    for (let a = 0; a < width; a++) mean[a] = 0;
    for (let q = 0; q < width * width; q++) second[q] = 0;
    for (let i = goneStart[e]!; i < goneStart[e + 1]!; i++) {
      const f = i * FACTORS;
      const w = beta[i]! * power[factor[f]!]! * power[factor[f + 1]!]! * power[factor[f + 2]!]!;
      total += w;
      for (let p = holds.start[i]!; p < holds.start[i + 1]!; p++) {
        const a = holds.column[p]!;
        const wa = w * holds.value[p]!;
        mean[a] = mean[a]! + wa;
        for (let q = holds.start[i]!; q <= p; q++) {
          const at = a * width + holds.column[q]!;
          second[at] = second[at]! + wa * holds.value[q]!;
        }
      }
    }
    sum[e] = total;
    for (let a = 0; a < width; a++) {
      const meanA = mean[a]! / total;
      mean[a] = meanA;
      const l = ligand[from + a]!;
      gradient[l] = gradient[l]! + amount * meanA;
      for (let b = 0; b <= a; b++) {
        const cell = l * k + ligand[from + b]!;
        hessian[cell] = hessian[cell]! + amount * (second[a * width + b]! / total - meanA * mean[b]!);
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
