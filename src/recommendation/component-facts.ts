import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { Facts } from "../inference/types.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { metalKinetics } from "../methods/kinetics.ts";
import { vesselSample } from "../methods/solution.ts";
import type { Task } from "../methods/types.ts";
import { finite, usable } from "./fact-values.ts";
import type { StageContext } from "./stage-facts.ts";

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
