import {
  BLOCKED_BOUND_FRACTION,
  EMPIRICAL_EXTRA_BAND_PM,
  practisedLog10Ratio,
  VISIBLE_COMPLEX_MOL_PER_L,
} from "../chemistry/end-point.ts";
import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { blockersOf } from "./blocking.ts";
import { firstCrossing, nearCrossing } from "./end-point-search.ts";
import { inertMetals } from "./kinetics.ts";
import { stageModel, type StageModel, type VesselState } from "./stage-model.ts";
import { vesselSample } from "./solution.ts";
import type { StagePlan, Task } from "./types.ts";

export type EndPointBasis = "constants" | "table" | "empirical" | "electrode";

/** One line of the titre's account: what part of the result, relative to the amount present, comes from where. */
export interface LedgerLine {
  readonly source: string;
  readonly fraction: number;
}

/** What one titration gives, calculated; all fractions relative to the amount determined. */
export interface StageEvaluation {
  readonly status: "converged" | "failed" | "outOfModelRange";
  readonly why: "no-colour" | "no-end-point" | "dye-held" | "not-converged" | null;
  readonly model: StageModel;
  readonly basis: EndPointBasis;
  readonly endPointML: number;
  readonly bandML: readonly [number, number];
  readonly equivalenceML: number;
  readonly presentMol: number;
  readonly foundMol: number;
  readonly biasFraction: number; // after what cancels by standardising alike
  readonly uncancelledBiasFraction: number;
  readonly ledger: readonly LedgerLine[];
  /** Share of each metal of the sample that is counted in the result. */
  readonly titrated: ReadonlyMap<ComponentId, number>;
  /** Part of the bias that each metal of the sample makes. */
  readonly biasOf: ReadonlyMap<ComponentId, number>;
  readonly indicatorMetal: ComponentId | null;
  readonly pM: number | null;
  readonly pMEquivalence: number | null;
  readonly bandPM: number;
  readonly sharpnessFraction: number; // half-width of the observer band over the titre that determines
  readonly blockedBy: readonly ComponentId[];
  readonly log10ConditionalK: ReadonlyMap<ComponentId, number>;
  readonly log10AlphaOfAnalyte: number; // side reactions of the first determined metal before the titrant comes
  readonly backTitrantStealsFraction: number;
}

const ML = 1000;

/**
 * Evaluates one titration by its full equilibrium: where the observer stops, what the titre then holds, and why.
 * @param frozen complexes that formed before and do not exchange any more, mol/L in the vessel
 */
