import type { ComponentId } from "../constants/knowledge.ts";
import type { StageModel, VesselState } from "./stage-model.ts";
import { countedIn, type StagePlan } from "./types.ts";

/** K' = [MY] / ([M not bound to Y] [Y not bound to metal]) as it stands in the vessel, log10, per metal bound at all. */
export function conditionalConstants(model: StageModel, state: VesselState): Map<ComponentId, number> {
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

/** log10 of the side-reaction coefficient of the first metal determined, before the titrant comes; 0 where it has no value. */
export function alphaOfAnalyte(model: StageModel, start: VesselState, plan: StagePlan): number {
  const metal = countedIn(plan)[0];
  if (metal === undefined) return 0;
  const value = Math.log10(start.unbound(metal) / start.free(metal));
  return Number.isFinite(value) ? value : 0;
}
