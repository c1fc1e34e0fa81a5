import type { RuleRunner } from "../../src/inference/index.ts";
import { openEngine } from "../../src/main.ts";
import { median } from "../../src/numerics/quantile.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { rankedMethods, recommend } from "../../src/recommendation/recommend.ts";
import { practiceCases } from "../practice/cases.ts";
import { findBaselines, type Timing } from "./baselines.ts";
import { atBar, type Bench, type BenchReport } from "./bench.ts";

const ROUNDS = 7; // medians of these; in each round the baselines are timed right before the recommendation

const MOST_EQUILIBRIA = 40_000; // of the C++ baseline in the time of one recommendation
const MOST_IN_RULES = 0.4;
const MOST_JUDGED = 24;

/** Time of one recommendation on the acceptance brief that takes longest, and how much of it goes to the rule engine. */
export const recommendBench: Bench = { name: "recommend", run: measure };

/** One recommendation: milliseconds in all and inside the rules, and the answer as text, which must not change. */
interface Run {
  readonly milliseconds: number;
  readonly inRules: number;
  readonly questions: number;
  readonly answer: string;
}

async function measure(): Promise<BenchReport> {
  const engine = await openEngine();
  const baselines = await findBaselines();
  const run = async (brief: unknown): Promise<Run> => {
    const watched = watchedRules(engine.rules);
    const started = performance.now();
    const document = await recommend(readBrief(brief, engine.knowledge), engine.knowledge, watched.rules);
    const milliseconds = performance.now() - started;
    return { milliseconds, ...watched.spent(), answer: JSON.stringify(document) };
  };
  const once: { readonly id: string; readonly brief: unknown; readonly milliseconds: number; readonly cpu: number }[] =
    [];
  for (const { id, brief } of practiceCases()) {
    const before = process.cpuUsage().user;
    const { milliseconds } = await run(brief);
    once.push({ id, brief, milliseconds, cpu: process.cpuUsage().user - before });
  }
  once.sort((a, b) => b.cpu - a.cpu); // wall time would pick whatever ran while the machine was busy
  const heaviest = once[0]!;

  const runs: Run[] = [];
  const equilibria = new Map<string, Timing[]>(baselines.available.map(({ name }) => [name, []]));
  try {
    for (let round = 0; round < ROUNDS; round++) {
      for (const { name, time } of baselines.available) equilibria.get(name)!.push(await time());
      runs.push(await run(heaviest.brief));
    }
  } finally {
    await baselines.dispose();
  }
  const middle = (pick: (r: Run) => number): number => median(runs.map(pick));
  const total = runs.map((r) => r.milliseconds);
  const task = readBrief(heaviest.brief, engine.knowledge);
  const { search, judged } = await rankedMethods(task, engine.knowledge, engine.rules);
  const titrations = new Set(search.methods.flatMap(({ stages }) => stages.map(({ evaluation }) => evaluation))).size;
  const share = middle((r) => r.inRules / r.milliseconds);
  const missed: string[] = [];
  const lines = [
    `once each, ${once.length} briefs: median ${median(once.map((o) => o.milliseconds)).toFixed(0)} ms, heaviest ${once
      .slice(0, 3)
      .map((o) => `${o.id} ${o.milliseconds.toFixed(0)} ms`)
      .join(", ")}`,
    `${heaviest.id}: ${middle((r) => r.milliseconds).toFixed(0)} ms a recommendation (${Math.min(...total).toFixed(0)} to ${Math.max(...total).toFixed(0)}), median of ${ROUNDS} rounds`,
    `the search hands ${search.methods.length} methods of ${titrations} evaluated titrations to the judgement`,
    atBar(`judged by the rules: ${judged.length}`, judged.length <= MOST_JUDGED, `at most ${MOST_JUDGED}`, missed),
    atBar(
      `in the rule engine: ${(100 * share).toFixed(1)} % of the time (${middle((r) => r.inRules).toFixed(0)} ms for ${runs[0]!.questions} sets of facts)`,
      share <= MOST_IN_RULES,
      `at most ${100 * MOST_IN_RULES} %`,
      missed,
    ),
  ];
  for (const [name, timings] of equilibria) {
    const ratio = median(timings.map(({ microseconds }, round) => (1000 * runs[round]!.milliseconds) / microseconds));
    const line = `as long as ${ratio.toFixed(0)} equilibria of the neutral system by ${name} (${median(timings.map((t) => t.microseconds)).toFixed(3)} us each in the same rounds)`;
    lines.push(
      name === "C++ Newton" ? atBar(line, ratio <= MOST_EQUILIBRIA, `at most ${MOST_EQUILIBRIA}`, missed) : line,
    );
  }
  const answers = new Set(runs.map((r) => r.answer)).size;
  const failures = answers === 1 ? [] : [`${heaviest.id}: ${answers} different answers in ${ROUNDS} rounds`];
  return { lines, missing: baselines.missing, failures, missed };
}

/** The same rules with a stop watch around them. */
function watchedRules(rules: RuleRunner): {
  readonly rules: RuleRunner;
  readonly spent: () => Pick<Run, "inRules" | "questions">;
} {
  let inRules = 0;
  let questions = 0;
  const timed = async <T>(count: number, work: Promise<T>, started: number): Promise<T> => {
    const answer = await work;
    inRules += performance.now() - started;
    questions += count;
    return answer;
  };
  return {
    rules: {
      run: (scope, facts) => {
        const started = performance.now();
        return timed(1, rules.run(scope, facts), started);
      },
      runAll: (asked) => {
        const started = performance.now();
        return timed(asked.length, rules.runAll(asked), started);
      },
      nearMisses: (scope, facts) => rules.nearMisses(scope, facts),
    },
    spent: () => ({ inRules, questions }),
  };
}
