import type { Recommendation, IonMap } from "../recommendation/contract.ts";
import type { ToleranceLimit } from "../methods/tolerance.ts";
import type { Task } from "../methods/types.ts";
import type { LimitsWork } from "../recommendation/method-limits.ts";
import type { DrawsAnswer, DrawsAsked, MapRowAnswer, RobustnessWork } from "../recommendation/robustness.ts";
import type { StandingAnswer } from "../recommendation/standing.ts";

/** What a worker can be asked, and what it answers. Everything in it can be copied between threads. */
export interface Jobs {
  readonly recommend: { readonly asks: Task; readonly answers: Recommendation };
  readonly mapIon: { readonly asks: string; readonly answers: IonMap };
  readonly standing: { readonly asks: Task; readonly answers: StandingAnswer };
  readonly limits: { readonly asks: LimitsWork; readonly answers: readonly ToleranceLimit[] };
  readonly draws: { readonly asks: DrawsAsked; readonly answers: DrawsAnswer };
  readonly mapRow: {
    readonly asks: { readonly work: RobustnessWork; readonly row: number };
    readonly answers: MapRowAnswer;
  };
}

export type JobKind = keyof Jobs;

export interface Question {
  readonly id: number;
  readonly kind: JobKind;
  readonly asks: Jobs[JobKind]["asks"];
}

export type Reply =
  | { readonly id: number; readonly ok: true; readonly answers: Jobs[JobKind]["answers"] }
  | { readonly id: number; readonly ok: false; readonly message: string; readonly stack: string };
