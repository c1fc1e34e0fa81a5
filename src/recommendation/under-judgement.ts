import type { EvaluatedMethod } from "../methods/methods.ts";
import type { StageChoices } from "../methods/optimise.ts";
import type { WorkingRange } from "../methods/working-range.ts";

/** A method on its way to judgement, with what the facts need besides its evaluation. */
export interface MethodUnderJudgement {
  readonly method: EvaluatedMethod;
  readonly ranges: readonly (WorkingRange | null)[];
  /** Why each titration is done at its pH and with its amounts; absent where that was not looked at. */
  readonly choices?: readonly StageChoices[];
  /** See `bearsRicherMatrix`; null also where it was not looked at. */
  readonly bearsRicherMatrix: boolean | null;
}
