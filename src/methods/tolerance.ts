import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { type Break, findBreak, type Probe } from "../numerics/find-break.ts";
import { evaluate } from "./evaluate.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import type { EvaluatedMethod } from "./methods.ts";
import { releaseExcess } from "./release-plan.ts";
import { sharingStandards } from "./remembered.ts";
import {
  empiricalCeiling,
  liesAsFlocs,
  maskCeiling,
  likelyJumps,
  whatBreaks,
  type LimitEnd,
} from "./tolerance-ends.ts";
import type { MethodMode, StagePlan, Task } from "./types.ts";
import { combineDifference, isAsked, stageBudget } from "./uncertainty.ts";

/** The level of one component up to which the method still meets the requirement, mol/L in the sample, and what ends it. */
export interface ToleranceLimit {
  readonly component: ComponentId;
  /** 0 where the method misses even with a trace of it; `HIGHEST_MOL_PER_L` where nothing ends the room up to there. */
  readonly limitMolPerL: number;
  readonly presentMolPerL: number;
  readonly withMasking: boolean;
  readonly endsBy: LimitEnd;
}

/** What a method has to bring for its limits: its mode and the plans of its titrations. */
export interface LimitedMethod {
  readonly mode: MethodMode;
  readonly stages: readonly { readonly plan: StagePlan }[];
}

/** Beyond this it is no longer a matrix component. */
export const HIGHEST_MOL_PER_L = 2;
const LOWEST_MOL_PER_L = 1e-9;
/** How near the level that holds and the level that breaks are brought: the printed limit is confirmed 1 % on either side. */
const RELATIVE = 0.004;

/** The task with one component of the matrix at another level, or with it where the brief does not name it. */
export function withLevel(task: Task, component: ComponentId, molPerL: number): Task {
  const named = task.matrix.some((c) => c.component === component);
  const matrix = named
    ? task.matrix.map((c) => (c.component === component ? { ...c, molPerL } : c))
    : [...task.matrix, { component, shown: component, molPerL, protonsPerComponent: 0 }];
  return sharingStandards({ ...task, matrix }, task);
}

/** The excess of a release is not counted: more of it goes in until the first reading shows some. */
const enoughFor = (task: Task, plan: StagePlan, knowledge: Knowledge): StagePlan =>
  plan.release === null ? plan : { ...plan, excessTitrantMolPerL: releaseExcess(task, plan, knowledge) };

/** Every titration of a method evaluated for one sample, and by how much the worst result exceeds the requirement, in %. */
interface Standing {
  readonly evaluations: readonly StageEvaluation[];
  readonly excess: number; // Infinity where no result can be trusted
}

function standing(task: Task, mode: MethodMode, plans: readonly StagePlan[], knowledge: Knowledge): Standing {
  const evaluations = plans.map((plan) => evaluate(task, enoughFor(task, plan, knowledge), knowledge));
  if (evaluations.some((e) => e.status === "failed" || e.blockedBy.length > 0))
    return { evaluations, excess: Number.POSITIVE_INFINITY };
  const [whole, part] = evaluations;
  // A difference is judged as the difference it is; what is subtracted counts for itself only where it was asked for.
  const expanded =
    mode === "difference" && whole && part
      ? [
          ...(isAsked(task, part) ? [stageBudget(task, part, knowledge).expanded] : []),
          combineDifference(task, whole, part, knowledge).budget.expanded,
        ]
      : evaluations.map((e) => stageBudget(task, e, knowledge).expanded);
  return { evaluations, excess: Math.max(...expanded.map((u) => 100 * u - task.requirementPercent)) };
}

interface Limit {
  readonly molPerL: number;
  readonly endsBy: LimitEnd;
}

/** The titrations whose room is asked for; `asProposed` where they are those of the method and not the same without a mask. */
interface Asked {
  readonly mode: MethodMode;
  readonly plans: readonly StagePlan[];
  readonly asProposed: boolean;
}