export function evaluateStage(
  task: Task,
  plan: StagePlan,
  knowledge: Knowledge,
  frozen?: ReadonlyMap<ComponentId, number>,
): StageEvaluation {
  const hot = plan.preparation.includes("boil") || plan.preparation.includes("heat");
  const sample = vesselSample(task, plan);
  const inert = inertMetals(
    knowledge,
    sample.map((c) => c.component),
    plan.titrant.id,
    plan.pH,
    hot,
  );
  const model = stageModel(task, plan, knowledge, frozen ? { inert, frozen } : { inert });
  const determined = new Set(plan.determines);
  const presentMol =
    sample.filter((c) => determined.has(c.component)).reduce((s, c) => s + c.inVesselMolPerL, 0) * model.volumeL;
  const back = plan.backTitrant !== null;
  const titrantBefore = model.at(0);
  const expectedMol = back ? Math.max(titrantBefore.titrantUnbound * model.volumeL, 1e-9) : presentMol;
  const equivalenceL = expectedMol / model.burette.molPerL;
  const criterion = criterionOf(model, determined, back);
  const base = {
    model,
    basis: criterion.basis,
    equivalenceML: equivalenceL * ML,
    presentMol,
    bandPM: criterion.bandPM,
    blockedBy: blockersOf(model, titrantBefore, knowledge),
  };
  const failed = (why: StageEvaluation["why"]): StageEvaluation => ({
    ...base,
    status: "failed",
    why,
    endPointML: 0,
    bandML: [0, 0],
    foundMol: 0,
    biasFraction: 0,
    uncancelledBiasFraction: 0,
    ledger: [],
    titrated: new Map(),
    biasOf: new Map(),
    indicatorMetal: null,
    pM: null,
    pMEquivalence: null,
    sharpnessFraction: 0,
    log10ConditionalK: conditionalConstants(model, titrantBefore),
    log10AlphaOfAnalyte: alphaOfAnalyte(model, titrantBefore, plan),
    backTitrantStealsFraction: 0,
  });
  if (!titrantBefore.ok) return failed("not-converged");
  if (criterion.basis !== "empirical") {
    const early = model.at(back ? 0 : 0.5 * equivalenceL);
    if (!back && !showsColour(model, criterion.ratio(early))) return failed("no-colour");
    if (back && criterion.ratio(early) / (1 + criterion.ratio(early)) > BLOCKED_BOUND_FRACTION)
      return failed("dye-held");
  }
  const search = firstCrossing((v) => criterion.of(model.at(v)), equivalenceL);
  if (!search.found) return failed("no-end-point");
  const end = model.at(search.volumeL);
  if (!end.ok) return failed("not-converged");
  const shifted = (by: number): number =>
    nearCrossing((v) => criterion.of(model.at(v)) + by, search.volumeL, by > 0 ? -1 : 1, equivalenceL) ??
    search.volumeL;
  const bandLow = shifted(criterion.bandLog10);
  const bandHigh = shifted(-criterion.bandLog10);
  const account = accountOf(task, model, end, search.volumeL, presentMol, determined);
  const half = model.at(back ? search.volumeL : 0.5 * search.volumeL);
  const indicatorMetal = holderOf(model, half);
  const followed = back ? plan.backTitrant.id : (plan.determines[0] ?? indicatorMetal);
  const equivalence = model.at(equivalenceL);
  const determinedL = back ? presentMol / plan.titrant.molPerL : search.volumeL;
  return {
    ...base,
    ...account,
    status: model.system.outOfModelRange ? "outOfModelRange" : "converged",
    why: null,
    endPointML: search.volumeL * ML,
    bandML: [bandLow * ML, bandHigh * ML],
    indicatorMetal:
      criterion.basis === "empirical"
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

interface Criterion {
  readonly basis: EndPointBasis;
  readonly bandPM: number;
  /** The band on the scale of the criterion, log10 units. */
  readonly bandLog10: number;
  /** Bound over free dye, as far as it shows colour. */
  readonly ratio: (state: VesselState) => number;
  /** Negative before the end point, positive after. */
  readonly of: (state: VesselState) => number;
}

const FLOOR = 1e-300;

function criterionOf(model: StageModel, determined: ReadonlySet<ComponentId>, back: boolean): Criterion {
  const { indicator, dyeBasis, plan } = model;
  const shows = (metal: ComponentId): boolean => dyeBasis.byConstants.has(metal) || dyeBasis.byTable.has(metal);
  // The metal whose colour the observer watches go or come.
  const watched = back ? [plan.backTitrant!.id] : [...determined, ...(plan.chelate ? [plan.chelate.metal] : [])];
  const known = watched.filter(shows);
  if (indicator && known.length > 0) {
    const own = indicator.practisedShiftPM;
    const target = own
      ? -own.value
      : practisedLog10Ratio(indicator.endPointModel, back ? "back" : "direct", plan.indicator!.molPerL);
    // A self-coloured reagent shows the colour of its iron complex; what aluminium does with it has no colour.
    const ratio = (s: VesselState): number =>
      indicator.class === "self-coloured" ? known.reduce((sum, m) => sum + s.dyeRatioOf(m), 0) : s.dyeRatio;
    const log10Ratio = (s: VesselState): number => Math.log10(Math.max(ratio(s), FLOOR));
    // A band in pM is that many times as wide in the logarithm of the colour ratio as metal ions sit on one dye.
    const perDye = Math.max(...known.map((m) => dyeBasis.byTable.get(m)?.metalsPerDye ?? 1));
    return {
      basis: known.some((m) => dyeBasis.byTable.has(m)) ? "table" : "constants",
      bandPM: indicator.observerBandPM,
      bandLog10: perDye * indicator.observerBandPM,
      ratio,
      of: back ? (s) => log10Ratio(s) - target : (s) => target - log10Ratio(s),
    };
  }
  // No constants and no table: the end point is taken at equivalence, with a wide band. The dye answers to the metals
  // it is used for; what it does not answer to counts as side reaction of the titrant.
  const answering = new Set<ComponentId>([
    ...watched,
    ...(indicator?.uses ?? [])
      .filter((u) => u.mode === "direct" && plan.pH >= u.pH[0] - 0.5 && plan.pH <= u.pH[1] + 0.5)
      .flatMap((u) => u.ions),
  ]);
  const shown = model.metals.filter((m) => answering.has(m));
  const deaf = model.metals.filter((m) => !answering.has(m));
  const bandPM = (indicator?.observerBandPM ?? 0.3) + EMPIRICAL_EXTRA_BAND_PM;
  const log10Excess = (s: VesselState): number => {
    const metal = shown.reduce((sum, m) => sum + s.unbound(m), 0);
    const titrant = s.titrantUnbound + deaf.reduce((sum, m) => sum + s.boundToTitrant(m), 0);
    return Math.log10(Math.max(titrant, FLOOR)) - Math.log10(Math.max(metal, FLOOR));
  };
  // pM up by b means metal down and free titrant up by b each: twice b on this scale.
  return {
    basis: "empirical",
    bandPM,
    bandLog10: 2 * bandPM,
    ratio: (s) => s.dyeRatio,
    of: back ? (s) => -log10Excess(s) : log10Excess,
  };
}

/** How many times the last visible trace of a one-colour complex must be there half way, for its going to be seen. */
const COLOUR_OVER_THRESHOLD = 4;

/** Whether the colour of the metal is there to disappear: half the dye bound, or a one-colour complex well above the visible. */
function showsColour(model: StageModel, dyeRatio: number): boolean {
  if (model.indicator?.endPointModel !== "one-colour") return dyeRatio >= 1;
  const bound = ((model.plan.indicator?.molPerL ?? 0) * dyeRatio) / (1 + dyeRatio);
  return bound >= COLOUR_OVER_THRESHOLD * VISIBLE_COMPLEX_MOL_PER_L;
}

/** The metal that holds most of the dye in this state. */
function holderOf(model: StageModel, state: VesselState): ComponentId | null {
  let best: ComponentId | null = null;
  let most = 0;
  for (const metal of model.metals) {
    const ratio = state.dyeRatioOf(metal);
    if (ratio > most) {
      most = ratio;
      best = metal;
    }
  }
  return best;
}

/** K' = [MY] / ([M not bound to Y] [Y not bound to metal]) as it stands in the vessel, log10, per metal bound at all. */
function conditionalConstants(model: StageModel, state: VesselState): Map<ComponentId, number> {
  const out = new Map<ComponentId, number>();
  const frozen = new Set(model.held.filter((h) => h.why === "kinetically-inert").map((h) => h.component));
  for (const metal of model.metals) {
    if (frozen.has(metal)) continue; // its complex is out of the equilibrium: what is left says nothing of its strength
    const bound = state.boundToTitrant(metal);
    const value =
      Math.log10(bound) - Math.log10(state.unbound(metal) - state.onDye(metal)) - Math.log10(state.titrantUnbound);
    if (Number.isFinite(value)) out.set(metal, value);
  }
  return out;
}

function alphaOfAnalyte(model: StageModel, start: VesselState, plan: StagePlan): number {
  const metal = plan.determines[0];
  if (metal === undefined) return 0;
  const value = Math.log10(start.unbound(metal) / start.free(metal));
  return Number.isFinite(value) ? value : 0;
}

/** Where the titre went: an exact balance of the titrant at the end point, line by line. */
function accountOf(
  task: Task,
  model: StageModel,
  end: VesselState,
  volumeL: number,
  presentMol: number,
  determined: ReadonlySet<ComponentId>,
): Pick<
  StageEvaluation,
  | "foundMol"
  | "biasFraction"
  | "uncancelledBiasFraction"
  | "ledger"
  | "titrated"
  | "biasOf"
  | "backTitrantStealsFraction"
> {
  const { plan } = model;
  const vessel = model.volumeL + volumeL;
  const frozen = new Map(
    model.held.filter((h) => h.why === "kinetically-inert").map((h) => [h.component, h.molPerL * model.volumeL]),
  );
  const boundMol = (metal: ComponentId): number => end.boundToTitrant(metal) * vessel + (frozen.get(metal) ?? 0);
  const back = plan.backTitrant;
  const foundMol = back
    ? plan.excessTitrantMolPerL * model.volumeL - back.molPerL * volumeL
    : plan.titrant.molPerL * volumeL;
  const titrated = new Map<ComponentId, number>();
  const biasOf = new Map<ComponentId, number>();
  const ledger: LedgerLine[] = [];
  // What an earlier titration brought is not counted again: it went to its own metals.
  const carriedMol = (plan.carried?.titrantMolPerL ?? 0) * model.volumeL;
  const carriedFor = plan.carried?.metals ?? [];
  let endPoint = end.titrantUnbound * vessel;
  if (carriedFor.length === 0) endPoint -= carriedMol;
  let analyteMissing = 0;
  const inSample = new Map(
    vesselSample(task, plan)
      .filter((c) => !plan.removed.includes(c.component))
      .map((c) => [c.component, c.inVesselMolPerL * model.volumeL]),
  );
  for (const { from, to } of model.solution.converted)
    if (to !== null) inSample.set(to, (inSample.get(to) ?? 0) + (inSample.get(from) ?? 0));
  const carriedBound = carriedFor.reduce((s, m) => s + boundMol(m), 0);
  for (const metal of new Set([...model.metals, ...frozen.keys()])) {
    const fromSample = inSample.get(metal) ?? 0;
    const fromChelate = plan.chelate?.metal === metal ? plan.chelate.molPerL * model.volumeL : 0;
    const fromBurette = back?.id === metal ? back.molPerL * volumeL : 0;
    const fromBefore =
      carriedFor.includes(metal) && carriedBound > 0 ? (carriedMol * boundMol(metal)) / carriedBound : 0;
    const counted = boundMol(metal) - fromChelate - fromBurette - fromBefore;
    if (determined.has(metal)) {
      analyteMissing += counted - fromSample;
      if (fromSample > 0) titrated.set(metal, counted / fromSample);
    } else if (fromSample > 0 && fromChelate === 0 && fromBurette === 0) {
      titrated.set(metal, (boundMol(metal) - fromBefore) / fromSample);
      biasOf.set(metal, counted / presentMol);
      ledger.push({ source: metal, fraction: counted / presentMol });
    } else if (fromSample > 0) {
      // A metal that the method adds and the sample also brings: the sample's share counts whole, the rest is end point.
      titrated.set(metal, 1);
      biasOf.set(metal, fromSample / presentMol);
      ledger.push({ source: metal, fraction: fromSample / presentMol });
      endPoint += counted - fromSample;
    } else endPoint += counted;
  }
  for (const held of model.held) {
    if (!determined.has(held.component)) continue;
    if (held.why === "kinetically-inert") continue;
    const lost = (-held.molPerL * model.volumeL) / presentMol;
    analyteMissing -= lost * presentMol;
    const reason = held.why === "precipitated" ? `lost as ${held.by}` : `${held.why}: ${held.component}`;
    ledger.push({ source: reason, fraction: lost });
  }
  endPoint += analyteMissing;
  ledger.unshift({ source: "end-point", fraction: endPoint / presentMol });
  const analyteUnbound = [...determined].reduce((s, m) => s + end.unbound(m), 0) * vessel;
  return {
    foundMol,
    biasFraction: (foundMol - presentMol) / presentMol,
    uncancelledBiasFraction: (foundMol - presentMol) / presentMol,
    ledger: ledger.filter((line) => Math.abs(line.fraction) > 1e-7),
    titrated,
    biasOf,
    backTitrantStealsFraction: back ? analyteUnbound / presentMol : 0,
  };
}
