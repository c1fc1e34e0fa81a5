import type { Knowledge } from "../constants/knowledge.ts";
import { combinedMethods } from "./combine.ts";
import { differencesBeside } from "./difference-beside.ts";
import { groupsOf, singleMethod, stagesFor, type EvaluatedMethod } from "./methods.ts";
import { shelfOf, type Shelf } from "./shelf.ts";
import type { Task } from "./types.ts";

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
    const works =
      methods.some((m) => m.stages.every((s) => s.evaluation.status !== "failed" && s.remaining.length === 0)) &&
      !(hasSpecialWay(task, knowledge) && methods.every((m) => !meets(task, m)));
    if (works || withSpecial) return { methods, shelf, specialOpened: withSpecial };
  }
  throw new Error("unreachable: the second round always returns");
}

const meets = (task: Task, method: EvaluatedMethod): boolean =>
  method.stages.every((s) => s.evaluation.status !== "failed") &&
  method.results.every((r) => 100 * r.budget.expanded <= task.requirementPercent);

/** An analyte that the titrants hardly bind seems to be titrated by many things; its way round may need a special bottle. */
const hasSpecialWay = (task: Task, knowledge: Knowledge): boolean =>
  [...knowledge.detours.values()].some(
    (d) => d.reagent.special && task.analytes.some((a) => a.component === d.analyte),
  );

function methodsOn(task: Task, knowledge: Knowledge, shelf: Shelf): EvaluatedMethod[] {
  const groups = groupsOf(task);
  if (groups.length === 1) {
    const stages = stagesFor(task, groups[0]!, knowledge, shelf);
    return [
      ...stages.map((stage) => singleMethod(task, stage, knowledge)),
      ...differencesBeside(task, groups[0]!, stages, knowledge, shelf),
    ];
  }
  return combinedMethods(task, groups, knowledge, shelf);
}
