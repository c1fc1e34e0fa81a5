import type { Knowledge } from "../constants/knowledge.ts";
import { evaluateStage, type StageEvaluation } from "./evaluate-stage.ts";
import { remembered } from "./remembered.ts";
import type { StagePlan, Task } from "./types.ts";

/**
 * The evaluation as it counts when the titrant was standardised against the same metal with the same dye, pH and buffer: what the
 * observer does wrong in both titrations cancels (common practice: Ca or Mg for hardness, Zn for hexamine work). In a back
 * titration the blank, titrant against back titrant to the same end point, does the same.
 * Left as it is where no primary standard of the metal is on record, or where the standard titration itself has no end point.
 */
export function standardisedAlike(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): StageEvaluation {
  const { plan } = evaluation.model;
  if (evaluation.status === "failed" || evaluation.basis === "empirical") return evaluation;
  if (plan.backTitrant === null && !plan.determines.every((ion) => knowledge.standards.some((s) => s.forIon === ion)))
    return evaluation;
  const standard = standardPlan(task, plan);
  const alone = remembered("standard", task, standard, knowledge, () =>
    evaluateStage(standardTask(task, plan), standard, knowledge),
  );
  // An end point that is wrong by more than this is not one to standardise with: the method itself is wrong.
  if (alone.status === "failed" || Math.abs(alone.biasFraction) > CANCELS_UP_TO) return evaluation;
  const biasFraction = (1 + evaluation.biasFraction) / (1 + alone.biasFraction) - 1;
  return {
    ...evaluation,
    biasFraction,
    ledger: [...evaluation.ledger, { source: "standardised alike", fraction: biasFraction - evaluation.biasFraction }],
  };
}

/** Largest bias of the standard titration, relative, that an analyst would let cancel. */
const CANCELS_UP_TO = 0.02;

/** The metal alone, at the same level. */
function standardTask(task: Task, plan: StagePlan): Task {
  return { ...task, analytes: task.analytes.filter((a) => plan.determines.includes(a.component)), matrix: [] };
}

function standardPlan(task: Task, plan: StagePlan): StagePlan {
  const dilution = task.portion.volumeML / task.portion.titrationVolumeML;
  const amount = task.analytes
    .filter((a) => plan.determines.includes(a.component))
    .reduce((s, a) => s + a.molPerL * dilution, 0);
  return {
    ...plan,
    masking: [],
    removed: [],
    carried: null,
    excessTitrantMolPerL: plan.backTitrant === null ? 0 : STANDARD_EXCESS * amount,
  };
}

const STANDARD_EXCESS = 1.4; // as in the titration itself: 30 to 50 % above what binds
