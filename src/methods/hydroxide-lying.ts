import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { StageModel, VesselState } from "./stage-model.ts";

const hydroxideIds = new WeakMap<Knowledge, ReadonlySet<string>>();

/** Ids of the solids that hold one metal and hydroxide, nothing else. */
function hydroxidesOf(knowledge: Knowledge): ReadonlySet<string> {
  const known = hydroxideIds.get(knowledge);
  if (known) return known;
  const ids = new Set(
    knowledge.solids
      .filter((s) => (s.components["H+"] ?? 0) < 0 && Object.keys(s.components).length === 2)
      .map((s) => s.id),
  );
  hydroxideIds.set(knowledge, ids);
  return ids;
}

/** How much of a metal lies as its hydroxide in this state of the vessel, mol/L: what left the equilibrium for good, and what stands in it. */
export function lyingAsHydroxideMolPerL(
  model: StageModel,
  state: VesselState,
  metal: ComponentId,
  knowledge: Knowledge,
): number {
  const hydroxides = hydroxidesOf(knowledge);
  const held = model.held
    .filter((h) => h.component === metal && h.why === "precipitated" && hydroxides.has(h.by))
    .reduce((sum, h) => sum + h.molPerL, 0);
  return model.system.solidRows.reduce(
    (sum, solid, i) =>
      sum + (hydroxides.has(solid.id) ? (solid.components[metal] ?? 0) * (state.result.solidsMolPerL[i] ?? 0) : 0),
    held,
  );
}
