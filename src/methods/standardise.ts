import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { EndPointBasis } from "./criterion.ts";
import { evaluateStage, type StageEvaluation } from "./evaluate-stage.ts";
import { remembered } from "./remembered.ts";
import { evaluateRelease } from "./release.ts";
import { releaseExcess } from "./release-plan.ts";
import type { StagePlan, Task } from "./types.ts";

/** The titration against which another is standardised, evaluated, and how its bias is taken back. */
export interface Calibration {
  readonly alone: StageEvaluation;
  /** "divide": the amounts divide; else a blank is subtracted, and this is its weight in the bias. */
  readonly takes: "divide" | number;
}

/**
 * The standard titration of the same metal with the same dye, pH and buffer: what the observer does wrong in both titrations cancels
 * (common practice: Ca or Mg for hardness, Zn for hexamine work). In a back titration the blank, titrant against back titrant to the
 * same end point, does the same. A release is standardised as a whole, with the metal itself. Null where no primary standard of the
 * metal is on record, or where the standard titration itself has no end point worth standardising with.
 */
export function calibrationOf(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): Calibration | null {
  const { plan } = evaluation.model;
  if (evaluation.status === "failed") return null;
  if (plan.detour && evaluation.basis !== "empirical") return blankOfDetour(task, evaluation, knowledge);
  const standard = standardOf(task, plan, evaluation.basis, knowledge);
  if (standard === null) return null;
  const alone = remembered("standard", task, standard.plan, knowledge, () =>
    standardEvaluation(standard.task, standard.plan, knowledge),
  );
  return alone.status === "failed" || !cancels(alone.biasFraction) ? null : { alone, takes: "divide" };
}

/**
 * The part of a bias that is left when the standard's own part is taken back: linear in both, so that it holds cause by cause and
 * for the sum alike, (1 + b) / (1 + s) - 1 = (b - s) / (1 + s).
 */
export const leftOf = ({ alone, takes }: Calibration, ofTitration: number, ofStandard: number): number =>
  takes === "divide" ? (ofTitration - ofStandard) / (1 + alone.biasFraction) : ofTitration + takes * ofStandard;

/** The evaluation as it counts when the titrant was standardised alike; as it is where no standard serves. */
export function standardisedAlike(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): StageEvaluation {
  const calibration = calibrationOf(task, evaluation, knowledge);
  if (calibration === null) return evaluation;
  const biasFraction = leftOf(calibration, evaluation.biasFraction, calibration.alone.biasFraction);
  return {
    ...evaluation,
    biasFraction,
    ledger: [...evaluation.ledger, { source: "standardised alike", fraction: biasFraction - evaluation.biasFraction }],
  };
}

/** The titration with which the titrant of this one is standardised; null where its end point does not allow it or nothing serves. */
export function standardOf(
  task: Task,
  plan: StagePlan,
  basis: EndPointBasis,
  knowledge: Knowledge,
): { readonly task: Task; readonly plan: StagePlan } | null {
  if (basis === "empirical" || plan.detour) return null;
  const blankServes = plan.backTitrant !== null && plan.release === null;
  if (!blankServes && !plan.determines.every((ion) => knowledge.standards.some((s) => s.forIon === ion))) return null;
  return standardTitration(task, plan);
}

/** The same titration of what it determines alone, at the same level. */
export const standardTitration = (task: Task, plan: StagePlan): { readonly task: Task; readonly plan: StagePlan } => ({
  task: standardTask(task, plan),
  plan: standardPlan(task, plan),
});

/** Whether an analyst would standardise with an end point that is wrong by so much; beyond, the method itself is wrong. */
export const cancels = (biasOfStandard: number): boolean => Math.abs(biasOfStandard) <= CANCELS_UP_TO;

/** What is left of a bias when the titrant was standardised with a titration of this bias; fractions. */
export const standardisedBias = (bias: number, biasOfStandard: number): number => (1 + bias) / (1 + biasOfStandard) - 1;

/**
 * A way round is calibrated by its metal alone: the reagent titrated the same way is the blank of a surplus (the amounts subtract),
 * a standard of the metal serves the rest (the amounts divide). Titrant that a precipitate set free has no such blank.
 */
function blankOfDetour(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): Calibration | null {
  const { plan, solution, volumeL } = evaluation.model;
  const { detour } = plan;
  const { way } = solution;
  if (!detour || !way || way.record.kind === "conversion") return null;
  const surplus = way.record.kind === "surplus";
  const molPerL = surplus ? detour.reagent.molPerL : evaluation.presentMol / detour.analytePerMetal / volumeL;
  const own = metalPlan(plan, detour.metal, molPerL);
  const alone = remembered(`blank ${molPerL} `, task, own, knowledge, () =>
    evaluateStage(metalAlone(task, detour.metal, molPerL), own, knowledge, undefined, ONLY_THE_END),
  );
  if (alone.status === "failed" || !cancels(alone.biasFraction)) return null;
  const weight = (detour.analytePerMetal * alone.presentMol) / evaluation.presentMol;
  return { alone, takes: surplus ? weight : "divide" };
}

/** How widely an observer sees the end of a standard titration does not cancel: only where it lies does. */
const ONLY_THE_END = { band: false } as const;

/** A solution of one metal, mol/L of the vessel. */
function metalAlone(task: Task, metal: ComponentId, inVesselMolPerL: number): Task {
  const molPerL = (inVesselMolPerL * task.portion.titrationVolumeML) / task.portion.volumeML;
  return {
    ...task,
    analytes: [{ component: metal, shown: metal, molPerL, protonsPerComponent: 0, report: "individual" }],
    matrix: [],
  };
}

const metalPlan = (plan: StagePlan, metal: ComponentId, molPerL: number): StagePlan => ({
  ...plan,
  determines: [metal],
  mode: plan.backTitrant ? "back" : "direct",
  detour: null,
  masking: [],
  removed: [],
  added: [],
  excessTitrantMolPerL: plan.backTitrant ? STANDARD_EXCESS * molPerL : 0,
});

/** The same titration of the metal alone; a release is done on it as a whole. */
function standardEvaluation(own: Task, plan: StagePlan, knowledge: Knowledge): StageEvaluation {
  if (plan.release === null) return evaluateStage(own, plan, knowledge, undefined, ONLY_THE_END);
  const excessTitrantMolPerL = releaseExcess(own, plan, knowledge);
  return evaluateRelease(own, { ...plan, excessTitrantMolPerL }, knowledge);
}

/** Largest bias of the standard titration, relative, that an analyst would let cancel. */
const CANCELS_UP_TO = 0.02;

const standards = new WeakMap<Task, Map<string, Task>>();

/** The metal alone, at the same level; one task for each, so that its titrations are solved one from the other. */
function standardTask(task: Task, plan: StagePlan): Task {
  let known = standards.get(task);
  if (known === undefined) standards.set(task, (known = new Map<string, Task>()));
  const key = plan.determines.join();
  let own = known.get(key);
  if (own === undefined) {
    own = { ...task, analytes: task.analytes.filter((a) => plan.determines.includes(a.component)), matrix: [] };
    known.set(key, own);
  }
  return own;
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
