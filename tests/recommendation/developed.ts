import { evaluate } from "../../src/methods/evaluate.ts";
import { type DevelopedStage } from "../../src/methods/develop.ts";
import { singleMethod } from "../../src/methods/methods.ts";
import { threatsOf } from "../../src/methods/threats.ts";
import type { StagePlan, Task } from "../../src/methods/types.ts";
import type { MethodUnderJudgement } from "../../src/recommendation/under-judgement.ts";
import { KNOWLEDGE } from "../methods/invented.ts";

/** A plan evaluated against its task as the search would hand it on: bare without its masks, threats named. */
export function developed(task: Task, plan: StagePlan, change: Partial<DevelopedStage> = {}): DevelopedStage {
  const bare = evaluate(task, { ...plan, masking: [] }, KNOWLEDGE);
  const evaluation = evaluate(task, plan, KNOWLEDGE);
  return {
    skeleton: {
      plan: { ...plan, masking: [] },
      use: "published",
      useBasis: "read",
      window: [plan.pH - 0.5, plan.pH + 0.5],
    },
    plan,
    bare,
    threats: threatsOf(task, bare, KNOWLEDGE),
    analytePrecipitates: false,
    evaluation,
    remaining: threatsOf(task, evaluation, KNOWLEDGE),
    ...change,
  };
}

/** A method of one such titration, on its way to judgement. */
export const underJudgement = (task: Task, stage: DevelopedStage): MethodUnderJudgement => ({
  method: singleMethod(task, stage, KNOWLEDGE),
  ranges: [{ low: stage.plan.pH - 0.5, high: stage.plan.pH + 0.5 }],
  bearsRicherMatrix: null,
});
