import type { ComponentId } from "../constants/knowledge.ts";
import type { StageModel, VesselState } from "./stage-model.ts";

/** Exponents of ten beyond this say "far": the guess is clipped by its user anyway. */
const DECADES = 250;
const tenTo = (x: number): number => 10 ** Math.max(-DECADES, Math.min(DECADES, x));

/** What a metal has left unbound when titrant unbound rises `factor` times, side reactions as they are. */
const leftUnbound = (unbound: number, bound: number, factor: number): number =>
  unbound > 0 ? (unbound + bound) / (1 + (factor * bound) / unbound) : 0;

/**
 * How far the burette still has to run, L, until the watched metals have gone (or in a back titration come) by `decades` of ten: side
 * reactions taken as they stand, all metals sharing the titrant. Exact where nothing but the titrant changes, so that a search for
 * the volume that leaves nothing to run meets a nearly straight line where the logarithm itself is a step. Negative past the end; NaN
 * where the vessel does not tell.
 * @param decades log10 by which what is watched has yet to fall (direct) or to rise (back); negative past the end
 */
export function remainingL(
  model: StageModel,
  state: VesselState,
  watched: readonly ComponentId[],
  decades: number,
  back: boolean,
): number {
  const titrant = state.titrantUnbound;
  let watchedUnbound = 0;
  let watchedBound = 0;
  for (const metal of watched) {
    watchedUnbound += state.unbound(metal);
    watchedBound += state.boundToTitrant(metal);
  }
  const perL = (model.volumeL + state.volumeFromBuretteL) / model.burette.molPerL;
  if (back) {
    const rise = tenTo(decades);
    let more = titrant * (1 - 1 / rise) + watchedUnbound * (rise - 1);
    for (const metal of model.metals) {
      if (watched.includes(metal)) continue;
      const unbound = state.unbound(metal);
      more += leftUnbound(unbound, state.boundToTitrant(metal), 1 / rise) - unbound;
    }
    return perL * more;
  }
  const target = watchedUnbound * tenTo(-decades);
  // By how much titrant unbound has to rise for the watched metals to come down to that.
  const factor = Math.max(
    tenTo(-DECADES),
    (((watchedBound + watchedUnbound) / target - 1) * watchedUnbound) / watchedBound,
  );
  let more = titrant * (factor - 1);
  for (const metal of model.metals) {
    const unbound = state.unbound(metal);
    more += unbound - leftUnbound(unbound, state.boundToTitrant(metal), factor);
  }
  return perL * more;
}

/**
 * The same where the end is taken at equivalence: titrant that stands beside metal that is shown has to rise `decades` of ten against it.
 * @param titrant titrant that counts as unbound, mol/L
 * @param shown metal unbound, mol/L
 * @param deaf metals that only take titrant, and give it up to a back titrant
 */
export function remainingToEquivalenceL(
  model: StageModel,
  state: VesselState,
  sides: { readonly titrant: number; readonly shown: number; readonly deaf: readonly ComponentId[] },
  decades: number,
  back: boolean,
): number {
  const { titrant, shown, deaf } = sides;
  const perL = (model.volumeL + state.volumeFromBuretteL) / model.burette.molPerL;
  const rise = tenTo(decades / 2);
  if (!back) return perL * (titrant * (rise - 1) + shown * (1 - 1 / rise));
  let more = titrant * (1 - 1 / rise) + shown * (rise - 1);
  for (const metal of deaf) {
    const unbound = state.unbound(metal);
    more += leftUnbound(unbound, state.boundToTitrant(metal), 1 / rise) - unbound;
  }
  return perL * more;
}
