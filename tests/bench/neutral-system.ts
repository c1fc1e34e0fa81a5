import { readFileSync } from "node:fs";
import type { MassBalanceProblem } from "../../src/chemistry/types.ts";

interface SystemFile {
  readonly pH: number;
  readonly pKw: number;
  readonly edtaLogBetaH: readonly number[];
  readonly ammoniaLogBetaH: readonly number[];
  readonly metals: readonly {
    readonly total: number;
    readonly edta: number;
    readonly hydroxo: readonly number[];
    readonly ammine: readonly number[];
  }[];
  readonly ammoniaTotal: number;
  readonly points: number;
  readonly edtaMax: number;
}

/** The neutral speed system: six metals, then EDTA, then ammonia; protons folded into the constants as in the baselines. */
export interface NeutralSystem {
  readonly problem: MassBalanceProblem;
  readonly metals: readonly number[];
  readonly points: number;
  /** Totals at a point of the titration, mol/L; the same array every time. */
  readonly totalsAt: (point: number) => Float64Array;
  /** Fills ln free concentrations with the start that the baselines use. */
  readonly start: (lnFree: Float64Array) => void;
}

/** Reads system.json and builds the same 56 species over 8 unknowns as the baselines. */
export function neutralSystem(): NeutralSystem {
  const file = JSON.parse(readFileSync(new URL("system.json", import.meta.url), "utf8")) as SystemFile;
  const count = file.metals.length;
  const [edta, ammonia, n] = [count, count + 1, count + 2];
  const rows: Int8Array[] = [];
  const lnBeta: number[] = [];
  const add = (log10Beta: number, ...parts: readonly (readonly [number, number])[]): void => {
    const row = new Int8Array(n);
    for (const [component, coefficient] of parts) row[component] = coefficient;
    rows.push(row);
    lnBeta.push(log10Beta * Math.LN10);
  };
  const pOH = file.pKw - file.pH;
  for (let j = 0; j < n; j++) add(0, [j, 1]);
  file.edtaLogBetaH.forEach((value, k) => add(value - (k + 1) * file.pH, [edta, 1]));
  add(file.ammoniaLogBetaH[0]! - file.pH, [ammonia, 1]);
  file.metals.forEach((metal, m) => {
    metal.hydroxo.forEach((value, k) => add(value - (k + 1) * pOH, [m, 1]));
    metal.ammine.forEach((value, k) => add(value, [m, 1], [ammonia, k + 1]));
    add(metal.edta, [m, 1], [edta, 1]);
  });
  const stoichiometry = new Int8Array(rows.length * n);
  rows.forEach((row, i) => stoichiometry.set(row, i * n));
  const totals = Float64Array.of(...file.metals.map(({ total }) => total), 0, file.ammoniaTotal);
  return {
    problem: {
      nComponents: n,
      nSpecies: rows.length,
      stoichiometry,
      lnBeta: Float64Array.from(lnBeta),
      solids: { stoichiometry: new Int8Array(0), lnBeta: new Float64Array(0), n: 0 },
    },
    metals: file.metals.map((_, m) => m),
    points: file.points,
    totalsAt(point) {
      totals[edta] = 1e-9 + (file.edtaMax * (point + 0.5)) / file.points;
      return totals;
    },
    start(lnFree) {
      lnFree.fill(Math.log(1e-6));
      lnFree[edta] = Math.log(1e-15);
      lnFree[ammonia] = Math.log(0.05);
    },
  };
}
