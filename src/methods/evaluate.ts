import type { Knowledge } from "../constants/knowledge.ts";
import { evaluateStage, type StageEvaluation } from "./evaluate-stage.ts";
import { frozenComplexes } from "./frozen.ts";
import { evaluateRelease } from "./release.ts";
import { remembered } from "./remembered.ts";
import { standardisedAlike } from "./standardise.ts";
import type { StagePlan, Task } from "./types.ts";

/**
 * Evaluates a titration, standardised alike, with complexes frozen that, once formed hot, do not exchange in the cold acid solution.
 * A release is read between two end points of the same kind.
 */
export function evaluate(task: Task, plan: StagePlan, knowledge: Knowledge): StageEvaluation {
  return remembered("titration", task, plan, knowledge, () =>
    standardisedAlike(
      task,
      plan.release === null
        ? evaluateStage(task, plan, knowledge, frozenComplexes(task, plan, knowledge))
        : evaluateRelease(task, plan, knowledge),
      knowledge,
    ),
  );
}
