import type { Knowledge } from "../constants/knowledge.ts";
import { frozenComplexes } from "./frozen.ts";
import { vesselSample } from "./solution.ts";
import { stageModel, type StageModel, type VesselState } from "./stage-model.ts";
import type { StagePlan, Task } from "./types.ts";

/**
 * Burette volume, L, at which the back titrant begins to stand unbound, where a loosely held metal (calcium in excess at pH 4 to 5)
 * keeps the titrant that is to be titrated back: what is free at the start says nothing of it then.
 */
export function backEndPointL(model: StageModel): number {
  const back = model.burette;
  let low = 0;
  let high = (model.at(0).titrantTotal * model.volumeL) / back.molPerL;
  for (let i = 0; i < HALVINGS; i++) {
    const middle = (low + high) / 2;
    if (model.at(middle).unbound(back.component) >= SEEN_MOL_PER_L) high = middle;
    else low = middle;
  }
  return high;
}

/** To a hundredth of the titrant: the excess is a round figure anyway. */
const HALVINGS = 7;
/** The back titrant that a dye sees at the first colour that stays, mol/L (the usual transitions lie at pM 5 to 7). */
const SEEN_MOL_PER_L = 1e-6;
/** A burette so strong that it does not dilute what is looked at, mol/L. */
const UNDILUTING_MOL_PER_L = 10;

/**
 * Titrant, mol per litre of the vessel, that the metals hold when the back titrant has taken the rest: the analyte whole, slow
 * complexes as they formed, others by the equilibrium with the back titrant. What an excess holds only loosely (calcium at pH 4.5
 * beside a copper back titration) is given up before the end point, and needs no titrant of its own.
 */
export function boundAtBackEndPoint(task: Task, plan: StagePlan, knowledge: Knowledge): number {
  const back = plan.backTitrant;
  if (back === null) return 0;
  const sample = vesselSample(task, plan).filter(
    (c) => knowledge.components.get(c.component)?.kind === "metal" && !plan.removed.includes(c.component),
  );
  const everything = sample.reduce((s, c) => s + c.inVesselMolPerL, 0);
  const strong: StagePlan = {
    ...plan,
    excessTitrantMolPerL: 2 * everything,
    backTitrant: { ...back, molPerL: UNDILUTING_MOL_PER_L },
  };
  const frozen = frozenComplexes(task, strong, knowledge) ?? new Map<string, number>();
  const model = stageModel(task, strong, knowledge, { frozen });
  const kept = [...frozen.values()].reduce((s, v) => s + v, 0);
  const start = model.at(0);
  const ofAnalyte = new Map(plan.determines.map((m) => [m, start.boundToTitrant(m)]));
  const boundIn = (state: VesselState): number =>
    model.metals.reduce((s, m) => {
      if (m === back.id) return s + (model.solution.fromSample.get(m) ?? 0);
      return s + Math.max(state.boundToTitrant(m) / state.dilution, ofAnalyte.get(m) ?? 0);
    }, 0);
  const others = [...model.solution.fromSample.keys()].some(
    (m) => m !== back.id && !frozen.has(m) && !plan.determines.includes(m) && start.boundToTitrant(m) > 0,
  );
  if (!others) return kept + boundIn(start);
  return kept + boundIn(model.at(backEndPointL(model)));
}
