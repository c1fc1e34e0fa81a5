import { factorScaled, solveScaled } from "../numerics/cholesky.ts";
import { EliminatedBalances } from "./solve-eliminated-balances.ts";
import type { EliminatedStructure } from "./solve-eliminated-structure.ts";
import type { EliminatedTerms } from "./solve-eliminated-terms.ts";
import { unrollBalances, type UnrolledBalances } from "./solve-eliminated-unrolled.ts";
import { ABSENT_LN_FREE } from "./solve-load.ts";

/** When a solve is near enough: worst relative residual, last step in ln units, and the share of a total that species of two metals may still move by. */
export interface EliminatedPrecision {
  readonly residual: number;
  readonly lastStep: number;
  readonly polynuclear: number;
}

/** As near as doubles allow: the tolerance is that of the plain iteration of the general solver. */
export const FULL_PRECISION: EliminatedPrecision = { residual: 5e-13, lastStep: 1e-5, polynuclear: 1e-14 };
/** For draws: the last step leaves about its square, 1e-6 in ln units, which moves no end point by a millionth. */
export const DRAW_PRECISION: EliminatedPrecision = { residual: 1e-7, lastStep: 1e-3, polynuclear: 1e-10 };
const SAME_MATRIX_STEP = 1e-3; // ln units; after a step this small the matrix is kept for the next one, which loses less than three digits of it
const UNROLL_AFTER = 20_000; // evaluations of a structure after which making code for it pays
const TAYLOR_STEP = 1e-3; // below it five terms give e^step to the last digit
const MAX_STEP = 2; // ln units
const ITERATIONS = 30; // beyond it the general solver takes over
const WELL_CONDITIONED = 1e-7; // least share of a total that still buffers its free concentration; below it digits are lost

const workspaces = new WeakMap<EliminatedStructure, EliminatedNewton>();

/** Newton on the components that are kept, with its scratch arrays; one for all solvers of a structure, for nothing in it outlives a solve but what `use` resets. */
export class EliminatedNewton {
  readonly keptTotal: Float64Array;
  readonly goneTotal: Float64Array;
  readonly held: Float64Array; // in species of two eliminated components, per component
  readonly heldBefore: Float64Array;
  residual = 0;
  worst = -1;
  terms: EliminatedTerms;
  private readonly balances: EliminatedBalances;
  private readonly step: Float64Array;
  private readonly scale: Float64Array;
  private readonly answer: Float64Array; // ln free of the kept components at which the moments stand; NaN where they stand nowhere
  private conditioned = false;
  private evaluations = 0;
  private unrolled: UnrolledBalances | null = null;

  constructor(terms: EliminatedTerms) {
    const { k, nComponents } = terms.structure;
    this.terms = terms;
    this.keptTotal = new Float64Array(k);
    this.goneTotal = new Float64Array(terms.structure.gone.length);
    this.held = new Float64Array(nComponents);
    this.heldBefore = new Float64Array(nComponents);
    this.balances = new EliminatedBalances(terms);
    this.step = new Float64Array(k);
    this.scale = new Float64Array(k);
    this.answer = new Float64Array(k).fill(NaN);
  }

  /** The workspace of the structure of these terms. */
  static of(terms: EliminatedTerms): EliminatedNewton {
    let found = workspaces.get(terms.structure);
    if (found === undefined) {
      found = new EliminatedNewton(terms);
      workspaces.set(terms.structure, found);
    }
    return found;
  }

  /** Takes terms of the same structure, or the same terms with other constants. */
  use(terms: EliminatedTerms): void {
    this.terms = terms;
    this.balances.use(terms);
    this.answer.fill(NaN);
  }

  /** Iterates from `lnFree` at the totals put in and writes the answer there; returns the iterations, or their negative minus one when it did not get there. */
  newton(lnFree: Float64Array, { residual: tolerance, lastStep: smallLastStep } = FULL_PRECISION): number {
    const { balances, answer, keptTotal, goneTotal } = this;
    const { k } = this.terms.structure;
    const least = leastOf(keptTotal, goneTotal);
    if (!(least > 0)) return -1;
    const begun = this.begin(keptTotal, lnFree);
    if (begun === REFUSED) return -1;
    answer[0] = NaN;
    let lastStep = Infinity;
    this.conditioned = k === 0;
    for (let iteration = 0; ; iteration++) {
      const sameMatrix = k > 2 && lastStep <= SAME_MATRIX_STEP && lastStep > smallLastStep;
      if (this.unrolled === null && (iteration > 0 || begun === ELSEWHERE)) balances.moments();
      this.evaluate(least, lastStep > smallLastStep && !sameMatrix);
      this.measure(keptTotal);
      const { residual } = this;
      if (residual <= tolerance && (k === 0 || lastStep <= smallLastStep)) {
        if (!this.conditioned) return -1 - iteration;
        this.count(iteration + 1);
        return this.finish(lnFree) ? iteration : -1 - iteration;
      }
      if (iteration >= ITERATIONS || !(residual < 1e290)) return -1 - iteration;
      if (lastStep <= smallLastStep) this.evaluate(least, true);
      lastStep = this.findStep(keptTotal, !sameMatrix);
      if (!(lastStep < Infinity)) return -1 - iteration;
      this.move(lastStep);
    }
  }

  private evaluate(least: number, withMatrix: boolean): void {
    const { balances, keptTotal, goneTotal, unrolled } = this;
    if (unrolled === null) balances.combine(keptTotal, goneTotal, least, withMatrix);
    else balances.evaluateUnrolled(keptTotal, goneTotal, least, withMatrix, unrolled);
  }