/** The level up to which a component is borne by these plans, everything else in the sample staying as it is. */
function limitOf(
  task: Task,
  { mode, plans, asProposed }: Asked,
  component: ComponentId,
  presentMolPerL: number,
  knowledge: Knowledge,
): Limit {
  const seen = new Map<number, Standing>();
  const standingAt = (molPerL: number): Standing => {
    const known = seen.get(molPerL);
    const found = known ?? standing(withLevel(task, component, molPerL), mode, plans, knowledge);
    seen.set(molPerL, found);
    return found;
  };
  const flocsIn = ({ evaluations }: Standing): boolean => evaluations.some((e) => liesAsFlocs(e, component, knowledge));
  const from = Math.max(presentMolPerL, LOWEST_MOL_PER_L);
  const here = standingAt(from);
  // Flocs that the method as proposed puts up with are no news.
  const flocsBorne = asProposed && here.excess <= 0 && flocsIn(here);
  const at = (x: number): Probe => {
    const found = standingAt(x);
    return { x, excess: !flocsBorne && flocsIn(found) ? Number.POSITIVE_INFINITY : found.excess };
  };
  const why = (molPerL: number): LimitEnd => whatBreaks(standingAt(molPerL).evaluations, component, knowledge);
  const guesses = [
    ...linearGuesses(task, here, component, from, knowledge),
    ...likelyJumps(task, here.evaluations, component, knowledge),
  ].filter((g) => g < HIGHEST_MOL_PER_L);
  const start = at(from);
  let other: Probe;
  if (start.excess <= 0) {
    const near = Math.min(...guesses.filter((g) => g > from)) * (1 + RELATIVE / 3);
    other = at(Math.min(near, HIGHEST_MOL_PER_L));
    if (other.excess <= 0) other = at(HIGHEST_MOL_PER_L);
    if (other.excess <= 0) return { molPerL: HIGHEST_MOL_PER_L, endsBy: "none" };
  } else {
    other = at(LOWEST_MOL_PER_L);
    if (other.excess > 0) return { molPerL: 0, endsBy: why(LOWEST_MOL_PER_L) };
  }
  const [good, bad] = start.excess <= 0 ? [start, other] : [other, start];
  const found = confirmedBreak(at, good, bad, guesses, task.requirementPercent);
  return { molPerL: found.holds.x, endsBy: why(found.breaks.x) };
}

/** This far on either side of a limit it must hold, and must not. */
const CONFIRMED_AT = 0.01;
/** A step of the uncertainty larger than this part of the requirement is a jump, not a slope: there may be others near it. */
const JUMP = 0.005;
const ROUNDS = 5;

/** The break between two levels, looked at again where the uncertainty jumps and the jump is an island of less than 1 %. */
function confirmedBreak(
  at: (x: number) => Probe,
  holds: Probe,
  breaks: Probe,
  guesses: readonly number[],
  requirementPercent: number,
): Break {
  let found = findBreak((x) => at(x).excess, holds, breaks, { relative: RELATIVE, guesses });
  for (let round = 0; round < ROUNDS; round++) {
    if (found.breaks.excess - found.holds.excess < JUMP * requirementPercent) break;
    const above = at(found.holds.x * (1 + CONFIRMED_AT));
    const below = at(found.holds.x * (1 - CONFIRMED_AT));
    const [good, bad] = above.excess <= 0 ? [above, breaks] : below.excess > 0 ? [holds, below] : [null, null];
    if (good === null || bad.x <= good.x) break;
    found = findBreak((x) => at(x).excess, good, bad, { relative: RELATIVE });
  }
  return found;
}

/** Where the requirement would break if the bias grew in proportion to the level, which it does while the component is bound alike. */
function linearGuesses(
  task: Task,
  { evaluations, excess }: Standing,
  component: ComponentId,
  fromMolPerL: number,
  knowledge: Knowledge,
): number[] {
  return evaluations.flatMap((e) => {
    const own = e.biasOf.get(component) ?? 0;
    if (e.status === "failed" || own === 0) return [];
    const bias = e.biasFraction;
    const room = task.requirementPercent / 100 - (stageBudget(task, e, knowledge).expanded - Math.abs(bias));
    if (!(room > 0)) return [];
    const changes = [(room - bias) / own, (-room - bias) / own].filter((t) => (excess <= 0 ? t > 0 : t < 0 && t > -1));
    return changes.length === 0
      ? []
      : [fromMolPerL * (1 + (excess <= 0 ? Math.min(...changes) : Math.max(...changes)))];
  });
}

