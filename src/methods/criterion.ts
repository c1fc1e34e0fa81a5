import { EMPIRICAL_EXTRA_BAND_PM, practisedLog10Ratio, VISIBLE_COMPLEX_MOL_PER_L } from "../chemistry/end-point.ts";
import type { ComponentId } from "../constants/knowledge.ts";
import { remainingL, remainingToEquivalenceL } from "./remaining-volume.ts";
import type { StageModel, VesselState } from "./stage-model.ts";

/** On what the place of the end point rests. */
export type EndPointBasis = "constants" | "table" | "empirical" | "electrode";

/** When the observer stops, as a function of the vessel. */
export interface Criterion {
  readonly basis: EndPointBasis;
  readonly bandPM: number;
  /** The band on the scale of the criterion, log10 units. */
  readonly bandLog10: number;
  /** Bound over free dye, as far as it shows colour. */
  readonly ratio: (state: VesselState) => number;
  /** Negative before the end point, positive after. */
  readonly of: (state: VesselState) => number;
  /** About how far the burette has to run from this state until `of` plus `by` is zero, L; of the same sign as what is missing. */
  readonly remainingL: (state: VesselState, by: number) => number;
}

const FLOOR = 1e-300;

/** The end point of a titration seen with a dye. @param back true where a metal is run in and the colour comes */
export function criterionOf(model: StageModel, determined: ReadonlySet<ComponentId>, back: boolean): Criterion {
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
    const of = (s: VesselState): number => (back ? log10Ratio(s) - target : target - log10Ratio(s));
    return {
      basis: known.some((m) => dyeBasis.byTable.has(m)) ? "table" : "constants",
      bandPM: indicator.observerBandPM,
      bandLog10: perDye * indicator.observerBandPM,
      ratio,
      of,
      remainingL: (s, by) => remainingL(model, s, known, -(of(s) + by) / perDye, back),
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
  const metalOf = (s: VesselState): number => shown.reduce((sum, m) => sum + s.unbound(m), 0);
  // In a back titration the back titrant itself decides by equilibrium which of the deaf metals it takes the titrant from.
  const titrantOf = (s: VesselState): number =>
    s.titrantUnbound + (back ? 0 : deaf.reduce((sum, m) => sum + s.boundToTitrant(m), 0));
  const log10Excess = (s: VesselState): number =>
    Math.log10(Math.max(titrantOf(s), FLOOR)) - Math.log10(Math.max(metalOf(s), FLOOR));
  const of = (s: VesselState): number => (back ? -log10Excess(s) : log10Excess(s));
  // pM up by b means metal down and free titrant up by b each: twice b on this scale.
  return {
    basis: "empirical",
    bandPM,
    bandLog10: 2 * bandPM,
    ratio: (s) => s.dyeRatio,
    of,
    remainingL: (s, by) =>
      remainingToEquivalenceL(model, s, { titrant: titrantOf(s), shown: metalOf(s), deaf }, -(of(s) + by), back),
  };
}

/** How many times the last visible trace of a one-colour complex must be there half way, for its going to be seen. */
const COLOUR_OVER_THRESHOLD = 4;

/** Whether the colour of the metal is there to disappear: half the dye bound, or a one-colour complex well above the visible. */
export function showsColour(model: StageModel, dyeRatio: number): boolean {
  if (model.indicator?.endPointModel !== "one-colour") return dyeRatio >= 1;
  const bound = ((model.plan.indicator?.molPerL ?? 0) * dyeRatio) / (1 + dyeRatio);
  return bound >= COLOUR_OVER_THRESHOLD * VISIBLE_COMPLEX_MOL_PER_L;
}

/** The metal that holds most of the dye in this state. */
export function holderOf(model: StageModel, state: VesselState): ComponentId | null {
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
