import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { evaluate } from "./evaluate.ts";
import type { EvaluatedMethod } from "./methods.ts";
import { releaseExcess } from "./release-plan.ts";
import type { MethodMode, StagePlan, Task } from "./types.ts";
import { combineDifference, stageBudget } from "./uncertainty.ts";

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

/** The excess of a release is not counted: more of it goes in until the first reading shows some. */
const enoughFor = (task: Task, plan: StagePlan, knowledge: Knowledge): StagePlan =>
  plan.release === null ? plan : { ...plan, excessTitrantMolPerL: releaseExcess(task, plan, knowledge) };

/** Whether every result of the method still meets the requirement; a difference is judged as the difference it is. */
function holds(task: Task, mode: MethodMode, plans: readonly StagePlan[], knowledge: Knowledge): boolean {
  const evaluations = plans.map((plan) => evaluate(task, enoughFor(task, plan, knowledge), knowledge));
  if (evaluations.some((e) => e.status === "failed" || e.blockedBy.length > 0)) return false;
  const [whole, part] = evaluations;
  const expanded =
    mode === "difference" && whole && part
      ? [stageBudget(task, part, knowledge).expanded, combineDifference(task, whole, part, knowledge).budget.expanded]
      : evaluations.map((e) => stageBudget(task, e, knowledge).expanded);
  return expanded.every((u) => 100 * u <= task.requirementPercent);
}

/** Up to where an empirical mask is reported to hold, and not used up, mol/L in the sample; Infinity where the equilibrium decides. */
function empiricalCeiling(
  task: Task,
  plans: readonly StagePlan[],
  component: ComponentId,
  knowledge: Knowledge,
): number {
  const dilution = task.portion.volumeML / task.portion.titrationVolumeML;
  const steps = plans.flatMap((p) => p.masking.filter((m) => m.basis === "empirical" && m.masks.includes(component)));
  const limits = steps.flatMap((step) => [
    step.molPerL / 2, // two ligands a metal ion at the least
    ...knowledge.masking
      .filter((r) => r.agent === step.agent && r.ion === component && r.upToMolPerL !== null)
      .map((r) => r.upToMolPerL!),
  ]);
  return Math.min(Number.POSITIVE_INFINITY, ...limits) / dilution;
}

function limitOf(
  task: Task,
  mode: MethodMode,
  plans: readonly StagePlan[],
  component: ComponentId,
  present: number,
  knowledge: Knowledge,
): number | null {
  const at = (molPerL: number): boolean => holds(withLevel(task, component, molPerL), mode, plans, knowledge);
  const good = at(present);
  let low = good ? present : LOWEST_MOL_PER_L;
  let high = good ? HIGHEST_MOL_PER_L : present;
  if (good && at(high)) return Number.POSITIVE_INFINITY; // no limit up to here
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

/** How much richer in what disturbs an ordinary sample may be than its brief expects (common practice). */
const RICHER = 1.5;

/**
 * Whether every metal ion of two or more charges in the matrix may be half as much again, all at once and the method unchanged, with the
 * requirement still met and no empirical mask beyond its level. Null where the method as it stands does not meet the requirement or nothing
 * of the kind is left in the vessel.
 */
export function bearsRicherMatrix(task: Task, method: EvaluatedMethod, knowledge: Knowledge): boolean | null {
  const plans = method.stages.map((s) => s.plan);
  const counts = (component: ComponentId): boolean => {
    const record = knowledge.components.get(component);
    return record?.kind === "metal" && record.charge >= 2 && !plans.every((p) => p.removed.includes(component));
  };
  const rows = task.matrix.filter((c) => c.molPerL > 0 && counts(c.component));
  if (rows.length === 0 || method.results.some((r) => 100 * r.budget.expanded > task.requirementPercent)) return null;
  if (rows.some((c) => empiricalCeiling(task, plans, c.component, knowledge) < RICHER * c.molPerL)) return false;
  const matrix = task.matrix.map((c) => (counts(c.component) ? { ...c, molPerL: RICHER * c.molPerL } : c));
  return holds({ ...task, matrix }, method.mode, plans, knowledge);
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
    const limit = limitOf(task, method.mode, plans, component, molPerL, knowledge);
    const ceiling = empiricalCeiling(task, plans, component, knowledge);
    const least = limit === null ? null : Math.min(limit, ceiling);
    if (least !== null && Number.isFinite(least))
      rows.push({ component, limitMolPerL: least, presentMolPerL: molPerL, withMasking: true });
    if (masked) {
      const without = limitOf(task, method.mode, bare, component, molPerL, knowledge);
      if (without !== null && Number.isFinite(without))
        rows.push({ component, limitMolPerL: without, presentMolPerL: molPerL, withMasking: false });
    }
    return rows;
  });
}
