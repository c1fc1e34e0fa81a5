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

const remembered = new WeakMap<Knowledge, Map<string, number>>();

/** Hazard burden of a reagent by its tags, in the points of the rules. */
export function hazardBurden(id: string, knowledge: Knowledge): number {
  let known = remembered.get(knowledge);
  if (known === undefined) remembered.set(knowledge, (known = new Map<string, number>()));
  let burden = known.get(id);
  if (burden === undefined) {
    const tags = knowledge.reagents.get(id)?.hazardTags ?? [];
    burden = Math.max(0, ...tags.map((t) => HAZARD_BURDEN[t] ?? 0));
    known.set(id, burden);
  }
  return burden;
}
