import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { evaluateStage, type StageEvaluation } from "./evaluate-stage.ts";
import { metalKinetics } from "./kinetics.ts";
import { maskSets, type MaskSet } from "./masks.ts";
import type { Shelf } from "./shelf.ts";
import { excessFor, withAuxiliary, type Skeleton } from "./skeletons.ts";
import { vesselSample } from "./solution.ts";
import { stageModel } from "./stage-model.ts";
import { threatsOf, type Threat } from "./threats.ts";
import type { MaskingStep, StagePlan, Task } from "./types.ts";

/** A titration worked out against the matrix: plan, evaluation, and what it faced. */
export interface DevelopedStage {
  readonly skeleton: Skeleton;
  readonly plan: StagePlan;
  readonly evaluation: StageEvaluation;
  /** The same titration with nothing done about the matrix. */
  readonly bare: StageEvaluation;
  readonly threats: readonly Threat[];
  /** Threats that remain although something was done, or because nothing serves. */
  readonly remaining: readonly Threat[];
  readonly analytePrecipitates: boolean;
}

/** Works one skeleton out into the variants worth judging: masked in a few ways, or with the unmaskable separated. */
export function develop(task: Task, skeleton: Skeleton, knowledge: Knowledge, shelf: Shelf): DevelopedStage[] {
  const start = soluble(task, withExcess(task, skeleton.plan, knowledge), knowledge, shelf);
  const bare = evaluate(task, start.plan, knowledge);
  const threats = threatsOf(task, bare, knowledge);
  const common = { skeleton, bare, threats, analytePrecipitates: start.precipitates };
  if (threats.length === 0) return [{ ...common, plan: start.plan, evaluation: bare, remaining: [] }];
  const out: DevelopedStage[] = [];
  const failed: Threat[] = [];
  for (const set of maskSets(threats, start.plan, knowledge, shelf)) {
    const settled = settle(task, start.plan, set, knowledge);
    out.push({ ...common, ...settled });
    failed.push(...settled.remaining);
  }
  const anyClean = out.some((v) => v.remaining.length === 0 && v.evaluation.status !== "failed");
  if (!anyClean)
    out.push(...separations(task, start.plan, threats, failed, knowledge, shelf).map((v) => ({ ...common, ...v })));
  return out;
}

type Settled = Pick<DevelopedStage, "plan" | "evaluation" | "remaining">;

/** Applies a set of masks, then lets practice records stand in where constants say no but a reported level says yes. */
function settle(task: Task, plan: StagePlan, set: MaskSet, knowledge: Knowledge): Settled {
  let masked: StagePlan = withExcess(
    task,
    { ...plan, masking: [...plan.masking, ...set.steps], preparation: prepared(plan, set.steps) },
    knowledge,
  );
  let evaluation = evaluate(task, masked, knowledge);
  let remaining = threatsOf(task, evaluation, knowledge);
  const rescued = remaining.filter((t) => reportedToHold(t, masked, knowledge));
  if (rescued.length > 0) {
    masked = withExcess(
      task,
      {
        ...masked,
        masking: toEmpirical(
          masked.masking,
          rescued.map((t) => t.component),
        ),
      },
      knowledge,
    );
    evaluation = evaluate(task, masked, knowledge);
    remaining = threatsOf(task, evaluation, knowledge);
  }
  return { plan: masked, evaluation, remaining };
}

