import type { Knowledge } from "../constants/knowledge.ts";
import type { RuleRunner } from "../inference/index.ts";
import { seenWith } from "../methods/methods.ts";
import type { StagePlan, Task } from "../methods/types.ts";
import type { Standing } from "./contract-turning-points.ts";
import { verdictOf } from "./document.ts";
import type { JudgedMethod } from "./judge.ts";
import { kindOf } from "./ranking.ts";
import { rankedMethods } from "./recommend.ts";
import { reagentsOf } from "./reagents.ts";
import { MODE_WORDS } from "./text-words.ts";
import { shownIon } from "./spelling.ts";

/** What an answer comes to, and the reagents that its first method takes. */
export interface StandingAnswer extends Standing {
  readonly reagents: readonly string[];
}

/** Answers a task as far as its verdict and its first method: the same search, rules and ranking as `recommend`, without the document. */
export async function standingOf(task: Task, knowledge: Knowledge, rules: RuleRunner): Promise<StandingAnswer> {
  const { shown } = await rankedMethods(task, knowledge, rules);
  const first = shown[0];
  if (!first) return { verdict: "not-fit", method: null, reagents: [] };
  const plans = first.method.stages.map((s) => s.plan);
  return {
    verdict: verdictOf(first),
    method: { id: first.method.id, kind: kindOf(first.method), words: methodWords(task, first, knowledge) },
    reagents: [...new Set(plans.flatMap(bottlesOf))],
  };
}

/** Everything a titration takes from a bottle that a brief may forbid. */
const bottlesOf = (plan: StagePlan): string[] => [
  ...reagentsOf(plan),
  ...(plan.chelate ? [`${plan.chelate.metal.replace(/\d?\+$/, "")}-${plan.chelate.ligand}`] : []),
  ...(plan.detour ? [plan.detour.reagent.id] : []),
  ...(plan.detour?.precipitant ? [plan.detour.precipitant.id] : []),
  ...(plan.release ? [plan.release.agent] : []),
  ...(plan.demasked ? [plan.demasked.by] : []),
];

/** A method in a line: mode, titrant, how it is seen, what is masked and separated. */
function methodWords(task: Task, { method }: JudgedMethod, knowledge: Knowledge): string {
  const ions = (list: readonly string[]): string => list.map((id) => shownIon(task, id, knowledge)).join(", ");
  const stages = method.stages.map(({ plan }) => {
    const masks = [...new Set(plan.masking.map((m) => m.agent))];
    const back = plan.backTitrant ? `, back with ${ions([plan.backTitrant.id])}` : "";
    return [
      `${plan.titrant.id}${back}, ${seenWith(plan)}, pH ${plan.pH}`,
      ...(masks.length > 0 ? [`masked with ${masks.join(", ")}`] : []),
      ...(plan.removed.length > 0 ? [`after separation of ${ions(plan.removed)}`] : []),
    ].join(", ");
  });
  return `${MODE_WORDS[method.mode]}: ${stages.join("; then ")}`;
}
