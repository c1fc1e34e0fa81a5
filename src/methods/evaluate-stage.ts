import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { accountOf, NO_ACCOUNT, type StageAccount } from "./account.ts";
import { blockersOf } from "./blocking.ts";
import { holderOf, type EndPointBasis } from "./criterion.ts";
import { detourAccount } from "./detour-account.ts";
import { backEndPointL } from "./excess.ts";
import { inertMetals } from "./kinetics.ts";
import { readEndPoint, type EndPointFault, type EndPointRead, type EyeOptions } from "./read-end-point.ts";
import { alphaOfAnalyte, conditionalConstants } from "./stage-measures.ts";
import { stageModel, type StageModel } from "./stage-model.ts";
import { vesselSample } from "./solution.ts";
import { countedIn, type StagePlan, type Task } from "./types.ts";

/** What one titration gives, calculated; all fractions relative to the amount determined. */
export interface StageEvaluation extends StageAccount {
  readonly status: "converged" | "failed" | "outOfModelRange";
  readonly why: EndPointFault | "not-converged" | null;
  readonly model: StageModel;
  readonly basis: EndPointBasis;
  readonly endPointML: number;
  readonly bandML: readonly [number, number];
  readonly equivalenceML: number;
  readonly presentMol: number;
  readonly indicatorMetal: ComponentId | null;
  readonly pM: number | null;
  readonly pMEquivalence: number | null;
  readonly bandPM: number;
  readonly sharpnessFraction: number; // half-width of the observer band over the titre that determines
  readonly blockedBy: readonly ComponentId[];
  readonly electrode: EndPointRead["electrode"]; // null unless read with one
  readonly photometric: EndPointRead["photometric"];
  readonly log10ConditionalK: ReadonlyMap<ComponentId, number>;
  /** In a release: the end point of the excess, whose reading is discarded, mL from the burette. */
  readonly firstReading: FirstReading | null;
  readonly log10AlphaOfAnalyte: number; // side reactions of the first determined metal before the titrant comes
}

/** The discarded first end point of a release: its volume and the observer's band around it, mL. */
export interface FirstReading {
  readonly volumeML: number;
  readonly bandML: readonly [number, number];
}

/** What stands in an evaluation whose end point was not found. */
export const NOT_READ = {
  ...NO_ACCOUNT,
  endPointML: 0,
  bandML: [0, 0],
  firstReading: null,
  indicatorMetal: null,
  pM: null,
  pMEquivalence: null,
  sharpnessFraction: 0,
} as const satisfies Partial<StageEvaluation>;

const ML = 1000;
/** Relative to the expected volume: what holds the dye half way does not hang on so little. */
const NEAR_EXPECTED = 0.2;

/**
 * Evaluates one titration by its full equilibrium: where the observer stops, what the titre then holds, and why.
 * @param frozen complexes that formed before and do not exchange any more, mol/L in the vessel
 * @param eye how an end point seen by eye is looked for
 */
export function evaluateStage(
  task: Task,
  plan: StagePlan,
  knowledge: Knowledge,
  frozen?: ReadonlyMap<ComponentId, number>,
  eye: EyeOptions = {},
): StageEvaluation {
  const hot = plan.preparation.includes("boil") || plan.preparation.includes("heat");
  const sample = vesselSample(task, plan);
  const inert = inertMetals(
    knowledge,
    [...sample.map((c) => c.component), ...countedIn(plan)],
    plan.titrant.id,
    plan.pH,
    hot,
  );
  const model = stageModel(task, plan, knowledge, frozen ? { inert, frozen } : { inert });
  const determined = new Set(countedIn(plan));
  const presentMol =
    sample.filter((c) => plan.determines.includes(c.component)).reduce((s, c) => s + c.inVesselMolPerL, 0) *
    model.volumeL;
  const back = plan.backTitrant !== null;
  const titrantBefore = model.at(0);
  const expectedMol = back ? Math.max(titrantBefore.titrantUnbound * model.volumeL, 1e-9) : metalMol(model, presentMol);
  let equivalenceL = expectedMol / model.burette.molPerL;
  let read = readEndPoint(model, determined, equivalenceL, knowledge, eye);
  if (back && read.why === "no-end-point" && titrantBefore.ok) {
    equivalenceL = backEndPointL(model);
    read = readEndPoint(model, determined, equivalenceL, knowledge, eye);
  }
  const base = {
    model,
    basis: read.basis,
    electrode: read.electrode,
    photometric: read.photometric,
    equivalenceML: equivalenceL * ML,
    presentMol,
    bandPM: read.bandPM,
    blockedBy: blockersOf(model, titrantBefore, knowledge),
    firstReading: null,
  };
  const failed = (why: StageEvaluation["why"]): StageEvaluation => ({
    ...base,
    status: "failed",
    why,
    ...NOT_READ,
    log10ConditionalK: conditionalConstants(model, titrantBefore),
    log10AlphaOfAnalyte: alphaOfAnalyte(model, titrantBefore, plan),
  });
  if (!titrantBefore.ok) return failed("not-converged");
  if (read.why !== null) return failed(read.why);
  const end = model.at(read.volumeL);
  if (!end.ok) return failed("not-converged");
  const [bandLow, bandHigh] = read.bandL;
  const { way } = model.solution;
  const account = way
    ? detourAccount(task, model, way, end, read.volumeL, presentMol)
    : accountOf(task, model, end, read.volumeL, presentMol, determined);
  // The search for the end has looked half way to where it was expected: that vessel serves where the end is near there.
  const expected = Math.abs(read.volumeL / equivalenceL - 1) < NEAR_EXPECTED;
  const half = back ? end : model.at(0.5 * (expected ? equivalenceL : read.volumeL));
  const indicatorMetal = holderOf(model, half);
  const followed = back ? plan.backTitrant.id : (countedIn(plan)[0] ?? indicatorMetal);
  const equivalence = model.at(equivalenceL);
  const determinedL =
    back || plan.detour
      ? presentMol / (plan.detour?.analytePerMetal ?? 1) / (plan.detour ? model.burette.molPerL : plan.titrant.molPerL)
      : read.volumeL;
  return {
    ...base,
    ...account,
    status: model.system.outOfModelRange ? "outOfModelRange" : "converged",
    why: null,
    endPointML: read.volumeL * ML,
    bandML: [bandLow * ML, bandHigh * ML],
    indicatorMetal:
      plan.indicator === null
        ? null
        : read.basis === "empirical"
          ? (plan.chelate?.metal ?? followed)
          : model.indicator?.class === "self-coloured"
            ? followed
            : indicatorMetal,
    pM: followed ? -Math.log10(Math.max(end.free(followed), Number.MIN_VALUE)) : null,
    pMEquivalence: followed ? -Math.log10(Math.max(equivalence.free(followed), Number.MIN_VALUE)) : null,
    sharpnessFraction: Math.abs(bandHigh - bandLow) / 2 / determinedL,
    log10ConditionalK: conditionalConstants(model, end),
    log10AlphaOfAnalyte: alphaOfAnalyte(model, titrantBefore, plan),
  };
}

/** What the burette has to find, mol: the analyte, or the metal that a way round leaves for it. */
const metalMol = (model: StageModel, presentMol: number): number =>
  model.solution.way ? Math.max(model.solution.way.expectedMolPerL * model.volumeL, 1e-9) : presentMol;
