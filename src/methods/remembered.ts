import type { Knowledge } from "../constants/knowledge.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import type { StagePlan, Task } from "./types.ts";

const answers = new WeakMap<Knowledge, WeakMap<Task, Map<string, StageEvaluation>>>();

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
  let ofTask = ofKnowledge.get(task);
  if (!ofTask) ofKnowledge.set(task, (ofTask = new Map<string, StageEvaluation>()));
  const key = kind + JSON.stringify(plan);
  const known = ofTask.get(key);
  if (known) return known;
  const answer = make();
  ofTask.set(key, answer);
  return answer;
}
