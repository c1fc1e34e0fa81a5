import type { Titration, TitrationColumns } from "./titration.ts";
import { boundRows } from "./titration.ts";

const LARGEST_LN = 600; // coefficients of a component are scaled down to e^600, so that no power of a titrant beside them overflows

/**
 * A titration as polynomials in the free titrant T: for each component of the sample the sum over its species of their concentration per
 * free component, with everything held put in, and the same for the titrant that stands alone. One list of coefficients; powers by multiplication.
 */
export class ExplicitSums {
  private readonly degreeStart: Int32Array; // per list: its coefficients of powers 0, 1, ...; list 0 is the titrant alone, then one per component
  private readonly coefficient: Float64Array;
  private readonly bound: Float64Array; // coefficients times what each species counts as bound
  private readonly notBound: Float64Array;
  private readonly molPerL: Float64Array; // per component, in the undiluted sample
  private readonly lnScale: Float64Array; // per list
  private readonly counted: Int32Array; // components of which anything counts as bound or not bound
  private readonly followed: number; // list of what is followed; 0 where that is the titrant
  private readonly sum: Float64Array; // per list, at the last free titrant
  alone = 0; // titrant in species without a component of the sample, mol/L, at the last free titrant
  taken = 0; // titrant bound to the sample, mol per litre of the undiluted sample

  constructor(titration: Titration, columns: TitrationColumns) {
    const lists = rowsByComponent(titration, columns);
    const weights = boundRows(titration, columns);
    const degrees = lists.map((rows) => rows.reduce((most, row) => Math.max(most, row.titrantAtoms), 0));
    this.degreeStart = new Int32Array(lists.length + 1);
    degrees.forEach((degree, i) => (this.degreeStart[i + 1] = this.degreeStart[i]! + degree + 1));
    const size = this.degreeStart[lists.length]!;
    this.coefficient = new Float64Array(size);
    this.bound = new Float64Array(size);
    this.notBound = new Float64Array(size);
    this.lnScale = Float64Array.from(lists, (rows) => Math.max(0, ...rows.map(({ ln }) => ln - LARGEST_LN)));
    lists.forEach((rows, i) => {
      for (const { row, ln, titrantAtoms } of rows) {
        const at = this.degreeStart[i]! + titrantAtoms;
        const beta = Math.exp(ln - this.lnScale[i]!);
        this.coefficient[at] = this.coefficient[at]! + beta;
        this.bound[at] = this.bound[at]! + beta * weights.bound[row]!;
        this.notBound[at] = this.notBound[at]! + beta * weights.notBound[row]!;
      }
    });
    const { components } = titration.system;
    this.molPerL = Float64Array.from(lists, (_, i) =>
      i === 0 ? 1 : titration.sampleMolPerL[components[columns.sample[i - 1]!]!]!,
    );
    const counts = (i: number): boolean =>
      [this.bound, this.notBound].some((w) =>
        w.subarray(this.degreeStart[i], this.degreeStart[i + 1]).some((x) => x > 0),
      );
    this.counted = Int32Array.from(lists.keys()).filter(counts);
    this.followed = columns.follow === columns.titrant ? 0 : 1 + columns.sample.indexOf(columns.follow);
    this.sum = new Float64Array(lists.length);
  }

  /** Fills `alone` and `taken` (and the sums they need) at free titrant `t`, mol/L. */
  load(t: number): void {
    const { degreeStart, coefficient, molPerL, sum } = this;
    let alone = 0;
    let power = 1;
    let p = 1;
    for (const end = degreeStart[1]!; p < end; p++) {
      power *= t;
      alone += p * coefficient[p]! * power;
    }
    let taken = 0;
    for (let i = 1; i < sum.length; i++) {
      const end = degreeStart[i + 1]!;
      let total = coefficient[p++]!;
      let atoms = 0;
      power = 1;
      for (let n = 1; p < end; p++, n++) {
        power *= t;
        const term = coefficient[p]! * power;
        total += term;
        atoms += n * term;
      }
      sum[i] = total;
      taken += (molPerL[i]! * atoms) / total;
    }
    this.alone = alone;
    this.taken = taken;
  }

  /** ln of the free concentration of what is followed (a component of the sample) after `load`. */
  lnFollowed(dilution: number): number {
    const i = this.followed;
    return Math.log((this.molPerL[i]! * dilution) / this.sum[i]!) - this.lnScale[i]!;
  }

  /** Bound and not bound, mol/L in the vessel, at the free titrant of the last `load`. */
  amounts(t: number, dilution: number): { readonly bound: number; readonly notBound: number } {
    const { degreeStart, molPerL, sum, counted } = this;
    let bound = 0;
    let notBound = 0;
    for (const i of counted) {
      let held = 0;
      let free = 0;
      let power = 1;
      for (let p = degreeStart[i]!; p < degreeStart[i + 1]!; p++) {
        held += this.bound[p]! * power;
        free += this.notBound[p]! * power;
        power *= t;
      }
      const unit = i === 0 ? 1 : (molPerL[i]! * dilution) / sum[i]!;
      bound += unit * held;
      notBound += unit * free;
    }
    return { bound, notBound };
  }
}

interface Row {
  readonly row: number;
  readonly ln: number; // ln beta with everything held put in; times the free component where it belongs to one
  readonly titrantAtoms: number;
}

/** Rows of the titrant alone, then those of each component of the sample. */
function rowsByComponent(titration: Titration, columns: TitrationColumns): Row[][] {
  const { system } = titration;
  const { nComponents, nSpecies, stoichiometry, lnBeta } = system.problem;
  const variable = new Set([columns.titrant, ...columns.sample]);
  const lnHeld = system.components.map((id, column) => {
    if (column === 0) return titration.log10H * Math.LN10;
    const held = titration.freeMolPerL[id];
    return held === undefined || held <= 0 ? Number.NEGATIVE_INFINITY : Math.log(held);
  });
  const lists: Row[][] = [[], ...columns.sample.map(() => [])];
  for (let row = 0; row < nSpecies; row++) {
    let ln = lnBeta[row]!;
    for (let column = 0; column < nComponents; column++) {
      const count = stoichiometry[row * nComponents + column]!;
      if (count !== 0 && !variable.has(column)) ln += count * lnHeld[column]!;
    }
    if (!Number.isFinite(ln)) continue; // a component that is neither held nor in the vessel
    const titrantAtoms = stoichiometry[row * nComponents + columns.titrant]!;
    const at = columns.sample.findIndex((column) => stoichiometry[row * nComponents + column]! > 0);
    if (at >= 0) lists[at + 1]!.push({ row, ln, titrantAtoms });
    else if (titrantAtoms !== 0) lists[0]!.push({ row, ln, titrantAtoms });
  }
  return lists;
}
