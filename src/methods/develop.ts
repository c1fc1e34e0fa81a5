import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { evaluateStage, type StageEvaluation } from "./evaluate-stage.ts";
import { metalKinetics } from "./kinetics.ts";
import { maskSets, type MaskSet } from "./masks.ts";
import type { Shelf } from "./shelf.ts";
import { excessFor, withAuxiliary, type Skeleton } from "./skeletons.ts";
import { vesselSample } from "./solution.ts";
import { stageModel, type StageModel } from "./stage-model.ts";
import { threatsOf, type Threat } from "./threats.ts";
import type { MaskingStep, StagePlan, Task } from "./types.ts";
import { stageBudget } from "./uncertainty.ts";

/** A titration worked out against the matrix: plan, evaluation, and what it faced. */
export interface DevelopedStage extends BareStage {
  readonly evaluation: StageEvaluation;
  /** Threats that remain although something was done, or because nothing serves. */
  readonly remaining: readonly Threat[];
}

/** A titration evaluated as it stands, before anything is done about the matrix. */
export interface BareStage {
  readonly skeleton: Skeleton;
  readonly plan: StagePlan;
  readonly bare: StageEvaluation;
  readonly threats: readonly Threat[];
  readonly analytePrecipitates: boolean;
}

/** First look at a skeleton: analyte kept dissolved, excess measured, threats named, pH moved where that disarms a threat. */
export function bareStage(task: Task, skeleton: Skeleton, knowledge: Knowledge, shelf: Shelf): BareStage {
  const at = (pH: number): BareStage => {
    const { plan, bare, precipitates } = soluble(task, withExcess(task, { ...skeleton.plan, pH }, knowledge), knowledge, shelf);
    return { skeleton, plan, bare, threats: threatsOf(task, bare, knowledge), analytePrecipitates: precipitates };
  };
  const middle = at(skeleton.plan.pH);
  if (bareCost(task, middle, knowledge) <= CONTENT) return middle;
  return otherPHs(skeleton, knowledge)
    .map(at)
    .reduce((best, next) => (bareCost(task, next, knowledge) < bareCost(task, best, knowledge) ? next : best), middle);
}

/** Below this cost (no threat, half the requirement used) no other pH is tried. */
const CONTENT = 0.6;
/** A threat that may need a mask weighs as much as an uncertainty several times the requirement. */
const THREAT_COST = 4;

function bareCost(task: Task, stage: BareStage, knowledge: Knowledge): number {
  if (stage.bare.status === "failed") return 50 + stage.threats.length;
  const used = (100 * stageBudget(task, stage.bare, knowledge).expanded) / task.requirementPercent;
  return Math.min(used, 10) + THREAT_COST * stage.threats.length + 10 * stage.bare.blockedBy.length;
}

/** Two other targets inside the window of the dye's use that the same buffer holds: towards its acid and its alkaline end. */
function otherPHs(skeleton: Skeleton, knowledge: Knowledge): number[] {
  const buffer = knowledge.buffers.get(skeleton.plan.buffer.id);
  const low = Math.max(skeleton.window[0], buffer?.workingPH[0] ?? 0);
  const high = Math.min(skeleton.window[1], buffer?.workingPH[1] ?? 14);
  if (high - low < 0.4) return [];
  const inset = (high - low) * 0.15;
  return [low + inset, high - inset].map((pH) => Math.round(pH * 10) / 10).filter((pH) => Math.abs(pH - skeleton.plan.pH) >= 0.2);
}

/** Works a titration out into the variants worth judging: masked in a few ways, or with the unmaskable separated. */
export function develop(task: Task, start: BareStage, knowledge: Knowledge, shelf: Shelf): DevelopedStage[] {
  const { plan, threats } = start;
  if (threats.length === 0) return [{ ...start, evaluation: start.bare, remaining: [] }];
  const out: DevelopedStage[] = [];
  const failed: Threat[] = [];
  const clean = (v: DevelopedStage): boolean =>
    v.remaining.length === 0 &&
    v.evaluation.status !== "failed" &&
    v.evaluation.blockedBy.length === 0 &&
    100 * stageBudget(task, v.evaluation, knowledge).expanded <= task.requirementPercent;
  // The sets come least burden first. An agent that was seen not to hold a component is not tried on it again.
  const useless = new Set<string>();
  let tried = 0;
  for (const set of maskSets(threats, plan, knowledge, shelf)) {
    if (set.steps.some((s) => s.masks.some((ion) => useless.has(`${s.agent} ${ion}`)))) continue;
    const settled = settle(task, plan, set, knowledge);
    const variant = { ...start, ...settled };
    out.push(variant);
    failed.push(...settled.remaining);
    for (const step of set.steps)
      for (const ion of step.masks) if (settled.remaining.some((t) => t.component === ion)) useless.add(`${step.agent} ${ion}`);
    if (out.filter(clean).length >= CLEAN_SETS_KEPT || ++tried >= SETS_TRIED) break;
  }
  const anyClean = out.some(clean);
  // Of the sets that did not work the best is kept, to show what was tried.
  if (anyClean) out.splice(0, out.length, ...out.filter(clean));
  else out.splice(1);
  if (!anyClean) out.push(...separations(task, plan, threats, failed, knowledge, shelf).map((v) => ({ ...start, ...v })));
  return out;
}

/** How many working sets of masks of one titration go on to judgement. */
const CLEAN_SETS_KEPT = 2;
/** How many sets are evaluated before the matrix is called unmaskable. */
const SETS_TRIED = 8;

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
): { plan: StagePlan; bare: StageEvaluation; precipitates: boolean } {
  const lost = (model: StageModel): boolean => {
    const ids = new Set([...model.solids, ...model.held.filter((h) => h.why === "precipitated").map((h) => h.by)]);
    return knowledge.solids.some((s) => ids.has(s.id) && plan.determines.some((ion) => (s.components[ion] ?? 0) > 0));
  };
  const bare = evaluate(task, plan, knowledge);
  // In a back titration the titrant goes in first; what would precipitate without it does not.
  if (plan.backTitrant !== null)
    return { plan, bare, precipitates: lost(stageModel(task, { ...plan, excessTitrantMolPerL: 0 }, knowledge)) };
  if (!lost(bare.model)) return { plan, bare, precipitates: false };
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
    const evaluation = evaluate(task, kept, knowledge);
    if (!lost(evaluation.model)) return { plan: kept, bare: evaluation, precipitates: true };
  }
  return { plan, bare, precipitates: true };
}
