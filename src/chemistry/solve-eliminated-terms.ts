import type { MassBalanceProblem } from "./types.ts";

/** Slots for powers of unknown components in one term; unused ones point at the constant 1. */
export const FACTORS = 3;

const LARGEST_LN = 600; // a constant beyond e^600 leaves no room for the powers beside it

/** A species that the eliminated form cannot hold. */
interface PolynuclearSpecies {
  readonly lnBeta: number; // fixed components folded in
  readonly component: Int32Array;
  readonly coefficient: Float64Array;
}

/** The terms of one problem at fixed components, grouped by eliminated component; see `eliminatedSolver`. */
export interface EliminatedTerms {
  readonly nComponents: number;
  readonly k: number; // kept components
  readonly kept: Int32Array; // their numbers in the problem
  readonly gone: Int32Array; // eliminated components
  readonly fixed: readonly { readonly component: number; readonly lnFree: number }[];
  readonly beta: Float64Array; // per term: those without an eliminated component first, then by component
  readonly factor: Int32Array; // FACTORS positions in the table of powers per term
  readonly ownCount: number; // terms without an eliminated component
  readonly own: { readonly start: Int32Array; readonly column: Int32Array; readonly value: Float64Array };
  readonly goneStart: Int32Array; // per eliminated component: its first term
  readonly ligandStart: Int32Array; // per eliminated component: the kept components its terms hold
  readonly ligand: Int32Array;
  readonly table: Float64Array; // FACTORS per term: coefficients of the first FACTORS kept components of its eliminated one
  readonly holds: { readonly start: Int32Array; readonly column: Int32Array; readonly value: Float64Array }; // per term: sparse, over those
  readonly powerStart: Int32Array; // per kept component: its first power (of exponent 1) in the table
  readonly powers: number; // length of the table, position 0 holds 1
  readonly polynuclear: readonly PolynuclearSpecies[];
}

interface Term {
  readonly exponents: readonly number[]; // over kept components
  beta: number;
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
  const k = kept.length;
  const own = new Map<string, Term>();
  const byComponent = gone.map(() => new Map<string, Term>());
  const polynuclear: PolynuclearSpecies[] = [];
  const highest = new Int32Array(k);
  for (let i = 0; i < nSpecies; i++) {
    let ln = lnBeta[i]!;
    for (const j of all)
      if (isFixed(j) && stoichiometry[i * n + j] !== 0) ln += stoichiometry[i * n + j]! * fixedLnFree[j]!;
    if (!(ln < LARGEST_LN)) return null;
    const exponents = kept.map((j) => stoichiometry[i * n + j]!);
    const atoms = gone.map((j) => stoichiometry[i * n + j]!);
    if ([...exponents, ...atoms].some((value) => value < 0)) return null;
    const count = atoms.reduce((sum, value) => sum + value, 0);
    const unknown = all.filter((j) => !isFixed(j) && stoichiometry[i * n + j] !== 0);
    if (unknown.length === 0) continue;
    if (count > 1) {
      polynuclear.push({
        lnBeta: ln,
        component: Int32Array.from(unknown),
        coefficient: Float64Array.from(unknown, (j) => stoichiometry[i * n + j]!),
      });
      continue;
    }
    if (exponents.filter((value) => value > 0).length > FACTORS) return null;
    exponents.forEach((value, l) => (highest[l] = Math.max(highest[l]!, value)));
    const group = count === 0 ? own : byComponent[atoms.indexOf(1)]!;
    const key = exponents.join(",");
    const term = group.get(key);
    if (term === undefined) group.set(key, { exponents, beta: Math.exp(ln) });
    else term.beta += Math.exp(ln);
  }
  const powerStart = new Int32Array(k + 1);
  powerStart[0] = 1;
  for (let l = 0; l < k; l++) powerStart[l + 1] = powerStart[l]! + highest[l]!;
  const groups = [own, ...byComponent].map((group) => [...group.values()]);
  const terms = groups.flat();
  const factor = new Int32Array(terms.length * FACTORS);
  terms.forEach(({ exponents }, i) => {
    let slot = 0;
    exponents.forEach((value, l) => {
      if (value > 0) factor[i * FACTORS + slot++] = powerStart[l]! + value - 1;
    });
  });
  const ownStart = [0];
  const ownColumn: number[] = [];
  const ownValue: number[] = [];
  for (const { exponents } of groups[0]!) {
    exponents.forEach((value, l) => {
      if (value === 0) return;
      ownColumn.push(l);
      ownValue.push(value);
    });
    ownStart.push(ownColumn.length);
  }
  const goneStart = [groups[0]!.length];
  const ligandStart = [0];
  const ligand: number[] = [];
  const table = new Float64Array(terms.length * FACTORS);
  const holdsStart = groups[0]!.map(() => 0);
  const holdsColumn: number[] = [];
  const holdsValue: number[] = [];
  let row = groups[0]!.length;
  for (const group of groups.slice(1)) {
    goneStart.push(row + group.length);
    const used = kept.map((_, l) => l).filter((l) => group.some(({ exponents }) => exponents[l]! > 0));
    ligand.push(...used);
    ligandStart.push(ligand.length);
    for (const { exponents } of group) {
      holdsStart.push(holdsColumn.length);
      used.forEach((l, a) => {
        if (a < FACTORS) table[row * FACTORS + a] = exponents[l]!;
        if (exponents[l] === 0) return;
        holdsColumn.push(a);
        holdsValue.push(exponents[l]!);
      });
      row++;
    }
  }
  holdsStart.push(holdsColumn.length);
  return {
    nComponents: n,
    k,
    kept: Int32Array.from(kept),
    gone: Int32Array.from(gone),
    fixed: all.filter(isFixed).map((component) => ({ component, lnFree: fixedLnFree[component]! })),
    beta: Float64Array.from(terms, ({ beta }) => beta),
    factor,
    ownCount: groups[0]!.length,
    own: { start: Int32Array.from(ownStart), column: Int32Array.from(ownColumn), value: Float64Array.from(ownValue) },
    goneStart: Int32Array.from(goneStart),
    ligandStart: Int32Array.from(ligandStart),
    ligand: Int32Array.from(ligand),
    table,
    holds: {
      start: Int32Array.from(holdsStart),
      column: Int32Array.from(holdsColumn),
      value: Float64Array.from(holdsValue),
    },
    powerStart,
    powers: powerStart[k]!,
    polynuclear,
  };
}
