import type { Knowledge } from "../constants/knowledge.ts";

/**
 * Burden of an agent for choosing which sets are worth evaluating (the rules weigh the evaluated ones): hazard first,
 * then one more bottle. Same order as the weights in rules/, which decide.
 */
const HAZARD_BURDEN: Readonly<Record<string, number>> = {
  cyanide: 18,
  mercury: 20,
  sulfide: 10,
  carcinogen: 6,
  stench: 6,
  toxic: 3,
  fluoride: 2,
  formaldehyde: 3,
  "thorium-uranium": 20,
  lead: 3,
  cadmium: 5,
};

/** Hazard burden of a reagent by its tags, in the points of the rules. */
export function hazardBurden(id: string, knowledge: Knowledge): number {
  const tags = knowledge.reagents.get(id)?.hazardTags ?? [];
  return Math.max(0, ...tags.map((t) => HAZARD_BURDEN[t] ?? 0));
}