/** How much richer in what disturbs an ordinary sample may be than its brief expects (common practice). */
const RICHER = 1.5;

/**
 * Whether every metal ion of two or more charges in the matrix may be half as much again, all at once and the method unchanged, with the
 * requirement still met and no empirical mask beyond its level. Null where the method as it stands does not meet the requirement or nothing
 * of the kind is left in the vessel.
 */
export function bearsRicherMatrix(task: Task, method: EvaluatedMethod, knowledge: Knowledge): boolean | null {
  const plans = method.stages.map((s) => s.plan);
  const counts = (component: ComponentId): boolean => {
    const record = knowledge.components.get(component);
    return record?.kind === "metal" && record.charge >= 2 && !plans.every((p) => p.removed.includes(component));
  };
  const rows = task.matrix.filter((c) => c.molPerL > 0 && counts(c.component));
  if (rows.length === 0 || method.results.some((r) => 100 * r.budget.expanded > task.requirementPercent)) return null;
  if (rows.some((c) => empiricalCeiling(task, plans, c.component, knowledge) < RICHER * c.molPerL)) return false;
  const matrix = task.matrix.map((c) => (counts(c.component) ? { ...c, molPerL: RICHER * c.molPerL } : c));
  return standing(sharingStandards({ ...task, matrix }, task), method.mode, plans, knowledge).excess <= 0;
}

/** The plans without the agents that mask a component, and the sample without what only they kept out: how much of it alone would be borne. */
function unmasked(
  task: Task,
  plans: readonly StagePlan[],
  component: ComponentId,
): { readonly task: Task; readonly plans: readonly StagePlan[] } {
  const steps = plans.flatMap((p) => p.masking);
  const agents = new Set(steps.filter((m) => m.masks.includes(component)).map((m) => m.agent));
  const kept = new Set(steps.filter((m) => !agents.has(m.agent)).flatMap((m) => m.masks));
  const freed = new Set(steps.filter((m) => agents.has(m.agent)).flatMap((m) => m.masks.filter((c) => !kept.has(c))));
  return {
    task: sharingStandards(
      { ...task, matrix: task.matrix.filter((c) => c.component === component || !freed.has(c.component)) },
      task,
    ),
    plans: plans.map((p) => ({ ...p, masking: p.masking.filter((m) => !agents.has(m.agent)) })),
  };
}

/**
 * Tolerance limits of a method, with its masking, and without it where it masks the component: levels found by root finding, every one with what
 * ends it. What carries charge and nothing else, and what a separation takes out, has none.
 * @param components the matrix of the brief where nothing is said; others are looked at as if the sample held them too
 */
export function toleranceLimits(
  task: Task,
  method: LimitedMethod,
  knowledge: Knowledge,
  components: readonly ComponentId[] = task.matrix.map((c) => c.component),
): ToleranceLimit[] {
  const plans = method.stages.map((s) => s.plan);
  return components.flatMap((component) => {
    if (knowledge.components.get(component)?.kind === "inert" || plans.some((p) => p.removed.includes(component)))
      return [];
    const presentMolPerL = task.matrix.find((c) => c.component === component)?.molPerL ?? 0;
    const row = ({ molPerL, endsBy }: Limit, withMasking: boolean): ToleranceLimit => ({
      component,
      limitMolPerL: molPerL,
      presentMolPerL,
      withMasking,
      endsBy,
    });
    const { mode } = method;
    const masked = limitOf(task, { mode, plans, asProposed: true }, component, presentMolPerL, knowledge);
    const ceiling = maskCeiling(task, plans, component, presentMolPerL, knowledge);
    const rows = [row(ceiling.molPerL < masked.molPerL ? ceiling : masked, true)];
    if (plans.some((p) => p.masking.some((m) => m.masks.includes(component)))) {
      const bare = unmasked(task, plans, component);
      const alone = { mode, plans: bare.plans, asProposed: false };
      rows.push(row(limitOf(bare.task, alone, component, presentMolPerL, knowledge), false));
    }
    return rows;
  });
}
