import { vesselSample } from "../methods/solution.ts";
import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { Facts, FactValue } from "../inference/types.ts";
import { metalKinetics } from "../methods/kinetics.ts";
import { bufferStrain } from "../methods/protons.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { detectionFacts } from "./detection-facts.ts";
import type { EvaluatedMethod } from "../methods/methods.ts";
import { separationsOf } from "../methods/separation.ts";
import { supersaturations, type Supersaturation } from "../methods/saturation.ts";
import { countedIn, type Task } from "../methods/types.ts";
import { stageBudget } from "../methods/uncertainty.ts";
import type { StageChoices } from "../methods/optimise.ts";
import type { WorkingRange } from "../methods/working-range.ts";
import { detourFacts } from "./detour-facts.ts";
import { releaseFacts } from "./release-facts.ts";
import { titrantFacts } from "./titrant-facts.ts";
import { hazardTagsOf, reagentsOf } from "./reagents.ts";

/** A method on its way to judgement, with what the facts need besides its evaluation. */
export interface MethodUnderJudgement {
  readonly method: EvaluatedMethod;
  readonly ranges: readonly (WorkingRange | null)[];
  /** Why each titration is done at its pH and with its amounts; absent where that was not looked at. */
  readonly choices?: readonly StageChoices[];
  /** See `bearsRicherMatrix`; null also where it was not looked at. */
  readonly bearsRicherMatrix: boolean | null;
}

const KINETIC_ORDER = ["fast", "slow", "inert"] as const;
type Kinetics = (typeof KINETIC_ORDER)[number];
const worst = (classes: readonly Kinetics[]): Kinetics =>
  KINETIC_ORDER[Math.max(0, ...classes.map((c) => KINETIC_ORDER.indexOf(c)))] ?? "fast";

/** Leaves out what could not be calculated: an absent fact is guarded by its status, a wrong number is not. */
function finite(facts: Record<string, FactValue | null | undefined>): Facts {
  const out: Record<string, FactValue> = {};
  for (const [name, value] of Object.entries(facts)) {
    if (value === null || value === undefined) continue;
    if (typeof value === "number" && !Number.isFinite(value)) continue;
    out[name] = value;
  }
  return out;
}

const has = (stage: DevelopedStage, step: string): boolean => stage.plan.preparation.includes(step);
const heats = (stage: DevelopedStage): boolean => has(stage, "heat") || has(stage, "boil") || has(stage, "warm");
const usable = (stage: DevelopedStage): boolean => stage.evaluation.status !== "failed";

