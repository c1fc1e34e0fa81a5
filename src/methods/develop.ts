import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { declared, lyingAsHydroxide, withoutFlocs } from "./alkali-masks.ts";
import { evaluateStage, type StageEvaluation } from "./evaluate-stage.ts";
import { boundAtBackEndPoint } from "./excess.ts";
import { frozenComplexes } from "./frozen.ts";
import { benchAmount, maskSets, pairHasComplex, type MaskSet } from "./masks.ts";
import { evaluateRelease } from "./release.ts";
import { releaseExcess, withReleaseAmount } from "./release-plan.ts";
import type { Shelf } from "./shelf.ts";
import { remembered } from "./remembered.ts";
import { bufferAmount, excessFor, withAuxiliary, type Skeleton } from "./skeletons.ts";
import { vesselSample } from "./solution.ts";
import { leastBuffer } from "./protons.ts";
import { standardisedAlike } from "./standardise.ts";
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

/** Works a titration out into the variants worth judging: masked in a few ways, or with the unmaskable separated. */
export function develop(task: Task, start: BareStage, knowledge: Knowledge, shelf: Shelf): DevelopedStage[] {
  const { plan, threats } = start;
  const finished = (variants: readonly DevelopedStage[]): DevelopedStage[] =>
    variants.flatMap((v) => {
      const plans =
        v.remaining.length === 0
          ? [withoutFlocs(v, knowledge, shelf), flocsSeparated(task, v, knowledge)].filter((p) => p !== null)
          : [];
      const others = plans.map((other) => {
        const evaluation = evaluate(task, other, knowledge);
        return { ...v, plan: other, evaluation, remaining: threatsOf(task, evaluation, knowledge) };
      });
      return [v, ...others].map((each) => declared(each, knowledge));
    });
  if (threats.length === 0) return finished([{ ...start, evaluation: start.bare, remaining: [] }]);
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
      for (const ion of step.masks)
        if (settled.remaining.some((t) => t.component === ion)) useless.add(`${step.agent} ${ion}`);
    if (out.filter(clean).length >= CLEAN_SETS_KEPT || ++tried >= SETS_TRIED) break;
  }
  const anyClean = out.some(clean);
  // Of the sets that did not work the best is kept, to show what was tried.
  if (anyClean) out.splice(0, out.length, ...out.filter(clean));
  else out.splice(1);
  const present = start.bare.presentMol / start.bare.model.volumeL;
  const bulk = threats.some((t) => t.molPerL > BULK_RATIO * present);
  if (!anyClean || bulk)
    out.push(...separations(task, plan, threats, failed, knowledge, shelf).map((v) => ({ ...start, ...v })));
  return finished(out);
}

/** How many working sets of masks of one titration go on to judgement. */
const CLEAN_SETS_KEPT = 2;
/** A component above this ratio to the analyte may be better taken out than masked, even where a mask holds. */
const BULK_RATIO = 0.5;
/** How many sets are evaluated before the matrix is called unmaskable. */
const SETS_TRIED = 8;

/** The same direct titration after metals that would lie in it as hydroxides in bulk have been taken out; null where none do. */
function flocsSeparated(task: Task, v: Settled, knowledge: Knowledge): StagePlan | null {
  if (v.plan.backTitrant !== null) return null;
  const present = v.evaluation.presentMol / v.evaluation.model.volumeL;
  const inVessel = new Map(vesselSample(task, v.plan).map((c) => [c.component, c.inVesselMolPerL]));
  const flocs = lyingAsHydroxide(v, knowledge).filter(
    (ion) => ion !== "Mg2+" && (inVessel.get(ion) ?? 0) > BULK_RATIO * present,
  );
  if (flocs.length === 0) return null;
  const { preparation } = v.plan;
  return {
    ...v.plan,
    removed: [...v.plan.removed, ...flocs],
    preparation: preparation.includes("separate") ? preparation : ["separate", ...preparation],
  };
}

type Settled = Pick<DevelopedStage, "plan" | "evaluation" | "remaining">;

