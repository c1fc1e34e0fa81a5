import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { evaluate } from "./evaluate.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import { benchAmount, type MaskSet } from "./masks.ts";
import { withExcess } from "./plan-excess.ts";
import { threatsOf, type Threat } from "./threats.ts";
import type { MaskingStep, StagePlan, Task } from "./types.ts";

/** A plan after something was done about the matrix: its evaluation, and the threats that remain. */
export interface Settled {
  readonly plan: StagePlan;
  readonly evaluation: StageEvaluation;
  readonly remaining: readonly Threat[];
}

/** Applies a set of masks in the amounts they need, then lets practice records stand in where constants say no but a reported level says yes. */
export function settle(task: Task, plan: StagePlan, set: MaskSet, knowledge: Knowledge): Settled {
  const apply = (masking: readonly MaskingStep[]): Settled => {
    const masked = withExcess(task, { ...plan, masking, preparation: prepared(plan, set.steps) }, knowledge);
    const evaluation = evaluate(task, masked, knowledge);
    return { plan: masked, evaluation, remaining: threatsOf(task, evaluation, knowledge) };
  };
  let steps: readonly MaskingStep[] = [...plan.masking, ...set.steps];
  let settled = apply(steps);
  // What the usual amount leaves to the titrant may need more of the agent, up to the most that is usual.
  for (let round = 0; round < RAISED_AT_MOST; round++) {
    const raised = withMore(steps, settled.remaining, knowledge);
    if (raised === steps) break;
    const next = apply(raised);
    if (next.evaluation.status === "failed" || next.remaining.length > settled.remaining.length) break;
    steps = raised;
    settled = next;
  }
  const rescued = settled.remaining.filter((t) => reportedToHold(t, settled.plan, knowledge)).map((t) => t.component);
  return rescued.length > 0 ? apply(toEmpirical(steps, rescued)) : settled;
}

const RAISED_AT_MOST = 2;
const RAISE = 3;

const mostOf = (agent: string, knowledge: Knowledge): number => knowledge.agents.get(agent)?.usualMaxMolPerL ?? 0;

/** The same steps with more of the agents that did not hold what they were meant to hold; the steps themselves where none can be raised. */
function withMore(
  steps: readonly MaskingStep[],
  remaining: readonly Threat[],
  knowledge: Knowledge,
): readonly MaskingStep[] {
  const fails = (step: MaskingStep): boolean =>
    step.basis === "equilibrium" &&
    step.agent !== "hydroxide" &&
    step.molPerL < 0.99 * mostOf(step.agent, knowledge) &&
    step.masks.some((ion) => remaining.some((t) => t.component === ion));
  if (!steps.some(fails)) return steps;
  return steps.map((step) =>
    fails(step)
      ? { ...step, molPerL: Math.min(mostOf(step.agent, knowledge), benchAmount(RAISE * step.molPerL)) }
      : step,
  );
}

/** A practice row says this agent holds the ion up to a level that is not exceeded here. */
function reportedToHold(threat: Threat, plan: StagePlan, knowledge: Knowledge): boolean {
  return plan.masking.some(
    (step) =>
      step.basis === "equilibrium" &&
      // What precipitates or not is the equilibrium's business; only soluble masks may rest on a report against it.
      step.via === "complexation" &&
      step.masks.includes(threat.component) &&
      knowledge.masking.some(
        (r) =>
          r.agent === step.agent &&
          r.ion === threat.component &&
          (r.effect === "masks" || r.effect === "partial") &&
          // Against constants a level must have been read; one that is recalled does not outweigh them.
          [r.provenance, ...r.otherSources].some((p) => p.basis === "read") &&
          r.upToMolPerL !== null &&
          threat.molPerL <= r.upToMolPerL,
      ),
  );
}

function toEmpirical(steps: readonly MaskingStep[], ions: readonly ComponentId[]): MaskingStep[] {
  return steps.flatMap((step) => {
    const moved = step.masks.filter((m) => ions.includes(m) && step.basis === "equilibrium");
    if (moved.length === 0) return [step];
    const kept = step.masks.filter((m) => !moved.includes(m));
    const empirical: MaskingStep = { ...step, masks: moved, basis: "empirical" };
    return kept.length > 0 ? [{ ...step, masks: kept }, empirical] : [empirical];
  });
}

/** Steps of preparation that masks bring with them. */
function prepared(plan: StagePlan, steps: readonly MaskingStep[]): string[] {
  const more: string[] = [];
  if (steps.some((s) => s.via === "reduction") && !plan.preparation.includes("reduce")) more.push("reduce");
  if (steps.some((s) => s.via === "oxidation" && s.masks.includes("Mn2+")) && !plan.preparation.includes("air-oxidise"))
    more.push("air-oxidise");
  return [...plan.preparation, ...more];
}