/** Facts of a whole method, by the catalogue of the rule layer. */
export function methodFacts(task: Task, judged: MethodUnderJudgement, knowledge: Knowledge): Facts {
  const { method } = judged;
  const { stages } = method;
  const converged = stages.every(usable);
  const worstResult = [...method.results].sort((a, b) => b.budget.expanded - a.budget.expanded)[0];
  const bias = [...method.results].sort((a, b) => Math.abs(b.biasFraction) - Math.abs(a.biasFraction))[0];
  const expandedPercent = 100 * (worstResult?.budget.expanded ?? Number.NaN);
  const reagents = [...new Set(stages.flatMap((s) => reagentsOf(s.plan)))];
  const masking = stages.flatMap((s) => s.plan.masking);
  const titres = stages.map((s) => s.evaluation.endPointML);
  const separations = separationsOf(
    stages.map((s) => s.plan),
    knowledge,
  );
  return finite({
    mode: method.mode,
    titrant: stages[0]?.plan.titrant.id ?? "none",
    backTitrant: stages.find((s) => s.plan.backTitrant)?.plan.backTitrant?.id ?? "none",
    analytes: task.analytes.map((a) => a.component),
    analyteCount: task.analytes.length,
    stageCount: stages.length,
    portionCount: method.portions,
    biasPercent: converged ? 100 * (bias?.biasFraction ?? Number.NaN) : null,
    expandedUncertaintyPercent: converged ? expandedPercent : null,
    requirementPercent: task.requirementPercent,
    meetsRequirement: converged && expandedPercent <= task.requirementPercent,
    uncertaintyToRequirementRatio: converged ? expandedPercent / task.requirementPercent : null,
    evaluationStatus: !converged
      ? "failed"
      : stages.some((s) => s.evaluation.status === "outOfModelRange")
        ? "outOfModelRange"
        : "converged",
    indicators: stages.flatMap((s) => (s.plan.indicator ? [s.plan.indicator.id] : [])),
    detections: [...new Set(stages.map((s) => s.plan.detection))],
    buffers: [...new Set(stages.map((s) => s.plan.buffer.id))],
    reagents,
    hazards: [
      ...new Set([
        ...hazardTagsOf(
          stages.map((s) => s.plan),
          knowledge,
        ),
        ...separations
          .flatMap((s) => s.steps.flatMap((step) => step.record.hazards))
          .flatMap((id) => knowledge.reagents.get(id)?.hazardTags ?? []),
      ]),
    ],
    reagentCount: new Set([
      ...masking.filter((m) => m.agent !== "hydroxide").map((m) => m.agent),
      ...stages.flatMap((s) => [
        ...s.plan.auxiliary.map((a) => a.id),
        ...s.plan.added.map((a) => a.id),
        s.plan.buffer.id,
      ]),
    ]).size,
    dyeCount: new Set(stages.flatMap((s) => (s.plan.indicator ? [s.plan.indicator.id] : []))).size,
    specialReagentCount: reagents.filter((id) => isSpecialReagent(knowledge, id)).length,
    heats: stages.some(heats),
    boils: stages.some((s) => has(s, "boil")),
    separates: stages.some((s) => s.plan.removed.length > 0),
    separationHazards: [...new Set(separations.flatMap((s) => s.steps.flatMap((step) => step.record.hazards)))],
    separationStepCount: new Set(separations.flatMap((s) => s.steps.map((step) => step.record.id))).size,
    separationUnknownCount: new Set(separations.flatMap((s) => s.unknown)).size,
    separationUnknown: [...new Set(separations.flatMap((s) => s.unknown))],
    preparation: [...new Set(stages.flatMap((s) => s.plan.preparation))],
    maskedComponentCount: new Set(masking.flatMap((m) => m.masks)).size,
    empiricalMasking: masking.some((m) => m.basis === "empirical"),
    empiricalEndPoint: stages.some((s) => s.evaluation.basis === "empirical"),
    analyteKinetics: worst(
      stages.flatMap((s) => countedIn(s.plan).map((ion) => metalKinetics(knowledge, ion, s.plan.titrant.id).class)),
    ),
    convertsByRedox: masking.some((m) => m.via === "reduction" || m.via === "oxidation"),
    anyBlocked: stages.some((s) => s.evaluation.blockedBy.length > 0 || s.evaluation.why === "dye-held"),
    titrantIsUsual: stages.every((s) => s.plan.titrant.id === "EDTA"),
    titrantStrengthMolPerL: stages[0]?.plan.titrant.molPerL ?? 0,
    minTitreML: converged ? Math.min(...titres) : null,
    maxTitreML: converged ? Math.max(...titres) : null,
    buretteML: task.laboratory.buretteML,
    richerMatrixBreaks: judged.bearsRicherMatrix === false,
  });
}

function isSpecialReagent(knowledge: Knowledge, id: string): boolean {
  const records = [
    knowledge.titrants.get(id),
    knowledge.agents.get(id),
    knowledge.indicators.get(id),
    knowledge.buffers.get(id),
  ];
  return records.some((r) => r?.special === true);
}

/** What stage and component facts share: the solution as it would stand before the titrant. */
export interface StageContext {
  readonly solids: readonly Supersaturation[];
}

export const stageContext = (task: Task, stage: DevelopedStage, knowledge: Knowledge): StageContext => ({
  solids: supersaturations(task, stage.plan, knowledge, stage.evaluation.model.ionicStrengthMolPerL),
});