/** Applies a set of masks in the amounts they need, then lets practice records stand in where constants say no but a reported level says yes. */
function settle(task: Task, plan: StagePlan, set: MaskSet, knowledge: Knowledge): Settled {
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
  const choices = [threats.filter((t) => hopeless.has(t.component)), metals, threats].filter((c) => c.length > 0);
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

/** Titrant in excess for a back titration: a good third above everything in the vessel that still binds it at the end point. */
function withExcess(task: Task, plan: StagePlan, knowledge: Knowledge): StagePlan {
  if (plan.backTitrant === null) return plan;
  if (plan.detour) return withExcessForWay(task, plan, knowledge);
  if (plan.release !== null) return { ...plan, excessTitrantMolPerL: releaseExcess(task, plan, knowledge) };
  const everything = vesselSample(task, plan)
    .filter((c) => knowledge.components.get(c.component)?.kind === "metal" && !plan.removed.includes(c.component))
    .reduce((s, c) => s + c.inVesselMolPerL, 0);
  // Titrant that an earlier titration left is bound to its own metals already.
  const bound = boundAtBackEndPoint(task, plan, knowledge) - (plan.carried?.titrantMolPerL ?? 0);
  return { ...plan, excessTitrantMolPerL: excessFor(Math.max(bound, everything * 1e-6)) };
}

/** Titrant over what binds, tried in turn until a collected precipitate has dissolved. */
const EXCESS_TO_DISSOLVE = [1, 1.5, 2.5];
/** Share of the precipitate that may lie undissolved. */
const UNDISSOLVED_BORNE = 1e-3;

/** Titrant in excess for the metal of a way round: what binds and a good third, more where the precipitate would not dissolve in it. */
function withExcessForWay(task: Task, plan: StagePlan, knowledge: Knowledge): StagePlan {
  const bare = stageModel(task, { ...plan, excessTitrantMolPerL: 0 }, knowledge);
  const { way, totals } = bare.solution;
  // Titrant that the precipitate sets free needs no further excess.
  if (!way || way.record.kind === "conversion") return plan;
  const chelated = plan.chelate ? [plan.chelate.metal] : [];
  const metals = bare.metals.filter((m) => !chelated.includes(m)).reduce((s, m) => s + (totals.get(m) ?? 0), 0);
  let made = plan;
  for (const factor of EXCESS_TO_DISSOLVE) {
    made = { ...plan, excessTitrantMolPerL: excessFor(factor * metals) };
    const model = stageModel(task, made, knowledge);
    const start = model.at(0);
    const lying = model.system.solids.reduce((s, _, i) => s + (start.result.solidsMolPerL[i] ?? 0), 0);
    if (lying <= UNDISSOLVED_BORNE * way.expectedMolPerL) break;
  }
  return made;
}

/**
 * Evaluates a titration, standardised alike, with complexes frozen that, once formed hot, do not exchange in the cold acid solution.
 * A release is read between two end points of the same kind.
 */
export function evaluate(task: Task, plan: StagePlan, knowledge: Knowledge): StageEvaluation {
  return remembered("titration", task, plan, knowledge, () =>
    standardisedAlike(
      task,
      plan.release === null
        ? evaluateStage(task, plan, knowledge, frozenComplexes(task, plan, knowledge))
        : evaluateRelease(task, plan, knowledge),
      knowledge,
    ),
  );
}

/** Share of the analyte that may lie as a redissolving deposit when the titration starts. */
const DEPOSIT_BORNE_FRACTION = 0.3;

/** Adds what keeps the analyte dissolved where it would precipitate before the titrant reaches it. */
function soluble(
  task: Task,
  plan: StagePlan,
  knowledge: Knowledge,
  shelf: Shelf,
): { plan: StagePlan; bare: StageEvaluation; precipitates: boolean } {
  // A deposit that redissolves as the titrant takes the rest is no loss while it is the smaller part.
  const lost = (model: StageModel): boolean => {
    const start = model.at(0);
    const deposited = model.system.solids.reduce((sum, solid, i) => {
      const ions = plan.determines.reduce((n, ion) => n + (solid.components[ion] ?? 0), 0);
      return sum + ions * (start.result.solidsMolPerL[i] ?? 0);
    }, 0);
    const gone = model.held
      .filter((h) => h.why === "precipitated" && plan.determines.includes(h.component))
      .reduce((s, h) => s + h.molPerL, 0);
    const present = plan.determines.reduce((s, ion) => s + (model.solution.fromSample.get(ion) ?? 0), 0);
    return gone > 1e-3 * present || deposited > DEPOSIT_BORNE_FRACTION * present;
  };
  const bare = evaluate(task, plan, knowledge);
  // Whether the metal of a way round stays dissolved, the way itself has settled.
  if (plan.detour) return { plan, bare, precipitates: false };
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
