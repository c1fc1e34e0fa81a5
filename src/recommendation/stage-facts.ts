import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { Facts } from "../inference/types.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { metalKinetics } from "../methods/kinetics.ts";
import { bufferStrain } from "../methods/protons.ts";
import { supersaturations, type Supersaturation } from "../methods/saturation.ts";
import { vesselSample } from "../methods/solution.ts";
import { countedIn, type Task } from "../methods/types.ts";
import { stageBudget } from "../methods/uncertainty.ts";
import type { WorkingRange } from "../methods/working-range.ts";
import { detectionFacts } from "./detection-facts.ts";
import { detourFacts } from "./detour-facts.ts";
import { finite, has, heats, usable, worst } from "./fact-values.ts";
import { releaseFacts } from "./release-facts.ts";
import { titrantFacts } from "./titrant-facts.ts";

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
