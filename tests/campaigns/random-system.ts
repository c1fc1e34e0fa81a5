import type { MassBalanceProblem } from "../../src/chemistry/types.ts";
import { seededRandom } from "../../src/numerics/seeded-random.ts";

/** One made-up system: component 0 is H+, then metals, then ligands. */
export interface RandomSystem {
  readonly problem: MassBalanceProblem;
  readonly totals: Float64Array;
  readonly fixedLnFree: Float64Array; // H+ held, the rest unknown
  readonly metals: readonly number[]; // components
}

/** Ranges of the made-up systems. */
export interface RandomSystemOptions {
  readonly solids?: number; // how many solids may form at most (at least one when > 0)
}

const LN_10 = Math.LN10;

/**
 * Draws a system: 2 to 8 metals, 1 to 5 ligands, up to 80 species, totals 1e-8 to 1 mol/L, log10 beta up to 60, pH 0 to 14.
 * One in ten has two equal metal totals, one in five a ligand total equal to a metal's: the hard case of nearly equal totals.
 */
export function randomSystem(seed: number, index: number, options: RandomSystemOptions = {}): RandomSystem {
  const random = seededRandom(seed, index);
  const metals = 2 + random.integerBelow(7);
  const ligands = 1 + random.integerBelow(5);
  const n = 1 + metals + ligands;
  const rows: Int8Array[] = [];
  const lnBeta: number[] = [];
  const metal = (): number => 1 + random.integerBelow(metals);
  const ligand = (): number => 1 + metals + random.integerBelow(ligands);
  const add = (log10Beta: number, ...parts: readonly (readonly [number, number])[]): void => {
    const row = new Int8Array(n);
    for (const [component, count] of parts) row[component] = row[component]! + count;
    rows.push(row);
    lnBeta.push(log10Beta * LN_10);
  };
  for (let j = 0; j < n; j++) add(0, [j, 1]);
  add(-14, [0, -1]);
  const most = Math.max(20 + random.integerBelow(61), rows.length);
  for (let l = 1 + metals; l < n; l++) {
    const steps = random.integerBelow(7);
    let log10Beta = 0;
    for (let k = 1; k <= steps && rows.length < most; k++) {
      log10Beta += 12 * random.uniform();
      add(log10Beta, [l, 1], [0, k]);
    }
  }
  while (rows.length < most) {
    const kind = random.uniform();
    if (kind < 0.3) {
      const k = 1 + random.integerBelow(4);
      add(23 * random.uniform() - 14 * k, [metal(), 1], [0, -k]);
    } else if (kind < 0.4) {
      const k = 1 + random.integerBelow(6);
      add(14 * k * (random.uniform() - 1), [metal(), 2 + random.integerBelow(3)], [0, -k]);
    } else if (kind < 0.85) add(60 * random.uniform(), [metal(), 1], [ligand(), 1 + random.integerBelow(6)]);
    else if (kind < 0.95)
      add(40 * random.uniform() - 10, [metal(), 1], [ligand(), 1], [0, random.uniform() < 0.5 ? 1 : -1]);
    else add(60 * random.uniform(), [metal(), 1], [ligand(), 1], [ligand(), 1]);
  }
  const solids: Int8Array[] = [];
  const solidLnBeta: number[] = [];
  const solidCount = options.solids === undefined ? 0 : 1 + random.integerBelow(options.solids);
  for (let s = 0; s < solidCount; s++) {
    const row = new Int8Array(n);
    row[metal()] = random.uniform() < 0.2 ? 2 : 1;
    if (random.uniform() < 0.4) {
      const k = 1 + random.integerBelow(3);
      row[0] = -k;
      solidLnBeta.push((4 * random.uniform() - k * (2 + 12 * random.uniform())) * LN_10);
    } else {
      row[ligand()] = 1 + random.integerBelow(2);
      if (random.uniform() < 0.3) row[0] = -1;
      solidLnBeta.push(50 * random.uniform() * LN_10);
    }
    solids.push(row);
  }
  const totals = Float64Array.from({ length: n }, () => 10 ** (-8 * random.uniform()));
  if (random.uniform() < 0.1) totals[2] = totals[1]!;
  if (random.uniform() < 0.2) totals[n - 1] = totals[1]!;
  const fixedLnFree = new Float64Array(n).fill(NaN);
  fixedLnFree[0] = -14 * random.uniform() * LN_10;
  return {
    problem: {
      nComponents: n,
      nSpecies: rows.length,
      stoichiometry: joined(rows, n),
      lnBeta: Float64Array.from(lnBeta),
      solids: { stoichiometry: joined(solids, n), lnBeta: Float64Array.from(solidLnBeta), n: solids.length },
    },
    totals,
    fixedLnFree,
    metals: Array.from({ length: metals }, (_, m) => 1 + m),
  };
}

function joined(rows: readonly Int8Array[], n: number): Int8Array {
  const all = new Int8Array(rows.length * n);
  rows.forEach((row, i) => all.set(row, i * n));
  return all;
}
