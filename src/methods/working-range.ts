import type { Knowledge } from "../constants/knowledge.ts";
import { bufferAmount } from "./buffers.ts";
import { evaluate } from "./evaluate.ts";
import { type DevelopedStage } from "./develop.ts";
import { threatsOf } from "./threats.ts";
import type { StagePlan, Task } from "./types.ts";
import { stageBudget } from "./uncertainty.ts";
import { detourRecord } from "./way-round.ts";

/** pH range in which a titration still meets the requirement, all else kept. */
export interface WorkingRange {
  readonly low: number;
  readonly high: number;
}

/** A working range, and the expanded uncertainty (relative, bias included) at a pH of it; null where the requirement does not hold. */
export interface ScannedRange extends WorkingRange {
  readonly expandedAt: (pH: number) => number | null;
}

/** Steps of the search outwards: what a bench sets a pH to, then what a meter tells apart. */
const COARSE = 0.5;
const FINE = 0.1;
/** Beyond its published window the dye's colours are not known to hold; a little grace for rounded figures. */
const BEYOND_WINDOW = 0.3;
/** Further from the planned pH than this nothing is looked for. */
const FURTHEST = 2.5;
const round = (pH: number): number => Math.round(pH * 100) / 100;

/** The plan at another pH; the amount of a strong acid or alkali is what that pH takes. */
export function atPH(plan: StagePlan, pH: number, knowledge: Knowledge): StagePlan {
  const buffer = knowledge.buffers.get(plan.buffer.id);
  if (buffer === undefined || buffer.kind === "pair" || pH === plan.pH) return { ...plan, pH };
  return { ...plan, pH, buffer: { id: buffer.id, molPerL: bufferAmount(buffer, pH) } };
}

/** Expanded uncertainty (relative, bias included) of a titration at a pH, all else kept; null where the requirement does not hold there. */
export function expandedWhereHeld(task: Task, stage: DevelopedStage, pH: number, knowledge: Knowledge): number | null {
  const { window } = stage.skeleton;
  if (pH < window[0] - BEYOND_WINDOW || pH > window[1] + BEYOND_WINDOW) return null;
  // A way round keeps to the pH of its record: cyanide is not brought below what is safe because the sums would allow it.
  const { detour } = stage.plan;
  const finish = detour ? detourRecord(detour, knowledge).finish.pH : null;
  if (finish && (pH < finish[0] || pH > finish[1])) return null;
  const agents = [...stage.plan.masking.map((m) => m.agent), ...stage.plan.auxiliary.map((a) => a.id)];
  if (agents.some((id) => outsideAgent(knowledge, id, pH))) return null;
  const evaluation = evaluate(task, atPH(stage.plan, pH, knowledge), knowledge);
  if (evaluation.status === "failed" || evaluation.blockedBy.length > 0) return null;
  if (threatsOf(task, evaluation, knowledge).some((t) => t.blocks)) return null;
  const { expanded } = stageBudget(task, evaluation, knowledge);
  return 100 * expanded <= task.requirementPercent ? expanded : null;
}

function outsideAgent(knowledge: Knowledge, id: string, pH: number): boolean {
  const range = knowledge.agents.get(id)?.pH;
  return range !== undefined && (pH < range[0] || pH > range[1] + 1);
}

/** Searches outwards from the planned pH, over half units and then to a tenth; a method that misses the requirement has no width. */
export function scannedRange(task: Task, stage: DevelopedStage, knowledge: Knowledge): ScannedRange {
  const { pH } = stage.plan;
  const looked = new Map<number, number | null>();
  const expandedAt = (at: number): number | null => {
    const key = round(at);
    const known = looked.get(key);
    if (known !== undefined) return known;
    const expanded = expandedWhereHeld(task, stage, key, knowledge);
    looked.set(key, expanded);
    return expanded;
  };
  if (expandedAt(pH) === null) return { low: pH, high: pH, expandedAt };
  const edge = (direction: -1 | 1): number => {
    let last = pH;
    let beyond = direction * COARSE * (Math.floor((direction * pH) / COARSE + 1e-6) + 1);
    while (Math.abs(beyond - pH) < FURTHEST && expandedAt(beyond) !== null) {
      last = beyond;
      beyond = round(beyond + direction * COARSE);
    }
    return tenthBetween(last, beyond, direction, expandedAt);
  };
  return { low: edge(-1), high: edge(1), expandedAt };
}

/** The last tenth, from `held` towards `lost`, at which the requirement holds. */
function tenthBetween(held: number, lost: number, direction: -1 | 1, expandedAt: ScannedRange["expandedAt"]): number {
  const tenth = (n: number): number => round(held + direction * FINE * n);
  let low = 0;
  let high = Math.ceil(Math.abs(lost - held) / FINE - 1e-6);
  while (high - low > 1) {
    const middle = Math.floor((low + high) / 2);
    if (expandedAt(tenth(middle)) === null) high = middle;
    else low = middle;
  }
  return tenth(low);
}

/** The pH range in which a titration still meets the requirement, all else kept. */
export function workingRange(task: Task, stage: DevelopedStage, knowledge: Knowledge): WorkingRange {
  const { low, high } = scannedRange(task, stage, knowledge);
  return { low, high };
}
