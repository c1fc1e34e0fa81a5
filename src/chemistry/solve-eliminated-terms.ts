import { CONSTANT, MIXED, NOWHERE, POLYNOMIAL, POLYNUCLEAR } from "./solve-eliminated-blocks.ts";
import { eliminatedStructure, type EliminatedStructure } from "./solve-eliminated-structure.ts";
import type { MassBalanceProblem } from "./types.ts";

const LARGEST_LN = 600; // a constant beyond e^600 leaves no room for the powers beside it

/** The terms of one problem at fixed components: the structure of its species with their constants put in, fixed components folded in. */
export class EliminatedTerms {
  readonly structure: EliminatedStructure;
  readonly constant: Float64Array; // per block
  readonly polynomial: Float64Array; // coefficients in the order of the plan; gaps are 0
  readonly mixedBeta: Float64Array;
  readonly homonuclearBeta: Float64Array;
  readonly polynuclearLnBeta: Float64Array;
  readonly fixedLnFree: Float64Array; // per component

  constructor(structure: EliminatedStructure) {
    this.structure = structure;
    this.constant = new Float64Array(structure.nBlocks);
    this.polynomial = new Float64Array(structure.nCoefficients);
    this.mixedBeta = new Float64Array(structure.mixed.n);
    this.homonuclearBeta = new Float64Array(structure.homonuclear.n);
    this.polynuclearLnBeta = new Float64Array(structure.polynuclear.length);
    this.fixedLnFree = new Float64Array(structure.nComponents);
  }

  /**
   * Puts in constants (ln beta per species) and free concentrations of the fixed components. False, and the terms of no use, where a constant
   * lies beyond e^600.
   */
  refill(lnBeta: ArrayLike<number>, fixedLnFree: ArrayLike<number>): boolean {
    const { constant, polynomial, mixedBeta, homonuclearBeta } = this;
    const { list, place, fixedStart, fixedComponent, fixedCoefficient } = this.structure.sources;
    this.fixedLnFree.set(fixedLnFree);
    constant.fill(0);
    polynomial.fill(0);
    mixedBeta.fill(0);
    for (let i = 0; i < list.length; i++) {
      let ln = lnBeta[i]!;
      const end = fixedStart[i + 1]!;
      for (let p = fixedStart[i]!; p < end; p++) ln += fixedCoefficient[p]! * fixedLnFree[fixedComponent[p]!]!;
      if (!(ln < LARGEST_LN)) return false;
      const to = list[i]!;
      if (to === NOWHERE) continue;
      const at = place[i]!;
      if (to === POLYNUCLEAR) this.polynuclearLnBeta[at] = ln;
      else {
        const beta = Math.exp(ln);
        if (to === POLYNOMIAL) polynomial[at] = polynomial[at]! + beta;
        else if (to === CONSTANT) constant[at] = constant[at]! + beta;
        else if (to === MIXED) mixedBeta[at] = mixedBeta[at]! + beta;
        else homonuclearBeta[at] = beta;
      }
    }
    return true;
  }

  /** Amounts held in species of two eliminated components, mol/L per component. */
  polynuclear(lnFree: Float64Array, held: Float64Array): void {
    const { polynuclear } = this.structure;
    held.fill(0);
    for (let i = 0; i < polynuclear.length; i++) {
      const { component, coefficient } = polynuclear[i]!;
      let e = this.polynuclearLnBeta[i]!;
      for (let p = 0; p < component.length; p++) e += coefficient[p]! * lnFree[component[p]!]!;
      const c = Math.exp(Math.min(e, LARGEST_LN));
      for (let p = 0; p < component.length; p++) {
        const j = component[p]!;
        held[j] = held[j]! + coefficient[p]! * c;
      }
    }
  }
}

/** The terms of a problem, or null where the form does not apply. */
export function compileEliminated(
  problem: MassBalanceProblem,
  fixedLnFree: ArrayLike<number>,
  eliminate: readonly number[],
): EliminatedTerms | null {
  const structure = eliminatedStructure(problem, fixedLnFree, eliminate);
  if (structure === null) return null;
  const terms = new EliminatedTerms(structure);
  return terms.refill(problem.lnBeta, fixedLnFree) ? terms : null;
}
