import type { SolidDefinition } from "../constants/knowledge.ts";

/**
 * Whether a solid forms on the time scale of a titration: the fresh or active phase (aged and crystalline ones do not form in time),
 * at once ("at-once"), or also within minutes ("minutes"). Slower ones stay supersaturated, which the answer says.
 */
export function formsInTitration(solid: SolidDefinition, within: "at-once" | "minutes"): boolean {
  return solid.fresh && (solid.pace === "fast" || (within === "minutes" && solid.pace === "minutes"));
}
