import type { Knowledge } from "../constants/knowledge.ts";
import { excessFor } from "./back-skeletons.ts";
import { boundAtBackEndPoint } from "./excess.ts";
import { releaseExcess } from "./release-plan.ts";
import { vesselSample } from "./solution.ts";
import { stageModel } from "./stage-model.ts";
import type { StagePlan, Task } from "./types.ts";

/** Titrant in excess for a back titration: a good third above everything in the vessel that still binds it at the end point. */
export function withExcess(task: Task, plan: StagePlan, knowledge: Knowledge): StagePlan {
  if (plan.backTitrant === null) return plan;
  if (plan.detour) return withExcessForWay(task, plan, knowledge);
  if (plan.release !== null) return { ...plan, excessTitrantMolPerL: releaseExcess(task, plan, knowledge) };
  const everything = vesselSample(task, plan)
    .filter((c) => knowledge.components.get(c.component)?.kind === "metal" && !plan.removed.includes(c.component))
    .reduce((s, c) => s + c.inVesselMolPerL, 0);
  // Titrant that an earlier titration left is bound to its own metals already.
  const bound = boundAtBackEndPoint(task, plan, knowledge) - (plan.carried?.titrantMolPerL ?? 0);
  return { ...plan, excessTitrantMolPerL: excessFor(Math.max(bound, everything * 1e-6)) };
}

/** Titrant over what binds, tried in turn until a collected precipitate has dissolved. */
const EXCESS_TO_DISSOLVE = [1, 1.5, 2.5];
/** Share of the precipitate that may lie undissolved. */
const UNDISSOLVED_BORNE = 1e-3;

/** Titrant in excess for the metal of a way round: what binds and a good third, more where the precipitate would not dissolve in it. */
function withExcessForWay(task: Task, plan: StagePlan, knowledge: Knowledge): StagePlan {
  const bare = stageModel(task, { ...plan, excessTitrantMolPerL: 0 }, knowledge);
  const { way, totals } = bare.solution;
  // Titrant that the precipitate sets free needs no further excess.
  if (!way || way.record.kind === "conversion") return plan;
  const chelated = plan.chelate ? [plan.chelate.metal] : [];
  const metals = bare.metals.filter((m) => !chelated.includes(m)).reduce((s, m) => s + (totals.get(m) ?? 0), 0);
  let made = plan;
  for (const factor of EXCESS_TO_DISSOLVE) {
    made = { ...plan, excessTitrantMolPerL: excessFor(factor * metals) };
    const model = stageModel(task, made, knowledge);
    const start = model.at(0);
    const lying = model.system.solids.reduce((s, _, i) => s + (start.result.solidsMolPerL[i] ?? 0), 0);
    if (lying <= UNDISSOLVED_BORNE * way.expectedMolPerL) break;
  }
  return made;
}
