import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { evaluate } from "../methods/evaluate.ts";
import { stageModel, type StageModel } from "../methods/stage-model.ts";
import { countedIn, type StagePlan, type Task } from "../methods/types.ts";
import { readBrief } from "./brief.ts";
import type { Recommendation, RecommendedMethod, StageDocument } from "./contract.ts";
import { readingSeries, type ReadingSeries } from "./reading-series.ts";

/** The numbers behind the figures of one titration; null where a point has no value. */
export interface StageSeries {
  readonly logK: {
    readonly pH: readonly number[];
    readonly lines: readonly { readonly label: string; readonly values: readonly (number | null)[] }[];
    readonly workingRange: readonly [number, number];
  };
  readonly curve: {
    readonly volumeML: readonly number[];
    readonly pM: readonly (number | null)[];
    readonly label: string; // the ion whose pM is drawn
    readonly endPoint: {
      readonly volumeML: number;
      readonly low: number;
      readonly high: number;
      readonly pMLow: number;
      readonly pMHigh: number;
      readonly pM: number;
    } | null;
    readonly equivalenceML: number;
  };
  readonly reading: ReadingSeries | null; // what an electrode or a photometer shows
}

const PH_STEP = 0.25;
const PH_HIGHEST = 14;
const EVEN_POINTS = 60;
/** Distances from equivalence, relative to its volume, at which the break gets points of its own. */
const NEAR_EQUIVALENCE = [0, 1e-4, 3e-4, 1e-3, 2e-3, 5e-3, 1e-2, 2e-2];
/** The curve is drawn to this multiple of the volume at equivalence. */
const DRAWN_BEYOND = 1.5;

/**
 * Computes again, from the document alone, what the figures of one method show: conditional constants against pH in the vessel
 * as it stands half way to equivalence, and the curve of the last titration that determines something. Null when no method has the id.
 */
export function figureSeries(document: Recommendation, methodId: string, knowledge: Knowledge): StageSeries | null {
  const method = document.methods.find((candidate) => candidate.id === methodId);
  const stage = method?.stages.find((candidate) => candidate.determines.length > 0);
  if (method === undefined || stage === undefined) return null;
  return stageSeries(readBrief(document.brief, knowledge), planOf(method, stage, knowledge), stage, knowledge);
}

function stageSeries(task: Task, plan: StagePlan, stage: StageDocument, knowledge: Knowledge): StageSeries {
  const evaluation = evaluate(task, plan, knowledge);
  const { model, equivalenceML } = evaluation;
  const followed = plan.backTitrant?.id ?? countedIn(plan)[0] ?? "";
  const pMAt = (volumeML: number): number | null => pM(model, volumeML, followed);
  const volumeML = volumes(equivalenceML);
  const [low, high] = evaluation.bandML;
  const [pMLow, pMHigh] = [pMAt(low), pMAt(high)];
  return {
    logK: conditionalSeries(task, plan, stage, equivalenceML, knowledge),
    curve: {
      volumeML,
      pM: volumeML.map(pMAt),
      label: followed,
      endPoint:
        evaluation.pM === null || pMLow === null || pMHigh === null
          ? null
          : { volumeML: evaluation.endPointML, low, high, pMLow, pMHigh, pM: evaluation.pM },
      equivalenceML,
    },
    reading: readingSeries(evaluation, volumeML, knowledge),
  };
}

function volumes(equivalenceML: number): readonly number[] {
  const last = DRAWN_BEYOND * equivalenceML;
  const even = Array.from({ length: EVEN_POINTS + 1 }, (_, i) => (i * last) / EVEN_POINTS);
  const near = NEAR_EQUIVALENCE.flatMap((d) => [equivalenceML * (1 - d), equivalenceML * (1 + d)]);
  return [...new Set([...even, ...near])].sort((a, b) => a - b);
}

function pM(model: StageModel, volumeML: number, ion: ComponentId): number | null {
  const state = model.at(volumeML / ML_PER_L);
  const value = -Math.log10(state.free(ion));
  return state.ok && Number.isFinite(value) ? value : null;
}

function conditionalSeries(
  task: Task,
  plan: StagePlan,
  stage: StageDocument,
  equivalenceML: number,
  knowledge: Knowledge,
): StageSeries["logK"] {
  const pH = Array.from({ length: PH_HIGHEST / PH_STEP + 1 }, (_, i) => i * PH_STEP);
  const at = pH.map((value) => {
    const model = stageModel(task, { ...plan, pH: value }, knowledge);
    return { model, state: model.at((0.5 * equivalenceML) / ML_PER_L) };
  });
  const metals = [...new Set(at.flatMap(({ model }) => model.metals))];
  const lines = metals.map((metal) => ({
    label: metal,
    values: at.map(({ state }) => {
      const value =
        Math.log10(state.boundToTitrant(metal)) - Math.log10(state.unbound(metal)) - Math.log10(state.titrantUnbound);
      return state.ok && Number.isFinite(value) ? value : null;
    }),
  }));
  const first = (label: string): number => Number(!countedIn(plan).includes(label)); // what is determined is drawn first
  return {
    pH,
    lines: lines
      .filter((line) => line.values.some((value) => value !== null))
      .sort((a, b) => first(a.label) - first(b.label)),
    workingRange: [stage.pH.low, stage.pH.high],
  };
}

const ML_PER_L = 1000;

/** The plan that a stage of the document was written from; ions come back from spellings to components. */
export function planOf(method: RecommendedMethod, stage: StageDocument, knowledge: Knowledge): StagePlan {
  const component = (spelling: string): ComponentId => componentOf(spelling, knowledge);
  const titrant = stage.titrant ?? method.titrant;
  const back = stage.mode === "direct" ? null : (stage.backTitrant ?? method.backTitrant);
  const { removed, chelate, excessTitrantMolPerL, carried, electrode, detour, release, demasked } = stage.vessel;
  return {
    determines: stage.determines.map(component),
    mode: stage.mode,
    titrant,
    backTitrant: back && { ...back, id: component(back.id) },
    pH: stage.pH.target,
    buffer: stage.buffer,
    detection: stage.detection,
    indicator: stage.indicator && { id: stage.indicator.id, molPerL: stage.indicator.molPerL },
    masking: stage.masking.map(({ agent, masks, via, molPerL, basis }) => ({
      agent,
      masks: masks.map(component),
      via,
      molPerL,
      basis,
    })),
    auxiliary: stage.auxiliary,
    added: stage.added.filter((reagent) => reagent.id !== titrant.id), // the excess stands in the vessel already
    preparation: stage.preparation,
    removed: removed.map(component),
    chelate: chelate && { ...chelate, metal: component(chelate.metal) },
    excessTitrantMolPerL,
    carried: carried && { ...carried, metals: carried.metals.map(component) },
    electrode,
    detour: detour && {
      id: detour.id,
      metal: component(detour.metal),
      analytePerMetal: detour.analytePerMetal,
      reagent: detour.reagent,
      precipitant: detour.precipitant,
    },
    release,
    demasked: demasked && { ...demasked, frees: demasked.frees.map(component) },
  };
}

function componentOf(spelling: string, knowledge: Knowledge): ComponentId {
  if (knowledge.components.has(spelling)) return spelling;
  for (const component of knowledge.components.values())
    if (component.forms.some((form) => form.spelling === spelling)) return component.id;
  return spelling;
}
