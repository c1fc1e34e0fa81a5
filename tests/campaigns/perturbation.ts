import type { Knowledge } from "../../src/constants/knowledge.ts";
import { type Engine, openEngine } from "../../src/main.ts";
import { searchMethods } from "../../src/methods/search.ts";
import type { Task } from "../../src/methods/types.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { judge, type JudgedMethod } from "../../src/recommendation/judge.ts";
import { judgedMethods, ranged, ranking } from "../../src/recommendation/ranking.ts";
import type { Campaign, CampaignOptions, CampaignReport } from "./campaign.ts";
import { perturbedKnowledge } from "./perturbed-knowledge.ts";
import { acceptanceCases, workThrough } from "./work-list.ts";

/** How often the first-ranked method of the plain acceptance briefs changes when every constant moves by its uncertainty. */
export const perturbationCampaign: Campaign = {
  name: "perturbation",
  about: "every constant moved by its own uncertainty, over the plain acceptance briefs",
  run: (options) => {
    const plain = acceptanceCases(options).filter(({ difficulty }) => difficulty === "plain");
    const { from, count, share } = options;
    const briefs = plain
      .slice(from, count === null ? undefined : from + count)
      .filter((_, i) => i % share.parts === share.part - 1)
      .map(({ id, brief }) => ({ id, brief }));
    return runPerturbation(briefs, options);
  },
};

/** What stands first: what a change of it is counted by. */
interface First {
  readonly mode: string;
  readonly indicator: string;
  readonly meets: boolean;
}

interface Shaken {
  readonly base: First;
  readonly draws: number;
  readonly modeChanged: number;
  readonly indicatorChanged: number; // with or without the mode
  readonly nowMisses: number; // meets the requirement no more
  readonly instead: Readonly<Record<string, number>>; // what came first where something else did
}

/** Draws `options.draws` sets of constants for each brief; figures per brief and in all. */
export async function runPerturbation(
  briefs: readonly { readonly id: string; readonly brief: unknown }[],
  options: Pick<CampaignOptions, "seed" | "draws" | "out" | "print">,
): Promise<CampaignReport> {
  const engine = await openEngine();
  const items = briefs.map(({ id }, position) => ({
    position,
    id: `${id} seed ${options.seed} draws ${options.draws}`,
  }));
  const done = await workThrough<Shaken>(
    items,
    options,
    async (index) => shake(readBrief(briefs[index]!.brief, engine.knowledge), engine, options),
    (error) => {
      throw error;
    },
  );
  const changed = (pick: (shaken: Shaken) => number): number => done.reduce((sum, { result }) => sum + pick(result), 0);
  const draws = changed((s) => s.draws);
  const figures = {
    briefs: done.length,
    draws,
    modeChanged: changed((s) => s.modeChanged),
    indicatorChanged: changed((s) => s.indicatorChanged),
    nowMisses: changed((s) => s.nowMisses),
  };
  return {
    figures,
    holds: draws > 0,
    lines: table(done.map(({ id, result }) => ({ id: id.split(" ")[0]!, ...result }))),
  };
}

async function shake(
  task: Task,
  engine: Engine,
  { seed, draws }: Pick<CampaignOptions, "seed" | "draws">,
): Promise<Shaken> {
  const base = await firstOf(task, engine.knowledge, engine);
  const instead: Record<string, number> = {};
  let [modeChanged, indicatorChanged, nowMisses] = [0, 0, 0];
  for (let draw = 0; draw < draws; draw++) {
    const first = await firstOf(task, perturbedKnowledge(engine.knowledge, seed, draw), engine);
    modeChanged += Number(first.mode !== base.mode);
    indicatorChanged += Number(first.indicator !== base.indicator);
    nowMisses += Number(base.meets && !first.meets);
    const name = `${first.mode} ${first.indicator}`;
    if (first.mode !== base.mode || first.indicator !== base.indicator) instead[name] = (instead[name] ?? 0) + 1;
  }
  return { base, draws, modeChanged, indicatorChanged, nowMisses, instead };
}

/** The first-ranked method alone: what an answer adds to it costs time and changes nothing here. */
async function firstOf(task: Task, knowledge: Knowledge, { rules }: Engine): Promise<First> {
  const { methods } = searchMethods(task, knowledge);
  const { shown } = await ranking(await judgedMethods(task, methods, knowledge, rules), (method) =>
    judge(task, ranged(task, method, knowledge), knowledge, rules),
  );
  return shown[0] === undefined ? { mode: "none", indicator: "none", meets: false } : firstFrom(shown[0]);
}

const firstFrom = ({ method, meets }: JudgedMethod): First => ({
  mode: method.mode,
  indicator: method.stages.map(({ plan }) => plan.indicator?.id ?? plan.detection).join("+"),
  meets,
});

function table(rows: readonly (Shaken & { readonly id: string })[]): string[] {
  const width = Math.max(4, ...rows.map(({ id }) => id.length));
  const head = `${"case".padEnd(width)}  draws   mode  indicator  misses  first (what came instead)`;
  return [
    head,
    ...rows.map(({ id, base, draws, modeChanged, indicatorChanged, nowMisses, instead }) => {
      const others = Object.entries(instead)
        .sort(([, a], [, b]) => b - a)
        .map(([name, count]) => `${name} ${count}`)
        .join(", ");
      const counts = `${String(draws).padStart(5)}  ${String(modeChanged).padStart(5)}  ${String(indicatorChanged).padStart(9)}  ${String(nowMisses).padStart(6)}`;
      return `${id.padEnd(width)}  ${counts}  ${base.mode} ${base.indicator}${others === "" ? "" : ` (${others})`}`;
    }),
  ];
}
