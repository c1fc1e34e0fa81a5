import { eliminatedSolver } from "../../src/chemistry/solve-eliminated.ts";
import { solveEquilibrium } from "../../src/chemistry/solve-equilibrium.ts";
import type { MassBalanceProblem } from "../../src/chemistry/types.ts";
import { median } from "../../src/numerics/quantile.ts";
import { seededRandom } from "../../src/numerics/seeded-random.ts";
import type { Bench, BenchReport } from "./bench.ts";
import { interleaved, microsecondsPer, type Timed } from "./interleave.ts";

const SIZES = [2, 4, 8, 16, 32];
const ROUNDS = 9;
const POINTS = 40;
const AGREE = 1e-10; // of any ln free, both solvers
const PASS_US = 20_000; // how long one timing of one size lasts, roughly

/** Microseconds per equilibrium against the number of components, for both solvers, with the exponent of the growth. */
export const componentsBench: Bench = { name: "components", run: () => Promise.resolve(measure()) };

/** A made-up system: half the components are metals, half ligands, each metal with each ligand; hydroxides and acids at fixed acidity. */
interface MadeUp {
  readonly problem: MassBalanceProblem;
  readonly metals: readonly number[];
  readonly totals: (point: number) => Float64Array;
}

function madeUp(n: number): MadeUp {
  const random = seededRandom(4, n);
  const metals = n / 2;
  const rows: Int8Array[] = [];
  const lnBeta: number[] = [];
  const add = (log10Beta: number, ...parts: readonly (readonly [number, number])[]): void => {
    const row = new Int8Array(n);
    for (const [component, count] of parts) row[component] = count;
    rows.push(row);
    lnBeta.push(log10Beta * Math.LN10);
  };
  for (let j = 0; j < n; j++) add(0, [j, 1]);
  for (let m = 0; m < metals; m++) for (let k = 0; k < 3; k++) add(-2 + 3 * random.uniform(), [m, 1]);
  for (let l = metals; l < n; l++) {
    add(2 * random.uniform(), [l, 1]);
    for (let m = 0; m < metals; m++) {
      const first = l === metals ? 9 + 9 * random.uniform() : 1 + 4 * random.uniform(); // the titrant holds firmly, the others little
      add(first, [m, 1], [l, 1]);
      if (l > metals) add(1.7 * first, [m, 1], [l, 2]);
    }
  }
  const stoichiometry = new Int8Array(rows.length * n);
  rows.forEach((row, i) => stoichiometry.set(row, i * n));
  const totals = Float64Array.from({ length: n }, (_, j) => (j < metals ? 1e-2 / metals : 5e-2));
  return {
    problem: {
      nComponents: n,
      nSpecies: rows.length,
      stoichiometry,
      lnBeta: Float64Array.from(lnBeta),
      solids: { stoichiometry: new Int8Array(0), lnBeta: new Float64Array(0), n: 0 },
    },
    metals: Array.from({ length: metals }, (_, m) => m),
    totals: (point) => {
      totals[metals] = (1.5e-2 * (point + 0.5)) / POINTS; // through the equivalence point, to an excess of half
      return totals;
    },
  };
}

function measure(): BenchReport {
  const failures: string[] = [];
  const lines: string[] = [];
  const cost = { general: [] as number[], eliminated: [] as number[] };
  for (const n of SIZES) {
    const system = madeUp(n);
    const { problem, metals } = system;
    const solver = eliminatedSolver(problem, new Float64Array(n).fill(NaN), metals)!;
    const start = solveEquilibrium(problem, system.totals(0)).lnFree;
    const lnFree = new Float64Array(n);
    let worst = 0;
    lnFree.set(start);
    for (let point = 0; point < POINTS; point++) {
      const { method } = solver.solve(system.totals(point), lnFree);
      if (method !== "eliminated")
        failures.push(`components: ${n} components, point ${point} went to the general solver`);
      solveEquilibrium(problem, system.totals(point)).lnFree.forEach(
        (value, j) => (worst = Math.max(worst, Math.abs(value - lnFree[j]!))),
      );
    }
    if (!(worst <= AGREE)) failures.push(`components: ${n} components, both solvers differ by ${worst}`);
    const passes = {
      general: () => {
        let near = start;
        for (let point = 0; point < POINTS; point++)
          near = solveEquilibrium(problem, system.totals(point), { start: near }).lnFree;
      },
      eliminated: () => {
        lnFree.set(start);
        for (let point = 0; point < POINTS; point++) solver.solve(system.totals(point), lnFree);
      },
    };
    const timed = (["general", "eliminated"] as const).map((name): Timed => {
      const repeats = Math.max(1, Math.round(PASS_US / (POINTS * microsecondsPer(POINTS, 20, passes[name]))));
      return { name, run: () => microsecondsPer(POINTS, repeats, passes[name]) };
    });
    const times = interleaved(timed, ROUNDS);
    for (const name of ["general", "eliminated"] as const) cost[name].push(median([...times.get(name)!]));
    lines.push(
      `${String(n).padStart(2)} components, ${String(problem.nSpecies).padStart(3)} species: general ${cost.general.at(-1)!.toFixed(2).padStart(8)} us, eliminated ${cost.eliminated.at(-1)!.toFixed(2).padStart(8)} us per equilibrium; they differ by ${worst.toExponential(1)} at most in ln free`,
    );
  }
  for (const name of ["general", "eliminated"] as const)
    lines.push(
      `${name}: cost grows as components to the ${exponent(SIZES, cost[name]).toFixed(2)} over all sizes, to the ${exponent(SIZES.slice(-3), cost[name].slice(-3)).toFixed(2)} from 8 to 32`,
    );
  lines.push(
    `half of the components metals, each with each ligand; ${POINTS} points of a titration, each from the last answer; median of ${ROUNDS} interleaved rounds`,
  );
  return { lines, missing: [], failures, missed: [] };
}

/** Slope of ln y against ln x by least squares. */
function exponent(x: readonly number[], y: readonly number[]): number {
  const lnX = x.map(Math.log);
  const lnY = y.map(Math.log);
  const mean = (values: readonly number[]): number => values.reduce((a, b) => a + b, 0) / values.length;
  const [mx, my] = [mean(lnX), mean(lnY)];
  let above = 0;
  let below = 0;
  lnX.forEach((value, i) => {
    above += (value - mx) * (lnY[i]! - my);
    below += (value - mx) ** 2;
  });
  return above / below;
}