/** Facts of one titration of a method. */
export function stageFacts(
  task: Task,
  stage: DevelopedStage,
  range: WorkingRange | null,
  context: StageContext,
  knowledge: Knowledge,
): Facts {
  const { plan, evaluation, skeleton } = stage;
  const { model } = evaluation;
  const ok = usable(stage);
  const indicator = model.indicator;
  const own = countedIn(plan)
    .map((ion) => evaluation.log10ConditionalK.get(ion))
    .filter((v) => v !== undefined);
  const weakest = own.length > 0 ? Math.min(...own) : null;
  const others = [...evaluation.log10ConditionalK].filter(
    ([ion]) =>
      !countedIn(plan).includes(ion) &&
      ion !== plan.backTitrant?.id &&
      ion !== plan.chelate?.metal &&
      evaluation.titrated.has(ion),
  );
  const strongest = others.length > 0 ? Math.max(...others.map(([, k]) => k)) : null;
  const solidWith = (pick: (ids: readonly ComponentId[]) => boolean): boolean =>
    context.solids.some((s) => s.pace !== "no" && pick(s.components));
  const shownOthers = alsoShown(task, stage);
  const holds = 100 * stageBudget(task, evaluation, knowledge).expanded <= task.requirementPercent;
  const window = holds ? range : null;
  const precipitates = stage.analytePrecipitates;
  const magnesium = vesselSample(task, plan).find((c) => c.component === "Mg2+")?.inVesselMolPerL ?? 0;
  const analyteMolPerL = evaluation.presentMol / model.volumeL;
  const magnesiumOut = model.solids.some(
    (id) => (knowledge.solids.find((s) => s.id === id)?.components["Mg2+"] ?? 0) > 0,
  );
  const strain = ok ? bufferStrain(evaluation, task.temperatureC, knowledge) : null;
  return finite({
    stageMode: plan.mode,
    determines: plan.determines,
    counted: countedIn(plan),
    ...detourFacts(task, stage),
    titrant: plan.titrant.id,
    backTitrant: plan.backTitrant?.id ?? "none",
    pH: plan.pH,
    // A method that misses the requirement has no window, which is not the same as a narrow one.
    pHLow: window?.low,
    pHHigh: window?.high,
    pHWindowWidth: window ? window.high - window.low : null,
    buffer: plan.buffer.id,
    bufferMolPerL: plan.buffer.molPerL,
    bufferCapacityMolPerLPerPH: strain?.capacityMolPerLPerPH,
    pHDrop: strain?.pHDrop,
    detection: plan.detection,
    indicator: plan.indicator?.id ?? "none",
    indicatorClass: indicator?.class ?? "none",
    endPointModel: indicator?.endPointModel ?? "none",
    endPointBasis: evaluation.basis,
    indicatorUse: skeleton.use,
    indicatorUseBasis: skeleton.useBasis,
    indicatorUseConfidence: skeleton.useConfidence ?? "none",
    contrast: contrastAt(stage),
    dyeShowsOthers: shownOthers,
    dyeShowsOtherCount: shownOthers.length,
    log10ConditionalK: ok ? weakest : null,
    log10ConditionalKGap: ok && weakest !== null && strongest !== null ? weakest - strongest : null,
    sharpnessPercent: ok ? 100 * evaluation.sharpnessFraction : null,
    sharpnessToRequirementRatio: ok ? (100 * evaluation.sharpnessFraction) / task.requirementPercent : null,
    endPointBiasPercent: ok ? 100 * (evaluation.ledger.find((l) => l.source === "end-point")?.fraction ?? 0) : null,
    titreML: ok ? evaluation.endPointML : null,
    titreToBuretteRatio: ok ? evaluation.endPointML / task.laboratory.buretteML : null,
    blocked: evaluation.blockedBy.length > 0 || evaluation.why === "dye-held",
    blockedBy: evaluation.blockedBy,
    indicatorMetal: evaluation.indicatorMetal ?? "none",
    analyteKinetics: worst(countedIn(plan).map((ion) => metalKinetics(knowledge, ion, plan.titrant.id).class)),
    heats: heats(stage),
    analytePrecipitates: precipitates,
    analyteKeptInSolution: precipitates && (plan.backTitrant !== null || plan.auxiliary.length > 0),
    excessTitrantFirst: has(stage, "excess-titrant-first"),
    carbonateRisk: solidWith((ids) => ids.includes("carbonate")),
    phosphateRisk: solidWith((ids) => ids.includes("phosphate")),
    hydroxideMaskedMagnesiumRatio: magnesiumOut && analyteMolPerL > 0 ? magnesium / analyteMolPerL : 0,
    ionicStrengthMolPerL: model.ionicStrengthMolPerL,
    outOfModelRange: model.system.outOfModelRange,
    auxiliaries: plan.auxiliary.map((a) => a.id),
    maskAgents: [...new Set(plan.masking.map((m) => m.agent))],
    preparation: plan.preparation,
    reducedByIodide: plan.masking.some(
      (m) => m.agent === "iodide" && m.masks.some((ion) => ion === "Cu2+" || ion === "Fe3+" || ion === "Tl3+"),
    ),
    reductants: [...new Set(plan.masking.filter((m) => m.via === "reduction").map((m) => m.agent))],
    temperatureRegime: regimeOf(task, stage),
    backTitrantStealsFraction: ok && plan.backTitrant ? evaluation.backTitrantStealsFraction : null,
    chelateAdded: plan.chelate ? `${plan.chelate.metal.replace(/\d?\+$/, "")}-${plan.chelate.ligand}` : "none",
    ...detectionFacts(stage, knowledge),
    solutionStatus: ok ? "converged" : "failed",
    ...releaseFacts(task, stage, knowledge),
    ...titrantFacts(task, stage, knowledge),
  });
}

