import { cautionsFor, type Knowledge } from "../constants/index.ts";
import type { StagePlan } from "../methods/types.ts";

const EXCHANGE = "tetracyanonickelate-exchange";

/** Every reagent id that a titration uses, once each. */
export function reagentsOf(plan: StagePlan): string[] {
  return [
    ...new Set([
      plan.titrant.id,
      ...(plan.backTitrant ? [plan.backTitrant.id] : []),
      ...(plan.indicator ? [plan.indicator.id] : []),
      plan.buffer.id,
      ...plan.masking.map((m) => m.agent).filter((id) => id !== "hydroxide"),
      ...plan.auxiliary.map((a) => a.id),
      ...plan.added.map((a) => a.id),
      ...(plan.chelate ? [plan.chelate.metal] : []),
      ...(plan.preparation.includes("alcohol") ? ["alcohol"] : []),
      // The bottle of the exchange keeps its hazards under the name of the step.
      ...(plan.preparation.includes(EXCHANGE) ? [EXCHANGE] : []),
    ]),
  ];
}

/** Whether any step of the titration is hot: 60 C and above; warming to 40 to 60 C is not. */
export const isHot = (plan: StagePlan): boolean => plan.preparation.some((p) => p === "heat" || p === "boil");

/** Reagents that come with the sample itself count for cautions too: a cyanide bath is a cyanide hazard whatever is added. */
function hazardousIds(plan: StagePlan, sampleIds: readonly string[]): string[] {
  return [...reagentsOf(plan), ...sampleIds];
}

/** Hazard tags that apply to these titrations under their conditions. */
export function hazardTagsOf(plans: readonly StagePlan[], knowledge: Knowledge): string[] {
  return [
    ...new Set(
      plans.flatMap((plan) =>
        cautionsFor(reagentsOf(plan), { pH: plan.pH, hot: isHot(plan) }, knowledge).map((c) => c.tag),
      ),
    ),
  ];
}

/** Caution sentences for these titrations, each once. */
export function cautionTexts(
  plans: readonly StagePlan[],
  sampleIds: readonly string[],
  knowledge: Knowledge,
): string[] {
  return [
    ...new Set(
      plans.flatMap((plan) =>
        cautionsFor(hazardousIds(plan, sampleIds), { pH: plan.pH, hot: isHot(plan) }, knowledge).map((c) =>
          c.reagents.length > 0 ? `${c.reagents.map((id) => nameOf(id, knowledge)).join(", ")}: ${c.text}` : c.text,
        ),
      ),
    ),
  ];
}

const nameOf = (id: string, knowledge: Knowledge): string =>
  knowledge.agents.get(id)?.name ?? knowledge.buffers.get(id)?.name ?? knowledge.indicators.get(id)?.name ?? id;
