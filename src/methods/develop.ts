import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { declared, withoutFlocs } from "./alkali-masks.ts";
import { bufferAmount } from "./buffers.ts";
import { holdsForGood } from "./demask.ts";
import { evaluate } from "./evaluate.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import { maskSets, pairHasComplex, type MaskSet } from "./masks.ts";
import { withExcess } from "./plan-excess.ts";
import { leastBuffer } from "./protons.ts";
import { withReleaseAmount } from "./release-plan.ts";
import { BULK_RATIO, separations } from "./separate-first.ts";
import { settle } from "./settle.ts";
import type { Shelf } from "./shelf.ts";
import type { Skeleton } from "./skeletons.ts";
import { soluble } from "./soluble.ts";
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

/**
 * First look at a skeleton: analyte kept dissolved, excess measured, threats named, pH moved where that disarms a threat.
 */
export function bareStage(task: Task, skeleton: Skeleton, knowledge: Knowledge, shelf: Shelf): BareStage {
  const at = (plan: StagePlan): BareStage => {
    const enough = withExcess(task, plan, knowledge);
    const measured = enough.release === null ? enough : withReleaseAmount(task, enough, knowledge);
    const { plan: made, bare, precipitates } = soluble(task, measured, knowledge, shelf);
    return { skeleton, plan: made, bare, threats: threatsOf(task, bare, knowledge), analytePrecipitates: precipitates };
  };
  const middle = at(skeleton.plan);
  if (bareCost(task, middle, knowledge) <= CONTENT) return middle;
  return otherConditions(task, skeleton, knowledge)
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
  const falls = stage.analytePrecipitates && stage.plan.backTitrant === null && stage.plan.auxiliary.length === 0;
  return (falls ? 20 : 0) + Math.min(used, 10) + THREAT_COST * stage.threats.length + 10 * stage.bare.blockedBy.length;
}

/** Other conditions of the same titration: towards the acid and the alkaline end of the dye's window, and with the least buffer. */
function otherConditions(task: Task, skeleton: Skeleton, knowledge: Knowledge): StagePlan[] {
  const { plan } = skeleton;
  const buffer = knowledge.buffers.get(plan.buffer.id);
  // A pair still buffers a whole unit from its pKa, whatever range is usual for it.
  const reach = (buffer?.pKa ?? []).flatMap((p) => [p.value - 1, p.value + 1]);
  const low = Math.max(skeleton.window[0], Math.min(buffer?.workingPH[0] ?? 0, ...reach));
  const high = Math.min(skeleton.window[1], Math.max(buffer?.workingPH[1] ?? 14, ...reach));
  const inset = (high - low) * 0.15;
  const pHs =
    high - low < 0.4
      ? []
      : [low + inset, high - inset].map((pH) => Math.round(pH * 10) / 10).filter((pH) => Math.abs(pH - plan.pH) >= 0.2);
  const plans = pHs.map((pH) => ({
    ...plan,
    pH,
    buffer: buffer ? { id: buffer.id, molPerL: bufferAmount(buffer, pH) } : plan.buffer,
  }));
  // A buffer that binds the analyte (ammonia) is best taken sparingly.
  const binds =
    buffer?.component != null && plan.determines.some((ion) => pairHasComplex(knowledge, buffer.component!, ion));
  if (!binds) return plans;
  const sparing = [plan, ...plans].map((p) => ({
    ...p,
    buffer: { ...p.buffer, molPerL: leastBuffer(task, p, buffer, knowledge) },
  }));
  return [...plans, ...sparing.filter((p) => p.buffer.molPerL < plan.buffer.molPerL)];
}

/**
 * Works a titration out into the variants worth judging: masked in a few ways, or with the unmaskable separated.
 * @param separate false where a titration after a separation is of no use
 */
export function develop(
  task: Task,
  start: BareStage,
  knowledge: Knowledge,
  shelf: Shelf,
  separate = true,
): DevelopedStage[] {
  const { threats } = start;
  const named = (stage: DevelopedStage): DevelopedStage => {
    const said = declared(stage, knowledge);
    if (said === stage) return stage;
    // What a step throws down may take minutes to form: once named it is in the calculation.
    const evaluation = evaluate(task, said.plan, knowledge);
    return { ...said, evaluation, remaining: threatsOf(task, evaluation, knowledge) };
  };
  const finished = (variants: readonly DevelopedStage[]): DevelopedStage[] =>
    variants.flatMap((v) => {
      const clear = v.remaining.length === 0 ? withoutFlocs(v, knowledge, shelf) : null;
      if (clear === null) return [named(v)];
      const evaluation = evaluate(task, clear, knowledge);
      const remaining = threatsOf(task, evaluation, knowledge);
      return [v, { ...v, plan: clear, evaluation, remaining }].map(named);
    });
  if (threats.length === 0) return finished([{ ...start, evaluation: start.bare, remaining: [] }]);
  const { out, failed } = masked(task, start, knowledge, shelf);
  const anyClean = out.some((variant) => isClean(task, variant, knowledge));
  // Of the sets that did not work the best is kept, to show what was tried.
  const kept = anyClean ? out.filter((variant) => isClean(task, variant, knowledge)) : out.slice(0, 1);
  const without = (removed: readonly ComponentId[]): BareStage => {
    // A single titration keeps its conditions: they are moved within its working range when it is judged.
    if (task.analytes.length === 1) return removing(task, start, removed, knowledge);
    const bottom = start.skeleton.plan;
    const cleared = { ...bottom, removed, preparation: ["separate", ...bottom.preparation] };
    return bareStage(task, { ...start.skeleton, plan: cleared }, knowledge, shelf);
  };
  const present = start.bare.presentMol / start.bare.model.volumeL;
  const bulk = threats.some((t) => t.molPerL > BULK_RATIO * present);
  if (!anyClean && countedWhole(task, start, knowledge)) kept.push({ ...start, evaluation: start.bare, remaining: [] });
  if (separate && (!anyClean || bulk))
    kept.push(...separations(task, without, threats, failed, knowledge, shelf).map((v) => ({ ...start, ...v })));
  return finished(kept);
}

