import type { Knowledge } from "../constants/knowledge.ts";
import { evaluate } from "./evaluate.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import {
  PerturbedTitration,
  plannedTitration,
  type DrawnTitration,
  type NotCompiled,
  type PlannedTitration,
} from "./perturbed-titration.ts";
import {
  benchParameters,
  shiftedKnowledge,
  shiftedPlan,
  shiftedTask,
  Shifts,
  type Parameter,
  type Spreads,
} from "./robustness-parameters.ts";
import type { StageModel } from "./stage-model.ts";
import type { MethodMode, StagePlan, Task } from "./types.ts";
import { combineDifference, isAsked, stageBudget } from "./uncertainty.ts";

/** A method as it is to be carried out: its titrations in order. */
export interface PlannedMethod {
  readonly mode: MethodMode;
  readonly plans: readonly StagePlan[];
}

/** One result of a method at a draw: bias and expanded uncertainty, fractions. */
interface DrawnResult {
  readonly biasFraction: number;
  readonly expandedFraction: number;
}

/** A method at a draw; no results where a titration shows no end point or its dye is spoilt. */
export interface DrawnMethod {
  readonly results: readonly DrawnResult[] | null;
  /** Whether some titration had to be evaluated as a whole, which is slower. */
  readonly whole: boolean;
}

/** A planned method whose constants, pH and amounts can be moved; parameters in the order in which draws are made. */
export interface PerturbedMethod {
  readonly parameters: readonly Parameter[];
  /** Per titration: why every draw evaluates it as a whole; null where it is compiled. */
  readonly notCompiled: readonly (NotCompiled | null)[];
  /** Per titration: its largest expanded uncertainty as planned, a fraction. */
  readonly expandedOfTitrations: readonly number[];
  /** How many results it gives. */
  readonly results: number;
  /** The method with its parameters shifted: log10 units, pH, relative. */
  readonly at: (shifts: Float64Array) => DrawnMethod;
}

/** Compiles a method: one system for each of its vessels, moved by every draw. */
export function perturbedMethod(
  task: Task,
  method: PlannedMethod,
  spreads: Spreads,
  knowledge: Knowledge,
): PerturbedMethod {
  const planned = method.plans.map((plan, stage) => plannedTitration(task, plan, stage, knowledge));
  const parameters = [...benchParameters(task, method.plans, spreads), ...constantParameters(planned)];
  const compiled = planned.map((p) => (p.why === null ? new PerturbedTitration(p, parameters, knowledge) : null));
  const nominalML = planned.map((p) => p.evaluation.endPointML);
  const at = (values: Float64Array): DrawnMethod => {
    const whole = wholeAt(task, planned, parameters, values, knowledge);
    let wholes = 0;
    let overshootML = 0;
    const drawn: StageEvaluation[] = [];
    for (const [stage, { plan, evaluation }] of planned.entries()) {
      const carried = plan.carried ? (plan.titrant.molPerL * overshootML) / 1000 / evaluation.model.volumeL : 0;
      const fast = compiled[stage]?.at(values, carried) ?? null;
      if (fast === null) wholes++;
      const one = fast ?? whole(stage, carried);
      if (one.evaluation.status === "failed" || one.blocked) return { results: null, whole: wholes > 0 };
      drawn.push(one.evaluation);
      overshootML += one.evaluation.endPointML - nominalML[stage]!;
    }
    return { results: resultsOf(task, method.mode, drawn, knowledge), whole: wholes > 0 };
  };
  return {
    parameters,
    notCompiled: planned.map((p) => p.why),
    expandedOfTitrations: planned.map((p) => stageBudget(task, p.evaluation, knowledge).expanded),
    results: method.plans.length,
    at,
  };
}

/** Evaluates one titration of a draw as a whole, with knowledge, task and plan shifted; the knowledge is made at most once a draw. */
function wholeAt(
  task: Task,
  planned: readonly PlannedTitration[],
  parameters: readonly Parameter[],
  values: Float64Array,
  knowledge: Knowledge,
): (stage: number, carriedMolPerL: number) => DrawnTitration {
  let moved: { readonly task: Task; readonly knowledge: Knowledge } | null = null;
  const shifts = new Shifts(parameters, values);
  return (stage, carriedMolPerL) => {
    moved ??= { task: shiftedTask(task, shifts), knowledge: shiftedKnowledge(knowledge, parameters, shifts) };
    const { plan, evaluation } = planned[stage]!;
    const own = shiftedPlan(plan, stage, shifts);
    const carried = own.carried && { ...own.carried, titrantMolPerL: own.carried.titrantMolPerL + carriedMolPerL };
    const drawn = evaluate(moved.task, { ...own, carried }, moved.knowledge);
    return { evaluation: drawn, blocked: drawn.blockedBy.some((metal) => !evaluation.blockedBy.includes(metal)) };
  };
}

/** Results as the method reports them: of each titration its own, of a difference the second titration's and the difference. */
function resultsOf(
  task: Task,
  mode: MethodMode,
  drawn: readonly StageEvaluation[],
  knowledge: Knowledge,
): DrawnResult[] {
  const alone = (evaluation: StageEvaluation): DrawnResult => ({
    biasFraction: evaluation.biasFraction,
    expandedFraction: stageBudget(task, evaluation, knowledge).expanded,
  });
  const [whole, part] = drawn;
  if (mode !== "difference" || !whole || !part) return drawn.map(alone);
  const { biasFraction, budget } = combineDifference(task, whole, part, knowledge);
  return [...(isAsked(task, part) ? [alone(part)] : []), { biasFraction, expandedFraction: budget.expanded }];
}

/** One parameter for each reaction that any vessel of the method rests on, with the standard uncertainty of its constant there. */
function constantParameters(planned: readonly PlannedTitration[]): Parameter[] {
  const found = new Map<string, Parameter>();
  const take = (model: StageModel): void => {
    for (const { evidence } of [...model.system.species, ...model.forming.solids])
      for (const { reaction, uncertainty } of evidence)
        if (!found.has(reaction) && uncertainty > 0)
          found.set(reaction, { kind: "constant", id: reaction, standardUncertainty: uncertainty });
  };
  for (const { evaluation, formed, standard } of planned)
    for (const model of [evaluation.model, formed, standard?.model]) if (model) take(model);
  return [...found.values()];
}
