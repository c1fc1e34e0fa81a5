import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { Facts } from "../inference/types.ts";
import { metalKinetics } from "../methods/kinetics.ts";
import { separationsOf } from "../methods/separation.ts";
import { countedIn, type Task } from "../methods/types.ts";
import { worst, finite, has, heats, usable } from "./fact-values.ts";
import { hazardTagsOf, reagentsOf } from "./reagents.ts";
import type { MethodUnderJudgement } from "./under-judgement.ts";

/** Below this, mol/L of the sample, a component is as good as absent. */
const ABSENT_MOL_PER_L = 1e-9;

const isThere = ({ analytes, matrix }: Task, ion: ComponentId): boolean =>
  [...analytes, ...matrix].some(({ component, molPerL }) => component === ion && molPerL > ABSENT_MOL_PER_L);

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
    maskedComponentCount: new Set(masking.flatMap((m) => m.masks).filter((ion) => isThere(task, ion))).size,
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
