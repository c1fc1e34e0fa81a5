import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { blockersOf } from "./blocking.ts";
import { NOT_READ, type StageEvaluation } from "./evaluate-stage.ts";
import { backEndPointL } from "./excess.ts";
import { readEndPoint, type EndPointRead } from "./read-end-point.ts";
import { releaseAccount } from "./release-account.ts";
import { releaseVessels, type ReleaseVessels } from "./release-vessels.ts";
import { alphaOfAnalyte, conditionalConstants } from "./stage-measures.ts";
import type { StageModel, VesselState } from "./stage-model.ts";
import type { StagePlan, Task } from "./types.ts";

const ML = 1000;

/** One of the two end points: total volume from the burette since the excess went in, L, as it is read. */
interface Reading extends EndPointRead {
  readonly model: StageModel;
  readonly state: VesselState;
}

/** An end point of the metal that is run in. */
function readingOf(model: StageModel, determined: ReadonlySet<ComponentId>, knowledge: Knowledge): Reading | null {
  if (!model.at(0).ok) return null;
  let read = readEndPoint(model, determined, equivalenceL(model), knowledge);
  if (read.why === "no-end-point") read = readEndPoint(model, determined, backEndPointL(model), knowledge);
  const state = model.at(read.volumeL);
  return state.ok ? { ...read, model, state } : null;
}

const firstReadings = new WeakMap<StageModel, Reading | null>();

/** The reading that is discarded: the same for every amount of the agent, which is not yet in. */
function firstReadingOf(
  before: StageModel,
  determined: ReadonlySet<ComponentId>,
  knowledge: Knowledge,
): Reading | null {
  const known = firstReadings.get(before);
  if (known !== undefined) return known;
  const reading = readingOf(before, determined, knowledge);
  firstReadings.set(before, reading);
  return reading;
}

/**
 * Evaluates a release: the excess of titrant is titrated back to its end point, which is discarded; then the agent goes in, and
 * what it sets free is titrated with the same metal to the same end point. Volumes of the evaluation count from the first end point.
 * @param plan with `release` and `backTitrant` set
 */
export function evaluateRelease(task: Task, plan: StagePlan, knowledge: Knowledge): StageEvaluation {
  const vessels = releaseVessels(task, plan, knowledge);
  const determined = new Set(plan.determines);
  const first = firstReadingOf(vessels.before, determined, knowledge);
  if (first?.why !== null) return failed(plan, vessels, first?.why ?? "not-converged", knowledge);
  const after = vessels.after(first.state);
  const second = readingOf(after, determined, knowledge);
  if (second?.why !== null) return failed(plan, vessels, second?.why ?? "not-converged", knowledge);
  const titreL = second.volumeL - first.volumeL;
  if (titreL <= 0) return failed(plan, vessels, "no-end-point", knowledge);
  const account = releaseAccount(vessels, first, second);
  const followed = plan.backTitrant!.id;
  const half = (r: Reading): number => (r.bandL[1] - r.bandL[0]) / 2;
  return {
    ...common(plan, vessels, knowledge),
    ...account,
    model: fromFirstEndPoint(after, first.volumeL),
    status: vessels.before.system.outOfModelRange || after.system.outOfModelRange ? "outOfModelRange" : "converged",
    why: null,
    basis: second.basis,
    bandPM: second.bandPM,
    electrode: second.electrode,
    photometric: second.photometric,
    endPointML: titreL * ML,
    bandML: [(second.bandL[0] - first.volumeL) * ML, (second.bandL[1] - first.volumeL) * ML],
    firstReading: { volumeML: first.volumeL * ML, bandML: [first.bandL[0] * ML, first.bandL[1] * ML] },
    indicatorMetal: followed,
    pM: -Math.log10(Math.max(second.state.free(followed), Number.MIN_VALUE)),
    pMEquivalence: -Math.log10(Math.max(after.at(equivalenceL(after)).free(followed), Number.MIN_VALUE)),
    sharpnessFraction: Math.hypot(half(first), half(second)) / titreL,
    blockedBy: [
      ...new Set([
        ...blockersOf(vessels.before, vessels.before.at(0), knowledge),
        ...blockersOf(after, after.at(first.volumeL), knowledge),
      ]),
    ],
    log10ConditionalK: conditionalConstants(vessels.before, first.state),
  };
}

const equivalenceL = (model: StageModel): number =>
  (Math.max(model.at(0).titrantUnbound, 1e-9) * model.volumeL) / model.burette.molPerL;

/** The vessel with its burette read from the first end point on. */
const fromFirstEndPoint = (model: StageModel, firstL: number): StageModel => ({
  ...model,
  at: (volumeL) => model.at(firstL + volumeL),
});

function common(plan: StagePlan, { before, presentMol }: ReleaseVessels, knowledge: Knowledge) {
  const start = before.at(0);
  return {
    model: before,
    presentMol,
    equivalenceML: (presentMol / before.burette.molPerL) * ML,
    basis: "constants" as const,
    bandPM: before.indicator?.observerBandPM ?? 0,
    electrode: null,
    photometric: null,
    blockedBy: blockersOf(before, start, knowledge),
    log10ConditionalK: conditionalConstants(before, start),
    log10AlphaOfAnalyte: alphaOfAnalyte(before, start, plan),
  };
}

function failed(
  plan: StagePlan,
  vessels: ReleaseVessels,
  why: StageEvaluation["why"],
  knowledge: Knowledge,
): StageEvaluation {
  return {
    ...common(plan, vessels, knowledge),
    status: "failed",
    why,
    ...NOT_READ,
  };
}
