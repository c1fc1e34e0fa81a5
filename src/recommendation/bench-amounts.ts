import type { Knowledge } from "../constants/knowledge.ts";
import type { StagePlan, Task } from "../methods/types.ts";
import type { StageDocument } from "./contract.ts";

/** Bottles whose mass says nothing of the amount: solutions of some strength, and salts that bring several of what counts. */
const NOT_WEIGHED = /solution|peroxide|tetraborate|technical/;

/**
 * What one titration takes of each reagent but the titrants, from the levels of the plan and the volume of the vessel: mmol, and
 * g of the usual bottle where it is weighed (null elsewhere, and for what only sets the pH).
 */
export function amountsOf(task: Task, plan: StagePlan, knowledge: Knowledge): StageDocument["amounts"] {
  const vesselML = task.portion.titrationVolumeML + (plan.carried?.addedML ?? 0);
  const { detour, release } = plan;
  const levels = [
    plan.buffer,
    ...plan.masking.map((m) => ({ id: m.agent, molPerL: m.molPerL })),
    ...plan.auxiliary,
    ...plan.added.filter((a) => a.id !== plan.titrant.id),
    ...(detour ? [detour.reagent, ...(detour.precipitant ? [detour.precipitant] : [])] : []),
    ...(release ? [{ id: release.agent, molPerL: release.molPerL }] : []),
  ];
  const most = new Map<string, number>();
  for (const { id, molPerL } of levels) most.set(id, Math.max(molPerL, most.get(id) ?? 0));
  return [...most]
    .filter(([, molPerL]) => molPerL > 0)
    .map(([id, molPerL]) => {
      const bottle = knowledge.reagents.get(id);
      const mmol = molPerL * vesselML;
      const onlyPH = knowledge.buffers.get(id)?.component === null;
      const weighed = bottle?.molarMassGPerMol && !onlyPH && !NOT_WEIGHED.test(bottle.name) ? bottle : null;
      return {
        id,
        mmol: Number(mmol.toPrecision(3)),
        grams: weighed ? Number(((mmol * weighed.molarMassGPerMol!) / 1000).toPrecision(2)) : null,
        bottle: weighed?.name ?? null,
      };
    });
}
