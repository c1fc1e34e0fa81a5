import type { Knowledge, SeparationRecord } from "../constants/knowledge.ts";
import type { DevelopedStage } from "./develop.ts";
import { roughCost, seenWith, stageKey, type EvaluatedMethod, type MethodResult } from "./methods.ts";
import { parts, separationsOf } from "./separation.ts";
import type { Task } from "./types.ts";
import { stageBudget } from "./uncertainty.ts";

/** The titrations of one combination, one of each group. */
type Combination = readonly DevelopedStage[];

/** Combinations handed on to judgement. */
const COMBINATIONS_KEPT = 8;
/** How many of them are the i-th best of every group, so that different dyes and preparations are seen. */
const SIDE_BY_SIDE = 2;
/** Titrations of one group that are paired with each of the others. */
const PAIRED = 4;
/** Groups beyond this are not paired in every way. */
const PAIRED_GROUPS = 4;

// What the rules ask of a method as a whole, in their points: counted once, whatever the titrations share.
const SEPARATION_COST = 25;
const FURTHER_STEP_COST = 8;
const UNKNOWN_STEP_COST = 20;
const SECOND_DYE_COST = 4;

/** What one titration gives by itself. */
export const resultOf = (task: Task, stage: DevelopedStage, knowledge: Knowledge): MethodResult => ({
  determines: stage.plan.determines,
  biasFraction: stage.evaluation.biasFraction,
  budget: stageBudget(task, stage.evaluation, knowledge),
});

/**
 * Independent titrations of separate portions. A separation that parts the groups serves all of them (one in the precipitate, the
 * other in the filtrate), and a dye that serves all is one bottle: so combinations are chosen by what they cost together.
 * @param found everything worked out for each group
 * @param byGroup the most promising of each group, best first
 */
export function portions(
  task: Task,
  found: readonly (readonly DevelopedStage[])[],
  byGroup: readonly (readonly DevelopedStage[])[],
  knowledge: Knowledge,
): EvaluatedMethod[] {
  if (byGroup.some((stages) => stages.length === 0)) return [];
  const width = Math.min(SIDE_BY_SIDE, Math.max(...byGroup.map((s) => s.length)));
  const sideBySide = Array.from({ length: width }, (_, i) =>
    byGroup.map((list) => list[Math.min(i, list.length - 1)]!),
  );
  const together = (combination: Combination): number => costTogether(task, combination, knowledge);
  const others = [
    ...throughOneSeparation(task, found, knowledge),
    ...sameDye(byGroup),
    ...(byGroup.length > PAIRED_GROUPS ? [] : everyPairing(byGroup.map((list) => list.slice(0, PAIRED)))),
  ].sort((a, b) => together(a) - together(b));
  const methods = new Map<string, EvaluatedMethod>();
  for (const stages of [...sideBySide, ...others]) {
    if (methods.size >= COMBINATIONS_KEPT) break;
    const method = portionsMethod(task, stages, knowledge);
    if (!methods.has(method.id)) methods.set(method.id, method);
  }
  return [...methods.values()];
}

/** A method of independent titrations, one portion each. */
export const portionsMethod = (task: Task, stages: Combination, knowledge: Knowledge): EvaluatedMethod => ({
  id: `portions: ${stages.map(stageKey).join(" ; ")}`,
  mode: "portions",
  stages,
  results: stages.map((s) => resultOf(task, s, knowledge)),
  portions: stages.length,
});

/** What a combination costs, smaller is better: each titration by itself, and once what they share. */
function costTogether(task: Task, stages: Combination, knowledge: Knowledge): number {
  const alone = stages.reduce(
    (sum, s) => sum + roughCost(task, s, knowledge) - (s.plan.removed.length > 0 ? SEPARATION_COST : 0),
    0,
  );
  const separations = separationsOf(
    stages.map((s) => s.plan),
    knowledge,
  );
  const steps = new Set(separations.flatMap((s) => s.steps.map((step) => step.record.id))).size;
  const unknown = separations.some((s) => s.unknown.length > 0);
  return (
    alone +
    (steps > 0 || unknown ? SEPARATION_COST : 0) +
    FURTHER_STEP_COST * Math.max(0, steps - 1) +
    (unknown ? UNKNOWN_STEP_COST : 0) +
    SECOND_DYE_COST * (new Set(stages.map((s) => seenWith(s.plan))).size - 1)
  );
}

/** For each step on record that parts every group from the rest, the cheapest titration of each group after it: with one dye for all, and any. */
function throughOneSeparation(
  task: Task,
  found: readonly (readonly DevelopedStage[])[],
  knowledge: Knowledge,
): Combination[] {
  const serving = (record: SeparationRecord): DevelopedStage[][] =>
    found.map((stages) =>
      cheapestFirst(
        task,
        stages.filter((s) => after(s, record)),
        knowledge,
      ),
    );
  return knowledge.separations.flatMap((record) => {
    const lists = serving(record);
    if (lists.some((list) => list.length === 0)) return [];
    return [lists.map((list) => list[0]!), ...sameDye(lists)];
  });
}

const after = ({ plan, evaluation, remaining }: DevelopedStage, record: SeparationRecord): boolean =>
  plan.removed.length > 0 && evaluation.status !== "failed" && remaining.length === 0 && parts(record, plan);

function cheapestFirst(task: Task, stages: readonly DevelopedStage[], knowledge: Knowledge): DevelopedStage[] {
  const cost = new Map(stages.map((s) => [s, roughCost(task, s, knowledge)]));
  return [...stages].sort((a, b) => cost.get(a)! - cost.get(b)! || stageKey(a).localeCompare(stageKey(b)));
}

/** For each dye (or electrode) that shows the end in every group: the first titration of each group with it. */
function sameDye(lists: readonly (readonly DevelopedStage[])[]): Combination[] {
  const dyes = new Set(lists[0]?.map((s) => seenWith(s.plan)));
  return [...dyes].flatMap((dye) => {
    const stages = lists.map((list) => list.find((s) => seenWith(s.plan) === dye));
    return stages.every((s) => s !== undefined) ? [stages] : [];
  });
}

function everyPairing(lists: readonly (readonly DevelopedStage[])[]): Combination[] {
  return lists.reduce<Combination[]>((made, list) => made.flatMap((head) => list.map((s) => [...head, s])), [[]]);
}