/** From these temperatures, in C, a room counts as cold or warm, a solution as hot (common practice). */
const REGIMES = { coldBelow: 15, warmFrom: 35, hotFrom: 60 } as const;

/** How warm the solution is while it is titrated: by its steps of preparation, else by the temperature of the brief. */
function regimeOf({ temperatureC }: Task, stage: DevelopedStage): "cold" | "ambient" | "warm" | "hot" {
  if (has(stage, "boil") || has(stage, "heat") || temperatureC >= REGIMES.hotFrom) return "hot";
  if (has(stage, "warm") || temperatureC >= REGIMES.warmFrom) return "warm";
  return temperatureC < REGIMES.coldBelow ? "cold" : "ambient";
}

/** Share of the analyte from which a metal that the dye also answers is worth a word. */
const NOTICEABLE_RATIO = 0.05;

/** Metals of the matrix, left in the vessel, that the dye is also in use for at this pH. */
function alsoShown(task: Task, stage: DevelopedStage): ComponentId[] {
  const { plan, evaluation } = stage;
  // What stays bound through a release is in neither colour.
  if (plan.release !== null) return [];
  const analyteMolPerL = evaluation.presentMol / evaluation.model.volumeL;
  const used = (evaluation.model.indicator?.uses ?? [])
    // With a chelate in the vessel the dye answers whatever sets the chelate's metal free.
    .filter(
      (u) =>
        (u.mode === "direct" || (u.mode === "displacement" && plan.chelate !== null)) &&
        plan.pH >= u.pH[0] - 0.5 &&
        plan.pH <= u.pH[1] + 0.5,
    )
    .flatMap((u) => u.ions);
  return (
    vesselSample(task, plan)
      .filter((c) => !plan.determines.includes(c.component) && !plan.removed.includes(c.component))
      // What a way round leaves in its filtrate is not in the vessel.
      .filter((c) => (evaluation.model.solution.totals.get(c.component) ?? 0) > 0)
      // What an earlier titration of the same vessel has bound is no mask's business.
      .filter((c) => !(plan.carried?.metals.includes(c.component) ?? false))
      .filter((c) => used.includes(c.component) && c.inVesselMolPerL > NOTICEABLE_RATIO * analyteMolPerL)
      .map((c) => c.component)
  );
}

/** The contrast of the dye at the pH of the titration; a dye without colour records at this pH counts as good only in its published window. */
export function contrastAt(stage: DevelopedStage): "good" | "poor" | "none" {
  const indicator = stage.evaluation.model.indicator;
  // A photometer reads at one wavelength: tints that an eye confuses are apart for it.
  if (!indicator || stage.plan.detection === "photometric") return "good";
  const here = indicator.colours.filter((c) => stage.plan.pH >= c.pH[0] && stage.plan.pH <= c.pH[1]);
  if (here.length === 0) return stage.skeleton.use === "published" ? "good" : "poor";
  const order = ["none", "poor", "good"] as const;
  return order[Math.max(...here.map((c) => order.indexOf(c.contrast)))] ?? "poor";
}

