import type { Knowledge } from "../constants/knowledge.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import type { StagePlan, Task } from "./types.ts";

const answers = new WeakMap<Knowledge, WeakMap<Task, Map<string, StageEvaluation>>>();

/** Tasks that differ from another in nothing but their matrix, which a standard titration has not. */
const sameStandard = new WeakMap<Task, Task>();

/** Lets a task that differs from another in its matrix alone share its standard titrations. */
export function sharingStandards<T extends Task>(changed: T, task: Task): T {
  sameStandard.set(changed, sameStandard.get(task) ?? task);
  return changed;
}

/**
 * An evaluation asked for again: a search comes back to the same plan for the same task many times (masks tried in turn, working
 * ranges, the standard titration beside every variant). Forgotten with the task.
 * @param kind tells evaluations of one plan apart that are not made the same way
 */
export function remembered(
  kind: string,
  task: Task,
  plan: StagePlan,
  knowledge: Knowledge,
  make: () => StageEvaluation,
): StageEvaluation {
  let ofKnowledge = answers.get(knowledge);
  if (!ofKnowledge) answers.set(knowledge, (ofKnowledge = new WeakMap<Task, Map<string, StageEvaluation>>()));
  const owner = kind === "standard" ? (sameStandard.get(task) ?? task) : task;
  let ofTask = ofKnowledge.get(owner);
  if (!ofTask) ofKnowledge.set(owner, (ofTask = new Map<string, StageEvaluation>()));
  const key = kind + JSON.stringify(plan);
  const known = ofTask.get(key);
  if (known) return known;
  const answer = make();
  ofTask.set(key, answer);
  return answer;
}
