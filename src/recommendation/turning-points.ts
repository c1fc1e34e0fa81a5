import type { Knowledge } from "../constants/knowledge.ts";
import type { Task } from "../methods/types.ts";
import { briefOf } from "./brief-document.ts";
import { numberChanges, reagentChanges, type NumberChange, type ReagentChange } from "./brief-changes.ts";
import type { Standing, TurningPoint, TurningPoints, UnmovedChange } from "./contract-turning-points.ts";
import { seekTurning } from "./seek-turning.ts";
import type { StandingAnswer } from "./standing.ts";

/** Answers a task as far as its verdict and its first method; may do so in another thread. */
export type AskStanding = (task: Task) => Promise<StandingAnswer>;

export interface TurningOptions {
  /** Ends the search; what has been found so far is the answer. */
  readonly signal?: AbortSignal;
  /** Told after each recommendation that was worked out. */
  readonly report?: (soFar: TurningPoints) => void;
  /** How many tasks are asked at once (default 2). */
  readonly together?: number;
}

/** Two answers are the same where verdict and first method are; methods are the same where their kinds are (see `kindOf`). */
function changesBetween(before: Standing, after: Standing): TurningPoint["changes"] {
  return [
    ...(before.method?.kind === after.method?.kind ? [] : (["method"] as const)),
    ...(before.verdict === after.verdict ? [] : (["verdict"] as const)),
  ];
}

const plain = ({ verdict, method }: Standing): Standing => ({ verdict, method });

/** What a search knows so far. */
interface Found {
  before: Standing;
  readonly points: TurningPoint[];
  readonly unmoved: UnmovedChange[];
  done: number;
  total: number;
  runs: number;
}

/**
 * The smallest single changes of a brief that change its first method or its verdict: each level and the requirement, up and down, and each reagent
 * that the first method takes or the brief forbids. Every point was found by answering the changed brief: it turns, and nine tenths of the change
 * do not. Levels are looked at up to 100 times as high and down to a hundredth.
 * @param ask answers one task; called for several at once
 */
export async function turningPoints(
  task: Task,
  ask: AskStanding,
  knowledge: Knowledge,
  options: TurningOptions = {},
): Promise<TurningPoints> {
  const { signal, report, together = 2 } = options;
  const found: Found = {
    before: { verdict: "not-fit", method: null },
    points: [],
    unmoved: [],
    done: 0,
    total: 0,
    runs: 0,
  };
  const tell = (): void => report?.(documentOf(task, found, knowledge));
  const asked: AskStanding = async (changed) => {
    signal?.throwIfAborted();
    const answer = await ask(changed);
    found.runs++;
    tell();
    return answer;
  };
  try {
    const work = await workOf(task, found, asked, knowledge);
    found.total = work.length;
    tell();
    await workThrough(work, together, () => {
      found.done++;
      tell();
    });
  } catch (error) {
    if (!signal?.aborted) throw error;
  }
  return documentOf(task, found, knowledge);
}

const documentOf = (task: Task, found: Found, knowledge: Knowledge): TurningPoints => ({
  contract: 1,
  knowledge: { version: knowledge.version, hash: knowledge.hash },
  brief: briefOf(task, knowledge),
  before: found.before,
  points: [...found.points].sort(bySize),
  unmoved: [...found.unmoved],
  done: found.done,
  total: found.total,
  runs: found.runs,
});

/** Answers the brief as it is, and lists what there is to look at. */
async function workOf(
  task: Task,
  found: Found,
  ask: AskStanding,
  knowledge: Knowledge,
): Promise<(() => Promise<void>)[]> {
  const standing = await ask(task);
  found.before = plain(standing);
  const full =
    task.laboratory.available === null
      ? null
      : await ask({ ...task, laboratory: { ...task.laboratory, available: null } });
  const reagents = reagentChanges(task, standing.reagents, full?.reagents ?? [], knowledge);
  return [
    ...reagents.map((change) => () => withReagent(change, found, ask, knowledge)),
    ...numberChanges(task).flatMap((change) =>
      (["up", "down"] as const)
        .filter((direction) => direction === "up" || change.variable.from > 0)
        .map((direction) => () => alongNumber(change, direction, found, ask, knowledge)),
    ),
  ];
}

/** Does pieces of work, several at once; the first that fails ends all. */
async function workThrough(work: (() => Promise<void>)[], together: number, pieceDone: () => void): Promise<void> {
  const worker = async (): Promise<void> => {
    try {
      for (let next = work.shift(); next; next = work.shift()) {
        await next();
        pieceDone();
      }
    } catch (error) {
      work.length = 0;
      throw error;
    }
  };
  const ended = await Promise.allSettled(Array.from({ length: Math.max(1, together) }, worker));
  for (const end of ended) if (end.status === "rejected") throw end.reason;
}

async function alongNumber(
  change: NumberChange,
  direction: "up" | "down",
  found: Found,
  ask: AskStanding,
  knowledge: Knowledge,
): Promise<void> {
  const { what, subject, unit, variable } = change;
  // Six figures: a level that came out of another unit carries the noise of its conversion.
  const fields = { what, subject, direction, unit, from: Number(variable.from.toPrecision(6)) };
  const answers = new Map<number, Standing>();
  const end = await seekTurning(variable, direction, async (value) => {
    const answer = plain(await ask(change.at(value)));
    answers.set(value, answer);
    return changesBetween(found.before, answer).length > 0;
  });
  if (end.kind !== "turns") {
    found.unmoved.push({ ...fields, upTo: end.upTo, settled: end.kind === "nothing" });
    return;
  }
  const after = answers.get(end.to)!;
  found.points.push({
    ...fields,
    to: end.to,
    factor: fields.from > 0 ? Number((end.to / fields.from).toPrecision(4)) : null,
    changes: changesBetween(found.before, after),
    after,
    unchangedAt: [...end.unchangedAt],
    brief: briefOf(change.at(end.to), knowledge),
  });
}

async function withReagent(
  { what, subject, task }: ReagentChange,
  found: Found,
  ask: AskStanding,
  knowledge: Knowledge,
): Promise<void> {
  const after = plain(await ask(task));
  const changes = changesBetween(found.before, after);
  const fields = { what, subject, direction: null, unit: null, from: null };
  if (changes.length === 0) found.unmoved.push({ ...fields, upTo: null, settled: true });
  else
    found.points.push({
      ...fields,
      to: null,
      factor: null,
      changes,
      after,
      unchangedAt: [],
      brief: briefOf(task, knowledge),
    });
}

/** Smallest change first; what is no number comes after, as it has no size. */
function bySize(a: TurningPoint, b: TurningPoint): number {
  const size = ({ factor, what }: TurningPoint): number =>
    what === "forbid" || what === "allow" ? 1e9 : factor === null || factor === 0 ? 1e8 : Math.abs(Math.log(factor));
  return size(a) - size(b) || a.what.localeCompare(b.what) || a.subject.localeCompare(b.subject);
}