/** What practice says of an agent with an ion at this pH: it masks, it masks in part, or nothing is on record. */
function standingOf(agent: string, ion: ComponentId, pH: number, knowledge: Knowledge): "masks" | "partial" | "none" {
  const rows = knowledge.masking.filter(
    (r) => r.agent === agent && r.ion === ion && pH >= r.pH[0] - 0.3 && pH <= r.pH[1] + 0.3,
  );
  if (rows.some((r) => r.effect === "masks")) return "masks";
  return rows.some((r) => r.effect === "partial") ? "partial" : "none";
}

/** Facts of every component of the sample as this titration treats it. */
export function componentFacts(
  task: Task,
  stage: DevelopedStage,
  context: StageContext,
  knowledge: Knowledge,
): { component: ComponentId; facts: Facts }[] {
  const { plan, evaluation } = stage;
  const analyteMolPerL = evaluation.presentMol / evaluation.model.volumeL;
  return vesselSample(task, plan).map(({ component, inVesselMolPerL }) => {
    const step = plan.masking.find((m) => m.masks.includes(component));
    const removed = plan.removed.includes(component);
    const record = step
      ? knowledge.masking.find((r) => r.agent === step.agent && r.ion === component && r.upToMolPerL !== null)
      : undefined;
    const solid = context.solids.find((s) => s.components.includes(component) && s.pace !== "no");
    const kind = knowledge.components.get(component)?.kind ?? "inert";
    const indicator = evaluation.model.indicator;
    const wouldBlock =
      stage.bare.blockedBy.includes(component) || stage.threats.some((t) => t.component === component && t.blocks);
    return {
      component,
      facts: finite({
        component,
        role: plan.determines.includes(component) ? "analyte" : "matrix",
        kind: kind === "metal" ? "metal" : "ligand",
        stageMode: plan.mode,
        pH: plan.pH,
        indicator: plan.indicator?.id ?? "none",
        indicatorClass: indicator?.class ?? "none",
        titrant: plan.titrant.id,
        buffer: plan.buffer.id,
        presentMolPerL: inVesselMolPerL,
        ratioToAnalyte: analyteMolPerL > 0 ? inVesselMolPerL / analyteMolPerL : 0,
        titratedFraction: usable(stage) ? evaluation.titrated.get(component) : null,
        biasPercent: usable(stage) ? 100 * (evaluation.biasOf.get(component) ?? 0) : null,
        blocksIndicator:
          evaluation.blockedBy.includes(component) ||
          stage.remaining.some((t) => t.component === component && t.blocks),
        wouldBlock,
        maskedBy: step ? step.agent : removed ? "separate" : "none",
        maskedVia: step?.via ?? "none",
        maskingBasis: step?.basis ?? "none",
        maskStanding: step ? standingOf(step.agent, component, plan.pH, knowledge) : "none",
        empiricalLimitMolPerL: step?.basis === "empirical" ? (record?.upToMolPerL ?? null) : null,
        ratioToEmpiricalLimit:
          step?.basis === "empirical" && record?.upToMolPerL ? inVesselMolPerL / record.upToMolPerL : null,
        maskMolPerL: step?.molPerL ?? 0,
        precipitates: solid !== undefined,
        saturationIndex: solid?.saturationIndex ?? null,
        kinetics: kind === "metal" ? metalKinetics(knowledge, component, plan.titrant.id).class : "fast",
        complexesAnalyte: stage.threats.some((t) => t.component === component && t.holdsAnalyte),
        oxidisesIndicator: OXIDANTS.has(component),
        solutionStatus: usable(stage) ? "converged" : "failed",
      }),
    };
  });
}

/** Ions that oxidise metallochromic dyes (common practice: Ce(IV), chromate, permanganate, vanadate, Mn(III)). */
export const OXIDANTS: ReadonlySet<ComponentId> = new Set([
  "Ce4+",
  "chromate",
  "permanganate",
  "VO2^+",
  "Mn3+",
  "Co3+",
]);
