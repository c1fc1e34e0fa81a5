import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { metalKinetics } from "./kinetics.ts";
import { stageModel } from "./stage-model.ts";
import type { StagePlan, Task } from "./types.ts";

/**
 * Complexes of a back titration that, once formed hot, do not exchange in the cold acid solution any more: mol/L of the vessel
 * by metal; undefined where nothing stands or cools before the back titrant goes in.
 */
export function frozenComplexes(
  task: Task,
  plan: StagePlan,
  knowledge: Knowledge,
): ReadonlyMap<ComponentId, number> | undefined {
  if (plan.backTitrant === null || !(plan.preparation.includes("cool") || plan.preparation.includes("wait")))
    return undefined;
  const model = stageModel(task, plan, knowledge);
  const formed = model.at(0);
  const frozen = new Map<ComponentId, number>();
  for (const metal of model.metals) {
    const kinetics = metalKinetics(knowledge, metal, plan.titrant.id);
    if (kinetics.class === "inert" || (kinetics.class === "slow" && plan.pH < 7))
      frozen.set(metal, formed.boundToTitrant(metal));
  }
  return frozen;
}
