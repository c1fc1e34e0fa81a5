import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { pairHasConstants, rowsFor } from "./masks.ts";
import type { MaskingStep, StagePlan } from "./types.ts";

/**
 * The same titration for a sample that also holds another component: what the masking agents of the plan do to it by practice they do to it too.
 * No agent is added and no amount changed.
 */
export function alsoMasked(plan: StagePlan, component: ComponentId, knowledge: Knowledge): StagePlan {
  if (plan.masking.some((m) => m.masks.includes(component))) return plan;
  const steps = plan.masking.flatMap((step): MaskingStep[] => {
    const agent = knowledge.agents.get(step.agent);
    const record = rowsFor(knowledge, step.agent, component, plan.pH).find(
      (r) => r.effect === "masks" || r.effect === "partial",
    );
    if (!agent || !record) return [];
    const via = record.via ?? "complexation";
    const converts = agent.converts.some((c) => c.from === component);
    if ((via === "reduction" || via === "oxidation") && !converts) return [];
    const judged = pairHasConstants(knowledge, agent, component, record.via);
    if (via === "precipitation" && !judged) return [];
    const basis = converts ? "conversion" : judged ? "equilibrium" : "empirical";
    return [{ ...step, masks: [component], via, basis }];
  });
  const first = steps[0];
  return first ? { ...plan, masking: [...plan.masking, first] } : plan;
}
