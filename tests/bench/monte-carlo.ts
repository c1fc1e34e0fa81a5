import { askPool } from "../../src/engine/robustness-service.ts";
import { createWorkerPool, type WorkerPool } from "../../src/engine/worker-pool.ts";
import { type Engine, openEngine } from "../../src/main.ts";
import { median } from "../../src/numerics/quantile.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { recommend } from "../../src/recommendation/recommend.ts";
import { robustnessWork, workOutDraws, type RobustnessWork } from "../../src/recommendation/robustness.ts";
import type { RobustnessAsked } from "../../src/recommendation/robustness-document.ts";
import { practiceCases } from "../practice/cases.ts";
import { findBaselines, type Baseline, type Timing } from "./baselines.ts";
import { atBar, type Bench, type BenchOptions, type BenchReport } from "./bench.ts";

const ROUNDS = 7;
const DRAWS = 1000;
/** As long as so many equilibria of the C++ baseline, at most. */
const MOST_EQUILIBRIA = 20_000;
const LEAST_SPEED_UP = 1.6;
/** Draws by which one worker and two are compared: some seconds, so that the last chunk does not decide. */
const DRAWS_OF_WORKERS = 20_000;
/** As many at a time as a server asks for. */
const CHUNK = 250;
/** Acceptance briefs of several kinds: a dye by constants, a dye by its table, a mask, a back titration, two titrations in turn. */
const BRIEFS = [
  "plain-calcium-chloride",
  "plain-zinc-sulfate",
  "milk-calcium-plus-magnesium",
  "plain-aluminium-chloride",
  "bismuth-and-lead",
] as const;

/** Time of 1,000 draws of a method beside equilibria of the baselines, and of two workers beside one. */
export const monteCarloBench: Bench = { name: "monte-carlo", run: measure };

async function measure({ brief }: BenchOptions): Promise<BenchReport> {
  const engine = await openEngine();
  const baselines = await findBaselines();
  // The bar is one of the compiled baseline; the script would take most of the time of this bench.
  const against = baselines.available.filter(({ name }) => name.startsWith("C++"));
  const wanted: readonly string[] = brief?.split(",") ?? BRIEFS;
  const lines: string[] = [];
  const missed: string[] = [];
  const failures: string[] = [];
  try {
    for (const { id, brief: sent } of practiceCases().filter((c) => wanted.includes(c.id))) {
      const asked = await askedOf(sent, DRAWS, engine);
      const { rounds, equilibria, met } = await drawRounds(asked.work, against, engine);
      if (new Set(met).size !== 1) failures.push(`${id}: the same seed gave other figures`);
      const one = `${id}: ${median(rounds).toFixed(1)} ms for ${DRAWS} draws, median of ${ROUNDS}`;
      const beside = [...equilibria].map(([name, timings]) => {
        const ratio = median(timings.map(({ microseconds }, r) => (1000 * rounds[r]!) / microseconds));
        const figure = `${ratio.toFixed(0)} equilibria of ${name}`;
        return atBar(`${id}: ${figure}`, ratio <= MOST_EQUILIBRIA, `at most ${MOST_EQUILIBRIA}`, missed);
      });
      lines.push(one, ...beside.map((text) => `  ${text}`));
    }
    lines.push(await workers(engine, against[0] ?? null, missed));
  } finally {
    await baselines.dispose();
  }
  return { lines, missing: baselines.missing, failures, missed };
}

async function askedOf(brief: unknown, draws: number, { knowledge, rules }: Engine): Promise<RobustnessAsked> {
  const document = await recommend(readBrief(brief, knowledge), knowledge, rules);
  return { document, ...robustnessWork(document, undefined, { draws, seed: 1 }, knowledge) };
}

/** Each round times the baselines, then the draws right after; one round before is not counted. */
async function drawRounds(
  work: RobustnessWork,
  available: readonly { readonly name: string; readonly time: () => Promise<Timing> }[],
  { knowledge }: Engine,
): Promise<{ readonly rounds: number[]; readonly equilibria: Map<string, Timing[]>; readonly met: string[] }> {
  const equilibria = new Map<string, Timing[]>(available.map(({ name }) => [name, []]));
  const rounds: number[] = [];
  const met: string[] = [];
  const draw = (): number => {
    const started = performance.now();
    const { draws } = workOutDraws({ work, from: 0, count: DRAWS }, knowledge);
    const milliseconds = performance.now() - started;
    met.push(draws.expandedFraction.reduce((s, u) => s + (Number.isFinite(u) ? u : 0), 0).toPrecision(9));
    return milliseconds;
  };
  draw();
  for (let round = 0; round < ROUNDS; round++) {
    for (const { name, time } of available) equilibria.get(name)!.push(await time());
    rounds.push(draw());
  }
  return { rounds, equilibria, met };
}

/** Two workers beside one, round after round, both warm: the draws alone, for summing them up is one thread's work. */
async function workers(engine: Engine, control: Baseline | null, missed: string[]): Promise<string> {
  const { knowledge } = engine;
  const [first] = practiceCases().filter((c) => c.id === BRIEFS[0]);
  const { work } = await askedOf(first!.brief, DRAWS_OF_WORKERS, engine);
  const pools: WorkerPool[] = [1, 2].map((n) => createWorkerPool({ data: { hash: knowledge.hash }, workers: n }));
  const time = async (pool: WorkerPool, n: number): Promise<number> => {
    const { draws } = askPool(pool, n);
    const started = performance.now();
    let next = 0;
    const hand = async (): Promise<void> => {
      while (next < DRAWS_OF_WORKERS) {
        const from = next;
        next += CHUNK;
        await draws({ work, from, count: CHUNK });
      }
    };
    await Promise.all(Array.from({ length: n }, hand));
    return performance.now() - started;
  };
  try {
    const ratios: number[] = [];
    const machine: number[] = [];
    for (let round = -1; round < ROUNDS; round++) {
      const one = await time(pools[0]!, 1);
      const two = await time(pools[1]!, 2);
      if (round >= 0) ratios.push(one / two);
      if (round >= 0 && control) machine.push(await speedUp(control));
    }
    const ratio = median(ratios);
    const beside = machine.length > 0 ? `, two runs of the baseline ${median(machine).toFixed(2)} times` : "";
    const figure = `two workers ${ratio.toFixed(2)} times as fast as one over ${DRAWS_OF_WORKERS} draws${beside}`;
    return atBar(figure, ratio >= LEAST_SPEED_UP, `at least ${LEAST_SPEED_UP}`, missed);
  } finally {
    await Promise.all(pools.map((pool) => pool.close()));
  }
}

/** How much faster two runs of a baseline at once are than one after the other: what the machine has to give at present. */
async function speedUp({ time }: Baseline): Promise<number> {
  const alone = (await time()).microseconds;
  const together = await Promise.all([time(), time()]);
  return (2 * alone) / (together[0].microseconds / 2 + together[1].microseconds / 2);
}