/** A practice row says this agent holds the ion up to a level that is not exceeded here. */
function reportedToHold(threat: Threat, plan: StagePlan, knowledge: Knowledge): boolean {
  return plan.masking.some(
    (step) =>
      step.basis === "equilibrium" &&
      step.masks.includes(threat.component) &&
      knowledge.masking.some(
        (r) =>
          r.agent === step.agent &&
          r.ion === threat.component &&
          (r.effect === "masks" || r.effect === "partial") &&
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

/** Variants in which what cannot be masked is taken out first, the rest masked; and one in which everything is taken out. */
function separations(
  task: Task,
  plan: StagePlan,
  threats: readonly Threat[],
  failed: readonly Threat[],
  knowledge: Knowledge,
  shelf: Shelf,
): Settled[] {
  const hopeless = new Set(failed.map((t) => t.component));
  const metals = threats.filter((t) => !t.holdsAnalyte);
  if (metals.length === 0) return [];
  const choices = [metals.filter((t) => hopeless.has(t.component)), metals].filter((c) => c.length > 0);
  const seen = new Set<string>();
  return choices.flatMap((out) => {
    const removed = out.map((t) => t.component);
    const key = removed.join();
    if (seen.has(key)) return [];
    seen.add(key);
    const base = withExcess(task, { ...plan, removed, preparation: ["separate", ...plan.preparation] }, knowledge);
    const left = threatsOf(task, evaluate(task, base, knowledge), knowledge);
    const set = maskSets(left, base, knowledge, shelf)[0];
    return set ? [settle(task, base, set, knowledge)] : [];
  });
}

/** Titrant in excess for a back titration: a good third above everything in the vessel that binds. */
function withExcess(task: Task, plan: StagePlan, knowledge: Knowledge): StagePlan {
  if (plan.backTitrant === null) return plan;
  const everything = vesselSample(task)
    .filter((c) => knowledge.components.get(c.component)?.kind === "metal" && !plan.removed.includes(c.component))
    .reduce((s, c) => s + c.inVesselMolPerL, 0);
  const model = stageModel(task, { ...plan, excessTitrantMolPerL: 2 * everything }, knowledge);
  const state = model.at(0);
  const bound = model.metals.reduce((s, m) => s + state.boundToTitrant(m), 0);
  return { ...plan, excessTitrantMolPerL: excessFor(Math.max(bound, everything * 1e-6)) };
}

/** Evaluates with complexes frozen that, once formed hot, do not exchange in the cold acid solution. */
export function evaluate(task: Task, plan: StagePlan, knowledge: Knowledge): StageEvaluation {
  if (plan.backTitrant === null || !plan.preparation.includes("cool")) return evaluateStage(task, plan, knowledge);
  const model = stageModel(task, plan, knowledge);
  const formed = model.at(0);
  const frozen = new Map<ComponentId, number>();
  for (const metal of model.metals) {
    const kinetics = metalKinetics(knowledge, metal, plan.titrant.id);
    if (kinetics.class === "inert" || (kinetics.class === "slow" && plan.pH < 7))
      frozen.set(metal, formed.boundToTitrant(metal));
  }
  return evaluateStage(task, plan, knowledge, frozen);
}

/** Adds what keeps the analyte dissolved where it would precipitate before the titrant reaches it. */
function soluble(
  task: Task,
  plan: StagePlan,
  knowledge: Knowledge,
  shelf: Shelf,
): { plan: StagePlan; precipitates: boolean } {
  const lost = (p: StagePlan): boolean => {
    const model = stageModel(task, p, knowledge);
    const ids = new Set([...model.solids, ...model.held.filter((h) => h.why === "precipitated").map((h) => h.by)]);
    return knowledge.solids.some((s) => ids.has(s.id) && p.determines.some((ion) => (s.components[ion] ?? 0) > 0));
  };
  if (plan.backTitrant !== null) {
    // The titrant goes in first; what would precipitate without it does not.
    return { plan, precipitates: lost({ ...plan, excessTitrantMolPerL: 0 }) };
  }
  if (!lost(plan)) return { plan, precipitates: false };
  for (const agent of knowledge.agents.values()) {
    if (!shelf(agent.id)) continue;
    const keeps = knowledge.masking.some(
      (r) =>
        r.agent === agent.id &&
        r.effect === "auxiliary" &&
        r.via === "complexation" &&
        plan.determines.includes(r.ion) &&
        plan.pH >= r.pH[0] - 0.3 &&
        plan.pH <= r.pH[1] + 0.3,
    );
    if (!keeps) continue;
    const kept = withAuxiliary(plan, knowledge, agent.id, `keeps ${plan.determines.join(", ")} dissolved`);
    if (!lost(kept)) return { plan: kept, precipitates: true };
  }
  return { plan, precipitates: true };
}