/** The same titration after a separation, at the conditions it has. */
function removing(task: Task, start: BareStage, removed: readonly ComponentId[], knowledge: Knowledge): BareStage {
  const cleared = { ...start.plan, removed, preparation: ["separate", ...start.plan.preparation] };
  const plan = withExcess(task, cleared, knowledge);
  const bare = evaluate(task, plan, knowledge);
  return { ...start, plan, bare, threats: threatsOf(task, bare, knowledge) };
}

/** What no mask holds may be titrated along where it neither minds the dye nor breaks the requirement: its bias stands in the result. */
const countedWhole = (task: Task, { bare, threats }: BareStage, knowledge: Knowledge): boolean => {
  const ofRequirement = (t: Threat): number => (100 * t.biasFraction) / task.requirementPercent;
  return (
    bare.status !== "failed" &&
    bare.blockedBy.length === 0 &&
    threats.every((t) => t.titrates && !t.blocks && ofRequirement(t) > WHOLE_PART_OF_REQUIREMENT) &&
    threats.reduce((sum, t) => sum + ofRequirement(t), 0) < 1 &&
    100 * stageBudget(task, bare, knowledge).expanded <= task.requirementPercent
  );
};

/** A threat by less than this part of the requirement is one for another reason (it lies as flocs). */
const WHOLE_PART_OF_REQUIREMENT = 0.12;

const isClean = (task: Task, v: DevelopedStage, knowledge: Knowledge): boolean =>
  v.remaining.length === 0 &&
  v.evaluation.status !== "failed" &&
  v.evaluation.blockedBy.length === 0 &&
  100 * stageBudget(task, v.evaluation, knowledge).expanded <= task.requirementPercent;

/** The variants with masks that were tried, and what some of them failed to hold. */
function masked(
  task: Task,
  start: BareStage,
  knowledge: Knowledge,
  shelf: Shelf,
): { readonly out: DevelopedStage[]; readonly failed: readonly Threat[] } {
  const { plan, threats } = start;
  const out: DevelopedStage[] = [];
  const failed: Threat[] = [];
  // The sets come least burden first. An agent that was seen not to hold a component is not tried on it again.
  const useless = new Set<string>();
  const hopeless = (set: MaskSet): boolean =>
    set.steps.some((s) => s.masks.some((ion) => useless.has(`${s.agent} ${ion}`)));
  const attempt = (set: MaskSet): DevelopedStage => {
    const settled = settle(task, plan, set, knowledge);
    failed.push(...settled.remaining);
    for (const step of set.steps)
      for (const ion of step.masks)
        if (settled.remaining.some((t) => t.component === ion)) useless.add(`${step.agent} ${ion}`);
    return { ...start, ...settled };
  };
  const sets = maskSets(threats, plan, knowledge, shelf);
  let working = 0;
  for (const set of sets) {
    if (hopeless(set)) continue;
    const variant = attempt(set);
    out.push(variant);
    if (isClean(task, variant, knowledge)) working++;
    if (working >= CLEAN_SETS_KEPT || out.length >= SETS_TRIED) break;
  }
  // What another titration of the vessel is to find may be masked for a while: a set that gives it back is a rival of any burden.
  const later = threats.map((t) => t.component).filter((ion) => task.analytes.some((a) => a.component === ion));
  const givesBack = (masking: readonly MaskingStep[]): boolean => !holdsForGood(masking, later, knowledge, shelf);
  if (later.length === 0 || out.some((v) => isClean(task, v, knowledge) && givesBack(v.plan.masking)))
    return { out, failed };
  for (const set of sets.filter((s) => givesBack(s.steps)).slice(0, SETS_GIVING_BACK)) {
    if (hopeless(set)) continue;
    const variant = attempt(set);
    out.push(variant);
    if (isClean(task, variant, knowledge)) break;
  }
  return { out, failed };
}

/** How many working sets of masks of one titration go on to judgement. */
const CLEAN_SETS_KEPT = 2;
/** How many sets are evaluated before the matrix is called unmaskable. */
const SETS_TRIED = 8;
/** How many sets that give the other analytes back are evaluated where the least burdensome ones do not. */
const SETS_GIVING_BACK = 3;
