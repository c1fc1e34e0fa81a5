import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { FactValue } from "../inference/types.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { metalKinetics } from "../methods/kinetics.ts";
import { conditionalConstants } from "../methods/stage-measures.ts";
import { stageModel } from "../methods/stage-model.ts";
import { countedIn, type Task } from "../methods/types.ts";

const USUAL = "EDTA";
/**
 * log10 of K'(analyte) c(analyte) over K'(other) c(other) from which two metals count as told apart: at equivalence 10^(-value/2) of
 * the analyte has changed places with the other metal, a hundredth of it at 4.
 */
const TOLD_APART_LOG10 = 4;
/** A metal below this part of the analyte decides nothing about the titrant. */
const NOTICEABLE_RATIO = 0.01;

/** Facts of what a titrant other than EDTA solves, and of the amount of a chelate. */
export function titrantFacts(
  task: Task,
  stage: DevelopedStage,
  knowledge: Knowledge,
): Record<string, FactValue | null | undefined> {
  const { plan, evaluation } = stage;
  const apart = toldApart(task, stage, knowledge);
  const analyteMolPerL = evaluation.presentMol / evaluation.model.volumeL;
  return {
    sparesHeat: sparesHeat(stage, knowledge),
    toldApart: apart,
    toldApartCount: apart.length,
    chelateToAnalyteRatio: plan.chelate && analyteMolPerL > 0 ? plan.chelate.molPerL / analyteMolPerL : 0,
    chelateLead: chelateLead(stage),
  };
}

/** By how much the titrant holds the metal of the chelate firmer than the analyte: the end point in bulk is that much surer. */
function chelateLead({ plan, evaluation }: DevelopedStage): number {
  const ofChelate = evaluation.log10ConditionalK.get(plan.chelate?.metal ?? "");
  const own = countedIn(plan).map((ion) => evaluation.log10ConditionalK.get(ion) ?? Number.NaN);
  const lead = (ofChelate ?? Number.NaN) - Math.min(...own);
  return Number.isFinite(lead) ? lead : 0;
}

function sparesHeat({ plan }: DevelopedStage, knowledge: Knowledge): boolean {
  if (plan.titrant.id === USUAL || plan.preparation.includes("heat") || plan.preparation.includes("boil")) return false;
  return countedIn(plan).some((ion) => {
    const { needs } = metalKinetics(knowledge, ion, USUAL);
    return needs === "heat" || needs === "boil";
  });
}

/** Metals in the vessel, neither masked nor removed, that this titrant tells from the analyte and EDTA, in the same vessel, does not. */
function toldApart(task: Task, { plan, evaluation }: DevelopedStage, knowledge: Knowledge): ComponentId[] {
  const { model } = evaluation;
  const [analyte] = plan.determines;
  if (plan.titrant.id === USUAL || plan.determines.length !== 1 || analyte === undefined || plan.detour) return [];
  const analyteMolPerL = evaluation.presentMol / model.volumeL;
  const dealtWith = new Set([...plan.determines, ...plan.removed, ...plan.masking.flatMap((m) => m.masks)]);
  const beside = [...model.solution.fromSample].filter(
    ([metal, molPerL]) =>
      model.metals.includes(metal) && !dealtWith.has(metal) && molPerL >= NOTICEABLE_RATIO * analyteMolPerL,
  );
  if (beside.length === 0 || evaluation.status === "failed") return [];
  const swapped = stageModel(task, { ...plan, titrant: { ...plan.titrant, id: USUAL }, chelate: null }, knowledge);
  const usual = conditionalConstants(swapped, swapped.at(evaluation.endPointML / 1000));
  const log10Apart = (constants: ReadonlyMap<ComponentId, number>, metal: ComponentId, molPerL: number): number =>
    (constants.get(analyte) ?? Number.NaN) -
    (constants.get(metal) ?? Number.NaN) +
    Math.log10(analyteMolPerL / molPerL);
  return beside
    .filter(
      ([metal, molPerL]) =>
        log10Apart(evaluation.log10ConditionalK, metal, molPerL) >= TOLD_APART_LOG10 &&
        log10Apart(usual, metal, molPerL) < TOLD_APART_LOG10,
    )
    .map(([metal]) => metal);
}
