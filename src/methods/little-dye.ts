import { vesselSample } from "./solution.ts";
import type { StagePlan, Task } from "./types.ts";

/** Part of the analyte up to which a dye holds nothing that a round figure would show. */
const LITTLE = 0.01;

/** The plan without dye and reading where there is so little dye that neither amounts nor deposits hang on it: one vessel serves all of them. */
export function withoutLittleDye(task: Task, plan: StagePlan): StagePlan {
  const analyte = vesselSample(task, plan)
    .filter((c) => plan.determines.includes(c.component))
    .reduce((sum, c) => sum + c.inVesselMolPerL, 0);
  const indicator = plan.indicator && plan.indicator.molPerL > LITTLE * analyte ? plan.indicator : null;
  return { ...plan, indicator, electrode: null, detection: "visual" };
}
