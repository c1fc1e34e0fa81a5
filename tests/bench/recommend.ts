import type { RuleRunner } from "../../src/inference/index.ts";
import { openEngine } from "../../src/main.ts";
import { median } from "../../src/numerics/quantile.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { recommend } from "../../src/recommendation/recommend.ts";
import { practiceCases } from "../practice/cases.ts";
import { findBaselines, type Timing } from "./baselines.ts";
import type { Bench, BenchReport } from "./bench.ts";

const ROUNDS = 5; // medians of these; in each round the baselines are timed right before the recommendation

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
  const once: { readonly id: string; readonly brief: unknown; readonly milliseconds: number }[] = [];
  for (const { id, brief } of practiceCases()) once.push({ id, brief, milliseconds: (await run(brief)).milliseconds });
  once.sort((a, b) => b.milliseconds - a.milliseconds);
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
  const lines = [
    `once each, ${once.length} briefs: median ${median(once.map((o) => o.milliseconds)).toFixed(0)} ms, heaviest ${once
      .slice(0, 3)
      .map((o) => `${o.id} ${o.milliseconds.toFixed(0)} ms`)
      .join(", ")}`,
    `${heaviest.id}: ${middle((r) => r.milliseconds).toFixed(0)} ms a recommendation (${Math.min(...total).toFixed(0)} to ${Math.max(...total).toFixed(0)}), median of ${ROUNDS} rounds`,
    `of that in the rule engine: ${(100 * middle((r) => r.inRules / r.milliseconds)).toFixed(1)} % (${middle((r) => r.inRules).toFixed(0)} ms for ${runs[0]!.questions} sets of facts)`,
  ];
  for (const [name, timings] of equilibria) {
    const ratio = median(timings.map(({ microseconds }, round) => (1000 * runs[round]!.milliseconds) / microseconds));
    lines.push(
      `${name}: ${median(timings.map((t) => t.microseconds)).toFixed(3)} us per equilibrium of the neutral system in the same rounds; the recommendation takes as long as ${ratio.toExponential(2)} of them`,
    );
  }
  const answers = new Set(runs.map((r) => r.answer)).size;
  const failures = answers === 1 ? [] : [`${heaviest.id}: ${answers} different answers in ${ROUNDS} rounds`];
  return { lines, missing: baselines.missing, failures };
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