  private count(evaluations: number): void {
    if (this.evaluations > UNROLL_AFTER) return;
    this.evaluations += evaluations;
    if (this.evaluations > UNROLL_AFTER) this.unrolled = unrollBalances(this.terms.structure);
  }

  /** Takes in the start; says whether it is where the moments stand already. */
  private begin(keptTotal: Float64Array, lnFree: Float64Array): number {
    const { answer } = this;
    const { free } = this.balances;
    const { k, kept } = this.terms.structure;
    let there = true;
    for (let l = 0; l < k; l++) {
      const start = lnFree[kept[l]!]!;
      if (start !== answer[l] || (free[l] === 0) !== (keptTotal[l] === 0)) there = false;
    }
    if (there && k > 0) return THERE;
    for (let l = 0; l < k; l++) {
      const start = lnFree[kept[l]!]!;
      if (keptTotal[l] === 0) free[l] = 0;
      else if (start > ABSENT_LN_FREE && start < 600) free[l] = Math.exp(start);
      else return REFUSED;
    }
    return ELSEWHERE;
  }

  /** Worst relative balance and where it is. */
  private measure(keptTotal: Float64Array): void {
    const { gradient } = this.balances;
    let worst = 0;
    let at = -1;
    for (let l = 0; l < keptTotal.length; l++) {
      const total = keptTotal[l]!;
      if (total === 0) continue;
      const relative = Math.abs(gradient[l]!) / total;
      if (!(relative <= worst)) {
        worst = relative;
        at = l;
      }
    }
    this.residual = worst;
    this.worst = at;
  }

  /** The Newton step; returns its largest component. The matrix is new, or the factor of the last one still stands in its place. */
  private findStep(keptTotal: Float64Array, newMatrix: boolean): number {
    const { step, scale } = this;
    const { gradient, hessian } = this.balances;
    const { k } = this.terms.structure;
    if (newMatrix) {
      this.conditioned = true;
      for (let l = 0; l < k; l++)
        if (keptTotal[l]! > 0 && !(hessian[l * k + l]! > WELL_CONDITIONED * keptTotal[l]!)) this.conditioned = false;
    }
    if (k === 1) {
      step[0] = hessian[0]! > 0 ? -gradient[0]! / hessian[0]! : NaN;
    } else if (k === 2) {
      const a = hessian[0]!;
      const b = hessian[2]!;
      const c = hessian[3]!;
      const determinant = a * c - b * b;
      const inverse = 1 / determinant;
      const g0 = gradient[0]!;
      const g1 = gradient[1]!;
      if (!(determinant > WELL_CONDITIONED * a * c)) this.conditioned = false;
      step[0] = (b * g1 - c * g0) * inverse;
      step[1] = (b * g0 - a * g1) * inverse;
    } else {
      for (let l = 0; l < k; l++) step[l] = -gradient[l]!;
      if (newMatrix && !(factorScaled(hessian, k, scale, 1e-30) > WELL_CONDITIONED)) this.conditioned = false;
      solveScaled(hessian, k, scale, step);
    }
    let largest = 0;
    for (let l = 0; l < k; l++) {
      const size = Math.abs(step[l]!);
      if (!(size <= largest)) largest = size;
    }
    return largest;
  }

  private move(largest: number): void {
    const { step } = this;
    const { free } = this.balances;
    const damping = largest > MAX_STEP ? MAX_STEP / largest : 1;
    for (let l = 0; l < step.length; l++) {
      const d = damping * step[l]!;
      free[l] = free[l]! * (largest < TAYLOR_STEP ? 1 + d * (1 + (d / 2) * (1 + (d / 3) * (1 + d / 4))) : Math.exp(d));
    }
  }

  private finish(lnFree: Float64Array): boolean {
    const { answer, keptTotal, goneTotal } = this;
    const { free, freeGone } = this.balances;
    const { fixedLnFree } = this.terms;
    const { kept, gone, fixed } = this.terms.structure;
    let check = 0;
    for (let l = 0; l < kept.length; l++) {
      const value = keptTotal[l] === 0 ? ABSENT_LN_FREE : Math.log(free[l]!);
      lnFree[kept[l]!] = value;
      answer[l] = value;
      check += value;
    }
    for (let e = 0; e < gone.length; e++) {
      const value = goneTotal[e] === 0 ? ABSENT_LN_FREE : Math.log(freeGone[e]!);
      lnFree[gone[e]!] = value;
      check += value;
    }
    for (let f = 0; f < fixed.length; f++) lnFree[fixed[f]!] = fixedLnFree[fixed[f]!]!;
    return Number.isFinite(check);
  }
}

const REFUSED = 0;
const ELSEWHERE = 1;
const THERE = 2;
const SMALLEST_TOTAL = 1e-290; // mol/L; below it products leave the range of doubles

/** The smallest total that is not zero, mol/L; NaN where one cannot be used. */
function leastOf(keptTotal: Float64Array, goneTotal: Float64Array): number {
  let least = Infinity;
  for (let l = 0; l < keptTotal.length; l++) {
    const total = keptTotal[l]!;
    if (total === 0) continue;
    if (!(total > SMALLEST_TOTAL)) return NaN;
    if (total < least) least = total;
  }
  for (let e = 0; e < goneTotal.length; e++) {
    const total = goneTotal[e]!;
    if (!(total >= 0)) return NaN;
    if (total > 0 && total < least) least = total;
  }
  return least;
}
