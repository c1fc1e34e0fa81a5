import type { Brief, RecommendedMethod, StageDocument } from "./contract.ts";
import { figures, reagentWords } from "./text-words.ts";

/** A reagent with its level in the vessel and what that takes: "triethanolamine to 0.2 mol/L (20 mmol, 3 g)". */
export function amount(stage: StageDocument, id: string, molPerL: number): string {
  if (molPerL <= 0) return reagentWords(id);
  const taken = stage.amounts.find((a) => a.id === id);
  if (!taken) return `${reagentWords(id)} to ${figures(molPerL)} mol/L`;
  const named = taken.bottle === null || taken.bottle === reagentWords(id) ? "" : ` of ${taken.bottle}`;
  const grams = taken.grams === null ? "" : `, ${figures(taken.grams)} g${named}`;
  return `${reagentWords(id)} to ${figures(molPerL)} mol/L (${figures(taken.mmol)} mmol${grams})`;
}

/** An excess that fills the vessel is brought by a stronger solution. */
const LARGEST_PART_OF_VESSEL = 0.4;
const STRONGER = [1, 5, 10, 20];

/** Titrant in excess as it is measured: exactly where it enters the result, roughly where a first end point takes it back. */
export function excessStep(
  stage: StageDocument,
  method: RecommendedMethod,
  brief: Brief,
  molPerL: number,
  purpose: string,
): string {
  const titrant = stage.titrant ?? method.titrant;
  const vesselML = brief.portion.titrationVolumeML + (stage.vessel.carried?.addedML ?? 0);
  const mL = (strength: number): number => (molPerL * vesselML) / strength;
  if (stage.vessel.release === null)
    return `Add ${figures(mL(titrant.molPerL))} mL of ${figures(titrant.molPerL)} mol/L ${titrant.id}, measured exactly: ${purpose} (${figures(molPerL)} mol/L).`;
  const times = STRONGER.find((n) => mL(n * titrant.molPerL) <= LARGEST_PART_OF_VESSEL * vesselML) ?? 20;
  const strength = times * titrant.molPerL;
  return `Add about ${figures(mL(strength))} mL of ${figures(strength)} mol/L ${titrant.id}: ${purpose} (${figures(molPerL)} mol/L), not measured exactly.`;
}

/** Colours before and after the end point: "from wine-red or violet to blue". */
export function changeWords([from, to]: readonly [string, string]): string {
  const either = (colour: string): string => colour.replaceAll(/ (?:to|\/) /g, " or ");
  return `from ${either(from)} to ${either(to)}`;
}

/** Part of a level by which an earlier titre thins what is in the vessel already. */
const THINNED = 0.5;

/** Whether an agent of this level is in the vessel from the titration before. */
export const thereAlready = (before: StageDocument | null, id: string, molPerL: number): boolean =>
  before !== null &&
  [...before.masking.map((m) => ({ id: m.agent, molPerL: m.molPerL })), ...before.auxiliary].some(
    (a) => a.id === id && molPerL <= a.molPerL && molPerL >= THINNED * a.molPerL,
  );
