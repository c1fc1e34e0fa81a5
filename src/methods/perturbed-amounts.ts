import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { inertIonsOf, saltSteps } from "./inert-ions.ts";
import { shiftedPlan, shiftedTask, Shifts, type Parameter } from "./robustness-parameters.ts";
import { stageSolution } from "./solution.ts";
import type { StageModel } from "./stage-model.ts";
import type { StagePlan, Task } from "./types.ts";

/** How a vessel follows from the task and the plan of the titration it belongs to: itself, or its standard titration. */
export type VesselOf = (task: Task, plan: StagePlan) => { readonly task: Task; readonly plan: StagePlan };

/** Amounts that go with a parameter, relative: columns of the totals, then the two sums over inert ions. */
export interface Contribution {
  readonly parameter: number;
  readonly amounts: Float64Array;
}

/** Totals of the planned vessel, mol/L per column, then the sums of c z² and c z over ions that take no part. */
export function plannedAmounts(model: StageModel, task: Task, knowledge: Knowledge): Float64Array {
  const { cz2, cz } = inertIonsOf(model.solution.totals, knowledge);
  const salt = saltSteps(task, knowledge);
  const dilution = task.portion.volumeML / 1000 / model.volumeL;
  return Float64Array.of(...model.vessel.base, cz2 + dilution * salt.cz2, cz + dilution * salt.cz);
}

/** The same with what the model holds as frozen complexes put back: a draw says anew how much that is. */
export function withFrozen(model: StageModel, amounts: Float64Array): Float64Array {
  const whole = amounts.slice();
  const add = (component: ComponentId, molPerL: number): void => {
    const column = model.system.index.get(component);
    if (column !== undefined) whole[column] = whole[column]! + molPerL;
  };
  for (const { component, molPerL, why } of model.held) {
    if (why !== "kinetically-inert") continue;
    add(component, molPerL);
    add(model.plan.titrant.id, molPerL);
  }
  return whole;
}

/** What each parameter of the bench and the sample adds to the totals when it grows by its own amount: totals are linear in them. */
export function contributionsOf(
  model: StageModel,
  own: { readonly task: Task; readonly plan: StagePlan; readonly stage: number; readonly of: VesselOf },
  parameters: readonly Parameter[],
  knowledge: Knowledge,
): Contribution[] {
  const { components } = model.system;
  const dye = model.dyeBasis.dye;
  const amountsAt = (shifts: Shifts): Float64Array => {
    const { task, plan } = own.of(shiftedTask(own.task, shifts), shiftedPlan(own.plan, own.stage, shifts));
    const { totals } = stageSolution(task, plan, knowledge);
    const ofDye = (component: ComponentId): number => (component === dye ? (plan.indicator?.molPerL ?? 0) : 0);
    const { cz2, cz } = inertIonsOf(totals, knowledge);
    return Float64Array.of(...components.map((c) => (totals.get(c) ?? 0) + ofDye(c)), cz2, cz);
  };
  const nominal = amountsAt(new Shifts(parameters, new Float64Array(parameters.length)));
  return parameters.flatMap(({ kind }, parameter) => {
    if (kind === "constant" || kind === "pH") return [];
    const one = new Float64Array(parameters.length);
    one[parameter] = 1;
    const amounts = amountsAt(new Shifts(parameters, one)).map((value, j) => value - nominal[j]!);
    return amounts.some((value) => value !== 0) ? [{ parameter, amounts }] : [];
  });
}
