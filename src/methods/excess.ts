import type { Knowledge } from "../constants/knowledge.ts";
import { foretoldCrossing, type Outlook } from "./end-point-search.ts";
import { frozenComplexes } from "./frozen.ts";
import { withoutLittleDye } from "./little-dye.ts";
import { remainingL } from "./remaining-volume.ts";
import { vesselSample } from "./solution.ts";
import { stageModel, type StageModel, type VesselState } from "./stage-model.ts";
import type { StagePlan, Task } from "./types.ts";

/**
 * Burette volume, L, at which the back titrant begins to stand unbound, where a loosely held metal (calcium in excess at pH 4 to 5)
 * keeps the titrant that is to be titrated back: what is free at the start says nothing of it then.
 */
export function backEndPointL(model: StageModel): number {
  const back = model.burette;
  const most = (model.at(0).titrantTotal * model.volumeL) / back.molPerL;
  const seen = (state: VesselState): number =>
    Math.log10(Math.max(state.unbound(back.component), Number.MIN_VALUE) / SEEN_MOL_PER_L);
  const look = (volumeL: number): Outlook => {
    const state = model.at(volumeL);
    return { criterion: seen(state), remainingL: remainingL(model, state, [back.component], -seen(state), true) };
  };
  const free = (model.at(0).titrantUnbound * model.volumeL) / back.molPerL;
  const from = Math.max(BEFORE_FREE_IS_GONE * free, LEAST_OF_ALL * most);
  const found = foretoldCrossing(look, from, most, 0.1 / PARTS);
  const step = most / PARTS;
  if (found) return found.found ? Math.min(most, step * Math.ceil(found.volumeL / step)) : most;
  let low = 0;
  let high = most;
  for (let parts = 1; parts < PARTS; parts *= 2) {
    const middle = (low + high) / 2;
    if (seen(model.at(middle)) >= 0) high = middle;
    else low = middle;
  }
  return high;
}

/** Where the search begins: most of the free titrant gone, or a little of all of it. */
const BEFORE_FREE_IS_GONE = 0.9;
const LEAST_OF_ALL = 0.05;
/** To a hundredth of the titrant: the excess is a round figure anyway. */
const PARTS = 128;
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
    ...withoutLittleDye(task, plan),
    mode: "back",
    titrant: { ...plan.titrant, molPerL: UNDILUTING_MOL_PER_L },
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
