import { eliminatedSolver } from "../../src/chemistry/solve-eliminated.ts";
import { solveEquilibrium } from "../../src/chemistry/solve-equilibrium.ts";
import { median } from "../../src/numerics/quantile.ts";
import { findBaselines, type Timing } from "./baselines.ts";
import { neutralSystem } from "./neutral-system.ts";
import { atBar, type Bench, type BenchReport } from "./bench.ts";

const ROUNDS = 9; // medians of these, all programs in each round one after another
const CHECK = "-5301.684240"; // sum of ln free Zn over the 200 points, which any program that solves the system must print

const ELIMINATED = "metals eliminated";
const LEAST_RATIO: Readonly<Record<string, number>> = { "C++ Newton": 5, "SciPy root": 80 };

/** Microseconds per equilibrium on the neutral system: both solvers of the program beside both baselines, interleaved. */
export const equilibriumBench: Bench = { name: "equilibrium", run: measure };

async function measure(): Promise<BenchReport> {
  const baselines = await findBaselines();
  const programs = [...ours(), ...baselines.available];
  const timings = new Map<string, Timing[]>(programs.map(({ name }) => [name, []]));
  try {
    for (let round = 0; round < ROUNDS; round++)
      for (const { name, time } of programs) timings.get(name)!.push(await time());
  } finally {
    await baselines.dispose();
  }
  const middle = new Map(
    [...timings].map(([name, list]) => [name, median(list.map(({ microseconds }) => microseconds))]),
  );
  const failures: string[] = [];
  const missed: string[] = [];
  const lines = [...timings].map(([name, list]) => {
    const checks = [...new Set(list.map(({ check }) => check))];
    if (checks.some((check) => check !== CHECK))
      failures.push(`${name}: check value ${checks.join(", ")}, expected ${CHECK}`);
    const values = list.map(({ microseconds }) => microseconds);
    return `${name.padEnd(22)} ${middle.get(name)!.toFixed(3).padStart(9)} us per equilibrium (${Math.min(...values).toFixed(3)} to ${Math.max(...values).toFixed(3)}), check ${checks.join(", ")}`;
  });
  for (const { name: own } of ours())
    for (const { name } of baselines.available) {
      const ratios = timings
        .get(own)!
        .map(({ microseconds }, round) => timings.get(name)![round]!.microseconds / microseconds);
      const ratio = median(ratios);
      const line = `${own}: ${ratio.toFixed(2)} times as fast as ${name}, median of the ratios within a round`;
      const least = LEAST_RATIO[name];
      lines.push(
        own === ELIMINATED && least !== undefined ? atBar(line, ratio >= least, `at least ${least}`, missed) : line,
      );
    }
  lines.push(`median of ${ROUNDS} interleaved rounds; 200 points, each from the last answer`);
  return { lines, missing: baselines.missing, failures, missed };
}

/** Our two solvers as programs to time: the general one with its full result, the eliminated one with free concentrations. */
function ours(): { readonly name: string; readonly time: () => Promise<Timing> }[] {
  const system = neutralSystem();
  const { problem } = system;
  const eliminated = eliminatedSolver(problem, new Float64Array(problem.nComponents).fill(NaN), system.metals)!;
  const lnFree = new Float64Array(problem.nComponents);
  const timed = (repeats: number, solve: (totals: Float64Array) => number): (() => Promise<Timing>) => {
    return () => {
      const pass = (count: number): number => {
        let check = 0;
        for (let r = 0; r < count; r++) {
          system.start(lnFree);
          for (let point = 0; point < system.points; point++) check += solve(system.totalsAt(point));
        }
        return check / count;
      };
      pass(2); // warm caches after the other program
      const started = performance.now();
      const check = pass(repeats);
      const microseconds = ((performance.now() - started) * 1000) / (repeats * system.points);
      return Promise.resolve({ microseconds, check: check.toFixed(6) });
    };
  };
  return [
    {
      name: "general solver",
      time: timed(20, (totals) => {
        const result = solveEquilibrium(problem, totals, { start: lnFree });
        lnFree.set(result.lnFree);
        return result.status === "converged" ? lnFree[0]! : NaN;
      }),
    },
    {
      name: ELIMINATED,
      time: timed(100, (totals) => (eliminated.solve(totals, lnFree).method === "eliminated" ? lnFree[0]! : NaN)),
    },
  ];
}
