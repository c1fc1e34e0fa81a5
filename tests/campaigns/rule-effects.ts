import type { Knowledge } from "../../src/constants/knowledge.ts";
import type { RuleRunner } from "../../src/inference/index.ts";
import type { EvaluatedMethod } from "../../src/methods/methods.ts";
import { searchMethods } from "../../src/methods/search.ts";
import type { Task } from "../../src/methods/types.ts";
import { readBrief } from "../../src/recommendation/brief.ts";
import { judge, type JudgedMethod, weighed } from "../../src/recommendation/judge.ts";
import { judgedMethods, ranged, type Ranking, ranking } from "../../src/recommendation/ranking.ts";

/** How many rejected methods an answer shows. */
const REJECTED_SHOWN = 16;

/** What a rule did for a brief, each 0 or 1; from "first" on: what changes when the rule is taken away. */
export const EFFECTS = ["fired", "shown", "first", "order", "rejected", "reasons", "verdict"] as const;
export type EffectCounts = Readonly<Record<(typeof EFFECTS)[number], number>>;
/** By rule id; rules that did not fire are left out. */
export type RuleEffects = Readonly<Record<string, EffectCounts>>;

/** Answers a brief once, then ranks its methods again without each rule that fired; nothing is searched or calculated twice. */
export async function ruleEffects(brief: unknown, knowledge: Knowledge, rules: RuleRunner): Promise<RuleEffects> {
  const task = readBrief(brief, knowledge);
  const judged = await judgedMethods(task, searchMethods(task, knowledge).methods, knowledge, rules);
  const again = new Map<EvaluatedMethod, JudgedMethod>();
  const withRange = async (method: EvaluatedMethod): Promise<JudgedMethod> => {
    const known = again.get(method) ?? (await judge(task, ranged(task, method, knowledge), knowledge, rules));
    again.set(method, known);
    return known;
  };
  const base = await ranking(judged, withRange);
  const rulesOf = (methods: Iterable<JudgedMethod>): Set<string> =>
    new Set([...methods].flatMap(({ verdicts }) => verdicts.map(({ finding }) => finding.rule)));
  const shown = rulesOf(base.shown);
  const fired = rulesOf([...judged, ...base.shown]);
  const out: Record<string, EffectCounts> = {};
  for (const rule of fired) {
    const left = await ranking(
      judged.map((j) => without(task, j, rule)),
      async (method) => without(task, await withRange(method), rule),
    );
    out[rule] = { fired: 1, shown: Number(shown.has(rule)), ...differences(base, left) };
  }
  return out;
}

const without = (task: Task, judged: JudgedMethod, rule: string): JudgedMethod =>
  judged.verdicts.some(({ finding }) => finding.rule === rule)
    ? weighed(
        task,
        judged,
        judged.facts,
        judged.verdicts.filter(({ finding }) => finding.rule !== rule),
      )
    : judged;

function differences(a: Ranking, b: Ranking): Omit<EffectCounts, "fired" | "shown"> {
  const differ = (pick: (ranking: Ranking) => unknown): number =>
    Number(JSON.stringify(pick(a)) !== JSON.stringify(pick(b)));
  return {
    first: differ(({ shown }) => shown[0]?.method.id),
    order: differ(({ shown }) => shown.map(({ method }) => method.id)),
    rejected: differ(({ judged }) =>
      judged
        .filter(({ excludedBy }) => excludedBy.length > 0)
        .map(({ method }) => method.id)
        .sort(),
    ),
    // The reasons that an answer gives for what it rejected.
    reasons: differ(({ judged }) =>
      judged
        .filter(({ excludedBy }) => excludedBy.length > 0)
        .slice(0, REJECTED_SHOWN)
        .map(({ method, excludedBy }) => [method.id, ...excludedBy.map(({ finding }) => finding.rule)]),
    ),
    verdict: differ(({ shown }) => shown[0] && [shown[0].meets, shown[0].reservations.length > 0]),
  };
}
