import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { evaluate } from "./develop.ts";
import type { EvaluatedMethod } from "./methods.ts";
import type { StagePlan, Task } from "./types.ts";
import { stageBudget } from "./uncertainty.ts";

/** The level of one component at which the requirement breaks, mol/L in the sample. */
export interface ToleranceLimit {
  readonly component: ComponentId;
  readonly limitMolPerL: number;
  readonly presentMolPerL: number;
  readonly withMasking: boolean;
}

const HIGHEST_MOL_PER_L = 2; // beyond this it is no longer a matrix component
const LOWEST_MOL_PER_L = 1e-9;
const HALVINGS = 9; // to about 2 % on the decade it lies in

/** The task with one component of the matrix at another level. */
function withLevel(task: Task, component: ComponentId, molPerL: number): Task {
  return { ...task, matrix: task.matrix.map((c) => (c.component === component ? { ...c, molPerL } : c)) };
}

function holds(task: Task, plans: readonly StagePlan[], knowledge: Knowledge): boolean {
  return plans.every((plan) => {
    const evaluation = evaluate(task, plan, knowledge);
    if (evaluation.status === "failed" || evaluation.blockedBy.length > 0) return false;
    return 100 * stageBudget(task, evaluation, knowledge).expanded <= task.requirementPercent;
  });
}

function limitOf(
  task: Task,
  plans: readonly StagePlan[],
  component: ComponentId,
  present: number,
  knowledge: Knowledge,
): number | null {
  const at = (molPerL: number): boolean => holds(withLevel(task, component, molPerL), plans, knowledge);
  const good = at(present);
  let low = good ? present : LOWEST_MOL_PER_L;
  let high = good ? HIGHEST_MOL_PER_L : present;
  if (good && at(high)) return null; // no limit up to here
  if (!good && !at(low)) return null;
  // First by decades, then by halving the logarithm: the criterion may jump where a dye blocks.
  while (high / low > 10) {
    const middle = low * 10;
    if (at(middle)) low = middle;
    else {
      high = middle;
      break;
    }
  }
  for (let i = 0; i < HALVINGS; i++) {
    const middle = Math.sqrt(low * high);
    if (at(middle)) low = middle;
    else high = middle;
  }
  return low;
}

/** Tolerance limits of a method for the components of the matrix, with its masking, and without it where it masks. */
export function toleranceLimits(task: Task, method: EvaluatedMethod, knowledge: Knowledge): ToleranceLimit[] {
  const plans = method.stages.map((s) => s.plan);
  const bare = plans.map((p) => ({ ...p, masking: [] }));
  return task.matrix.flatMap(({ component, molPerL }) => {
    if (knowledge.components.get(component)?.kind === "inert" || plans.some((p) => p.removed.includes(component)))
      return [];
    const rows: ToleranceLimit[] = [];
    const masked = plans.some((p) => p.masking.some((m) => m.masks.includes(component)));
    const limit = limitOf(task, plans, component, molPerL, knowledge);
    if (limit !== null) rows.push({ component, limitMolPerL: limit, presentMolPerL: molPerL, withMasking: true });
    if (masked) {
      const without = limitOf(task, bare, component, molPerL, knowledge);
      if (without !== null)
        rows.push({ component, limitMolPerL: without, presentMolPerL: molPerL, withMasking: false });
    }
    return rows;
  });
}
