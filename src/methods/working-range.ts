import type { Knowledge } from "../constants/knowledge.ts";
import { evaluate } from "./evaluate.ts";
import { type DevelopedStage } from "./develop.ts";
import { benchPH } from "./dye-uses.ts";
import { threatsOf } from "./threats.ts";
import type { Task } from "./types.ts";
import { stageBudget } from "./uncertainty.ts";
import { detourRecord } from "./way-round.ts";

/** pH range in which a titration still meets the requirement, all else kept. */
export interface WorkingRange {
  readonly low: number;
  readonly high: number;
}

const COARSE = 0.3;
const FINE = 0.1;
/** Beyond its published window the dye's colours are not known to hold; half a unit of grace for rounded figures. */
const BEYOND_WINDOW = 0.3;
const round = (pH: number): number => Math.round(pH * 100) / 100;

function holdsAt(task: Task, stage: DevelopedStage, pH: number, knowledge: Knowledge): boolean {
  const { window } = stage.skeleton;
  if (pH < window[0] - BEYOND_WINDOW || pH > window[1] + BEYOND_WINDOW) return false;
  // A way round keeps to the pH of its record: cyanide is not brought below what is safe because the sums would allow it.
  const { detour } = stage.plan;
  const finish = detour ? detourRecord(detour, knowledge).finish.pH : null;
  if (finish && (pH < finish[0] || pH > finish[1])) return false;
  const agents = [...stage.plan.masking.map((m) => m.agent), ...stage.plan.auxiliary.map((a) => a.id)];
  if (agents.some((id) => outsideAgent(knowledge, id, pH))) return false;
  const evaluation = evaluate(task, { ...stage.plan, pH }, knowledge);
  if (evaluation.status === "failed" || evaluation.blockedBy.length > 0) return false;
  const left = threatsOf(task, evaluation, knowledge).filter((t) => t.blocks);
  return left.length === 0 && 100 * stageBudget(task, evaluation, knowledge).expanded <= task.requirementPercent;
}

function outsideAgent(knowledge: Knowledge, id: string, pH: number): boolean {
  const range = knowledge.agents.get(id)?.pH;
  return range !== undefined && (pH < range[0] || pH > range[1] + 1);
}

/** Searches outwards from the planned pH; a method that misses the requirement has no width. */
export function workingRange(task: Task, stage: DevelopedStage, knowledge: Knowledge): WorkingRange {
  const { pH } = stage.plan;
  if (!holdsAt(task, stage, pH, knowledge)) return { low: pH, high: pH };
  const edge = (direction: -1 | 1): number => {
    let last = pH;
    for (let p = round(pH + direction * COARSE); Math.abs(p - pH) < 2.5; p = round(p + direction * COARSE)) {
      if (!holdsAt(task, stage, p, knowledge)) break;
      last = p;
    }
    for (let p = round(last + direction * FINE), n = 0; n < 2; p = round(p + direction * FINE), n++) {
      if (!holdsAt(task, stage, p, knowledge)) break;
      last = p;
    }
    return last;
  };
  return { low: edge(-1), high: edge(1) };
}

/** Moves a target that sits near an edge to the middle of its working range, inside the published window of the dye. */
export function centred(task: Task, stage: DevelopedStage, range: WorkingRange, knowledge: Knowledge): DevelopedStage {
  const { pH } = stage.plan;
  const margin = 0.25 * (range.high - range.low);
  if (range.high - range.low < 0.2 || (pH - range.low >= margin && range.high - pH >= margin)) return stage;
  const low = Math.max(range.low, stage.skeleton.window[0]);
  const high = Math.min(range.high, stage.skeleton.window[1]);
  if (high < low) return stage;
  const plan = { ...stage.plan, pH: benchPH([low, high]) };
  if (plan.pH === pH || !holdsAt(task, stage, plan.pH, knowledge)) return stage;
  return { ...stage, plan, evaluation: evaluate(task, plan, knowledge) };
}
