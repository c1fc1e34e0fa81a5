import { setFlagsFromString } from "node:v8";
import { runInNewContext } from "node:vm";
import { openEngine } from "../../src/main.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { recommend } from "../../src/recommendation/recommend.ts";
import { practiceCases } from "../practice/cases.ts";
import { atBar, type Bench, type BenchOptions, type BenchReport } from "./bench.ts";

const COUNT = 172; // four rounds of the acceptance briefs: some minutes; the figure wanted is that of 10,000
const SAMPLES = 20;
const GROWTH_ALLOWED = 0.05; // share of the heap by which the second half of the run may grow on its line of best fit

/** Heap in use after a collection, over many recommendations in one process: it must not rise once every cache has met every brief. */
export const memoryBench: Bench = { name: "memory", run: measure };

interface Sample {
  readonly done: number;
  readonly megabytes: number; // heap and array buffers, after a collection
}

async function measure({ count = COUNT, brief }: BenchOptions): Promise<BenchReport> {
  const collect = garbageCollector();
  const engine = await openEngine();
  const cases = practiceCases().filter(({ id }) => brief === undefined || brief.split(",").includes(id));
  if (cases.length === 0) throw new Error(`no acceptance brief is called ${brief ?? ""}`);
  const samples: Sample[] = [];
  const sample = (done: number): void => {
    collect();
    const { heapUsed, arrayBuffers } = process.memoryUsage();
    const megabytes = (heapUsed + arrayBuffers) / 2 ** 20;
    samples.push({ done, megabytes });
    process.stderr.write(`${done} of ${count}: ${megabytes.toFixed(1)} MB\n`);
  };
  const every = Math.max(1, Math.floor(count / SAMPLES));
  const started = performance.now();
  sample(0);
  for (let k = 0; k < count; k++) {
    const { brief: wanted } = cases[k % cases.length]!;
    await recommend(readBrief(wanted, engine.knowledge), engine.knowledge, engine.rules);
    if ((k + 1) % every === 0) sample(k + 1);
  }
  const seconds = (performance.now() - started) / 1000;
  // The first rounds fill the caches, so the slope is that of the second half.
  const late = samples.filter(({ done }) => done >= count / 2);
  const slope = slopeOf(late);
  const level = late.reduce((sum, { megabytes }) => sum + megabytes, 0) / late.length;
  const growth = (slope * count) / 2 / level;
  const missed: string[] = [];
  const lines = [
    `${count} recommendations over ${cases.length} briefs in ${seconds.toFixed(0)} s; heap in use after a collection, MB:`,
    samples.map(({ done, megabytes }) => `${done}: ${megabytes.toFixed(1)}`).join("  "),
    atBar(
      `second half: ${level.toFixed(1)} MB on average, slope ${(1024 * slope).toFixed(3)} kB a recommendation, growth ${(100 * growth).toFixed(2)} % of the heap`,
      growth <= GROWTH_ALLOWED,
      `at most ${100 * GROWTH_ALLOWED} %`,
      missed,
    ),
    `resident set ${(process.memoryUsage().rss / 2 ** 20).toFixed(0)} MB at the end`,
  ];
  if (count < 10_000)
    lines.push(`10,000 take some ${((seconds / count) * (10_000 / 3600)).toFixed(1)} h here: -- memory --count 10000`);
  return { lines, missing: [], failures: [], missed };
}

/** The collector of this process, without a flag on its command line. */
function garbageCollector(): () => void {
  setFlagsFromString("--expose-gc");
  return runInNewContext("gc") as () => void;
}

/** Least squares, MB per recommendation. */
function slopeOf(samples: readonly Sample[]): number {
  const n = samples.length;
  const mean = (pick: (s: Sample) => number): number => samples.reduce((sum, s) => sum + pick(s), 0) / n;
  const x = mean((s) => s.done);
  const y = mean((s) => s.megabytes);
  let above = 0;
  let below = 0;
  for (const { done, megabytes } of samples) {
    above += (done - x) * (megabytes - y);
    below += (done - x) ** 2;
  }
  return below === 0 ? 0 : above / below;
}
