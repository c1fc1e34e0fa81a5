import type { Knowledge } from "../constants/knowledge.ts";
import { biasCauses, type BiasCause } from "./bias-causes.ts";
import { budgetTable, differenceTable, type BudgetTable } from "./budget-table.ts";
import type { EvaluatedMethod, MethodResult } from "./methods.ts";
import type { Task } from "./types.ts";

/** A cause with the titration it comes from; null where the result has one titration. */
export interface ResultCause extends BiasCause {
  readonly titration: number | null; // from 1
}

/** Where a result of a method comes from: its titration, or the two whose difference it is. */
type Origin = { readonly stage: number } | { readonly whole: number; readonly part: number };

function originOf(method: EvaluatedMethod, result: MethodResult): Origin {
  const key = (ions: readonly string[]): string => [...ions].sort().join();
  const own = method.stages.findIndex((s) => key(s.plan.determines) === key(result.determines));
  // A difference gives what neither of its titrations determines.
  return own >= 0 ? { stage: own } : { whole: 0, part: 1 };
}

/** The bias of one result by its causes, largest first; they add up to it. */
export function resultCauses(
  task: Task,
  method: EvaluatedMethod,
  result: MethodResult,
  knowledge: Knowledge,
): ResultCause[] {
  const origin = originOf(method, result);
  const evaluationOf = (i: number) => method.stages[i]!.evaluation;
  const scaled = (i: number, weight: number): ResultCause[] =>
    biasCauses(task, evaluationOf(i), knowledge).map((cause) => ({
      ...cause,
      fraction: weight * cause.fraction,
      uncancelledFraction: weight * cause.uncancelledFraction,
      titration: "stage" in origin ? null : i + 1,
    }));
  const causes =
    "stage" in origin
      ? scaled(origin.stage, 1)
      : [origin.whole, origin.part].flatMap((i) => {
          const [whole, part] = [evaluationOf(origin.whole).presentMol, evaluationOf(origin.part).presentMol];
          return scaled(i, (i === origin.whole ? whole : -part) / (whole - part));
        });
  const size = (c: BiasCause): number => Math.max(Math.abs(c.fraction), Math.abs(c.uncancelledFraction));
  return causes.sort((a, b) => size(b) - size(a));
}

/** The uncertainty budget of one result, quantity by quantity. */
export function resultTable(
  task: Task,
  method: EvaluatedMethod,
  result: MethodResult,
  knowledge: Knowledge,
): BudgetTable {
  const origin = originOf(method, result);
  const evaluationOf = (i: number) => method.stages[i]!.evaluation;
  return "stage" in origin
    ? budgetTable(task, evaluationOf(origin.stage), knowledge)
    : differenceTable(task, evaluationOf(origin.whole), evaluationOf(origin.part), knowledge);
}
