import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { develop, type DevelopedStage } from "./develop.ts";
import { shelfOf, type Shelf } from "./shelf.ts";
import { backSkeletons, directSkeletons, type Skeleton } from "./skeletons.ts";
import type { MethodMode, Task } from "./types.ts";
import { stageBudget, type Budget } from "./uncertainty.ts";

/** One result of a method: what it gives, how wrong, how sure. */
export interface MethodResult {
  readonly determines: readonly ComponentId[];
  readonly biasFraction: number;
  readonly budget: Budget;
}

/** A method, evaluated: its titrations in order and what they give together. */
export interface EvaluatedMethod {
  readonly id: string;
  readonly mode: MethodMode;
  readonly stages: readonly DevelopedStage[];
  readonly results: readonly MethodResult[];
  readonly portions: number;
}

/** Readable key of a titration: the same plan always has the same key. */
export function stageKey(stage: DevelopedStage): string {
  const { plan } = stage;
  return [
    plan.determines.join("+"),
    plan.mode,
    plan.titrant.id,
    plan.backTitrant?.id ?? "",
    plan.indicator?.id ?? plan.detection,
    plan.pH,
    plan.buffer.id,
    [...plan.masking.map((m) => m.agent), ...plan.auxiliary.map((a) => a.id)].sort().join("+"),
    plan.preparation.join("+"),
    plan.removed.join("+"),
  ].join("|");
}

/** All titrations of one group of ions that are worth judging, and the skeletons that gave none. */
export function stagesFor(
  task: Task,
  determines: readonly ComponentId[],
  knowledge: Knowledge,
  shelf: Shelf,
): DevelopedStage[] {
  const make = { task, knowledge, shelf, determines };
  const skeletons: Skeleton[] = [...directSkeletons(make), ...backSkeletons(make)];
  const seen = new Set<string>();
  return skeletons.flatMap((skeleton) =>
    develop(task, skeleton, knowledge, shelf).filter((stage) => {
      const key = stageKey(stage);
      if (seen.has(key)) return false;
      seen.add(key);
      return true;
    }),
  );
}

/** A stage's promise, smaller is better: bias and band against the requirement, what is left undone, steps. */
export function roughCost(task: Task, stage: DevelopedStage, knowledge: Knowledge): number {
  const { evaluation, plan } = stage;
  if (evaluation.status === "failed") return 1000;
  const budget = stageBudget(task, evaluation, knowledge);
  const ratio = (100 * budget.expanded) / task.requirementPercent;
  return (
    Math.min(ratio, 20) * 4 +
    stage.remaining.length * 40 +
    evaluation.blockedBy.length * 60 +
    plan.masking.length * 3 +
    plan.auxiliary.length * 2 +
    (plan.backTitrant ? 8 : 0) +
    (plan.removed.length > 0 ? 25 : 0) +
    (plan.titrant.id === "EDTA" ? 0 : 5) +
    (stage.skeleton.use === "published" ? 0 : 12) +
    (plan.preparation.includes("boil") || plan.preparation.includes("heat") ? 3 : 0)
  );
}

/** A method of one titration. */
export function singleMethod(task: Task, stage: DevelopedStage, knowledge: Knowledge): EvaluatedMethod {
  const budget = stageBudget(task, stage.evaluation, knowledge);
  return {
    id: stageKey(stage),
    mode: stage.plan.mode,
    stages: [stage],
    results: [{ determines: stage.plan.determines, biasFraction: stage.evaluation.biasFraction, budget }],
    portions: 1,
  };
}

/** Everything that was worked out for a task, before judgement. */
export interface MethodSearch {
  readonly methods: readonly EvaluatedMethod[];
  readonly shelf: Shelf;
  readonly specialOpened: boolean;
}

/** Searches the usual shelf, and the special reagents only when nothing usual works. */
export function searchMethods(task: Task, knowledge: Knowledge): MethodSearch {
  for (const withSpecial of [false, true]) {
    const shelf = shelfOf(task, knowledge, withSpecial);
    const methods = methodsOn(task, knowledge, shelf);
    const works = methods.some((m) =>
      m.stages.every((s) => s.evaluation.status !== "failed" && s.remaining.length === 0),
    );
    if (works || withSpecial) return { methods, shelf, specialOpened: withSpecial };
  }
  throw new Error("unreachable: the second round always returns");
}

function methodsOn(task: Task, knowledge: Knowledge, shelf: Shelf): EvaluatedMethod[] {
  const groups = groupsOf(task);
  if (groups.length === 1)
    return stagesFor(task, groups[0]!, knowledge, shelf).map((stage) => singleMethod(task, stage, knowledge));
  return [];
}

/** What is to be reported together: every individual analyte by itself, all with "sum" as one. */
export function groupsOf(task: Task): ComponentId[][] {
  const sum = task.analytes.filter((a) => a.report === "sum").map((a) => a.component);
  const single = task.analytes.filter((a) => a.report === "individual").map((a) => [a.component]);
  return sum.length > 0 ? [...single, sum] : single;
}
