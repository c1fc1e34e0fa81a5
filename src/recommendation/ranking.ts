import type { Knowledge } from "../constants/knowledge.ts";
import type { RuleRunner } from "../inference/index.ts";
import { roughCost, seenWith, type EvaluatedMethod } from "../methods/methods.ts";
import { bearsRicherMatrix } from "../methods/tolerance.ts";
import { optimised } from "../methods/optimise.ts";
import type { MethodMode, StagePlan, Task } from "../methods/types.ts";
import type { MethodUnderJudgement } from "./under-judgement.ts";
import { judge, rank, type JudgedMethod } from "./judge.ts";

/** How many methods the rules look at; the rest are behind on numbers alone. */
const JUDGED = 24;
/** How many of those get a working range before they are judged. */
const RANGED = 10;
/** How many methods an answer shows. */
const SHOWN = 8;

/** What an answer shows, best first, and everything that was judged, in order. */
export interface Ranking {
  readonly shown: readonly JudgedMethod[];
  readonly judged: readonly JudgedMethod[];
}

/** The methods worth judging, judged; the first of them with their working ranges. */
export async function judgedMethods(
  task: Task,
  methods: readonly EvaluatedMethod[],
  knowledge: Knowledge,
  rules: RuleRunner,
): Promise<JudgedMethod[]> {
  const under = shortlist(task, methods, knowledge).map((method, i) =>
    i < RANGED
      ? ranged(task, method, knowledge)
      : { method, ranges: method.stages.map(() => null), bearsRicherMatrix: null },
  );
  const judged: JudgedMethod[] = [];
  for (const candidate of under) judged.push(await judge(task, candidate, knowledge, rules));
  return judged;
}

/**
 * Puts judged methods in order and picks those to show.
 * @param withRange judges a method again with its working ranges, for those that were judged without
 */
export async function ranking(
  methods: readonly JudgedMethod[],
  withRange: (method: EvaluatedMethod) => Promise<JudgedMethod>,
): Promise<Ranking> {
  const judged = [...methods].sort(rank);
  const feasible = distinct(judged.filter((j) => j.excludedBy.length === 0)).slice(0, SHOWN);
  const shown: JudgedMethod[] = [];
  for (const j of feasible) shown.push(j.ranges.every((r) => r === null) ? await withRange(j.method) : j);
  return { shown: shown.sort(rank), judged };
}

/** The methods worth judging: the best by their numbers, and the best of every mode and dye, so that rivals are seen. */
function shortlist(task: Task, methods: readonly EvaluatedMethod[], knowledge: Knowledge): EvaluatedMethod[] {
  const cost = new Map(
    methods.map((m) => [
      m,
      m.stages.reduce((s, stage) => s + roughCost(task, stage, knowledge), 0) / m.stages.length +
        6 * (m.stages.length - 1),
    ]),
  );
  const sorted = [...methods].sort((a, b) => cost.get(a)! - cost.get(b)! || a.id.localeCompare(b.id));
  const perFamily = new Map<string, number>();
  const family = (m: EvaluatedMethod): string =>
    `${m.mode} ${m.stages.map((s) => `${s.plan.detour?.id ?? ""} ${seenWith(s.plan)}`).join("+")}`;
  const diverse = sorted.filter((m) => {
    const n = perFamily.get(family(m)) ?? 0;
    perFamily.set(family(m), n + 1);
    return n < 2;
  });
  return diverse.slice(0, JUDGED);
}

/** A method at its best conditions, with the working range of every titration and whether it bears a richer matrix. */
export function ranged(task: Task, method: EvaluatedMethod, knowledge: Knowledge): MethodUnderJudgement {
  const best = optimised(task, method, knowledge);
  return { ...best, bearsRicherMatrix: bearsRicherMatrix(task, best.method, knowledge) };
}

/**
 * What makes two methods the same one to an analyst: mode, and titration by titration the way round, titrant, back titrant, dye or electrode,
 * masking agents and what is separated. They may differ in buffer, amounts or a shade of pH.
 */
export function kindOf(method: {
  readonly mode: MethodMode;
  readonly stages: readonly { readonly plan: StagePlan }[];
}): string {
  return `${method.mode} ${method.stages
    .map(
      (s) =>
        `${s.plan.detour?.id ?? ""} ${s.plan.titrant.id} ${s.plan.backTitrant?.id ?? ""} ${seenWith(s.plan)} ${s.plan.masking
          .map((m) => m.agent)
          .sort()
          .join()} ${s.plan.removed.join()}`,
    )
    .join("; ")}`;
}

/** One method of a kind. */
function distinct(judged: readonly JudgedMethod[]): JudgedMethod[] {
  const seen = new Set<string>();
  return judged.filter(({ method }) => {
    const key = kindOf(method);
    if (seen.has(key)) return false;
    seen.add(key);
    return true;
  });
}
