import { setTimeout as pause } from "node:timers/promises";
import type { Knowledge } from "../constants/knowledge.ts";
import type { Robustness } from "../recommendation/contract.ts";
import type { DrawsAnswer, MapRowAnswer, RobustnessWork } from "../recommendation/robustness.ts";
import { robustnessDocument, type MapSoFar, type RobustnessAsked } from "../recommendation/robustness-document.ts";
import { createJobs, type JobControl, type JobService } from "./job-service.ts";
import type { Jobs } from "./messages.ts";
import { UnavailableError, type WorkerPool } from "./worker-pool.ts";

/** How long the draws stand back when all threads are taken and many wait, ms. */
const STAND_BACK_MS = 2000;
/** Draws of a compiled method that are made at one asking, and of one that is evaluated as a whole: some tenths of a second. */
const CHUNK = 250;
const CHUNK_OF_WHOLE = 10;
/** Draws of the first asking: they say how fast the method goes. */
const FIRST_CHUNK = 10;
const MAP_ROWS = 13;
/** How often what there is so far is summed up, ms. */
const WRITTEN_EVERY_MS = 2000;

/** Who answers: threads, or the same thread. */
export interface RobustnessAsk {
  readonly draws: (asks: Jobs["draws"]["asks"]) => Promise<DrawsAnswer>;
  readonly mapRow: (asks: Jobs["mapRow"]["asks"]) => Promise<MapRowAnswer>;
  /** How many askings may be out at a time. */
  readonly atOnce: number;
}

/** Asks the threads of a pool, again and again while too many wait. */
export function askPool(pool: WorkerPool, atOnce: number): RobustnessAsk {
  const patient = async <T>(ask: () => Promise<T>): Promise<T> => {
    for (;;)
      try {
        return await ask();
      } catch (error) {
        if (!(error instanceof UnavailableError) || error.code !== "busy") throw error;
        await pause(STAND_BACK_MS, undefined, { ref: false });
      }
  };
  return {
    draws: (asks) => patient(() => pool.ask("draws", asks)),
    mapRow: (asks) => patient(() => pool.ask("mapRow", asks)),
    atOnce,
  };
}

/**
 * Makes all draws of a method and its map in chunks, several at a time; the figures do not depend on how many. Tells how far it is after each
 * chunk; when it is stopped it gives what there is, null before the first chunk.
 */
export async function runRobustness(
  asked: RobustnessAsked,
  ask: RobustnessAsk,
  { signal, report }: JobControl<Robustness>,
  knowledge: Knowledge,
): Promise<Robustness | null> {
  const { work } = asked;
  const total = work.draws + MAP_ROWS;
  const answers: DrawsAnswer[] = [];
  const rows = new Map<number, MapRowAnswer>();
  const done = (): number => answers.reduce((n, a) => n + a.draws.count, 0) + rows.size;
  const soFar = (): Robustness | null =>
    answers.length === 0 ? null : robustnessDocument(asked, answers, mapSoFar(rows), knowledge);
  report(0, total, null);
  const takeDraws = async (from: number, count: number): Promise<void> => {
    answers.push(await ask.draws({ work, from, count }));
    report(done(), total, null);
  };
  const first = Math.min(FIRST_CHUNK, work.draws);
  await takeDraws(0, first);
  let written = performance.now();
  const slow = answers[0]!.draws.whole > 0;
  await inTurn(chunks(work, first, slow ? CHUNK_OF_WHOLE : CHUNK), ask.atOnce, signal, async ({ from, count }) => {
    await takeDraws(from, count);
    // Summing up takes this thread as long as a few chunks take another: now and then is enough for who watches.
    if (performance.now() - written < WRITTEN_EVERY_MS) return;
    report(done(), total, soFar());
    written = performance.now();
  });
  const takeRow = async (row: number): Promise<void> => {
    rows.set(row, await ask.mapRow({ work, row }));
    report(done(), total, null);
  };
  await inTurn(
    Array.from({ length: MAP_ROWS }, (_, row) => row),
    ask.atOnce,
    signal,
    takeRow,
  );
  return soFar();
}

/** Threads of the server that draws may take at a time; others find a place between the chunks. */
const AT_ONCE = 2;

/** Robustness as long calculations of a server. */
export const createRobustness = (
  pool: WorkerPool,
  knowledge: Knowledge,
  log: (line: string) => void,
): JobService<RobustnessAsked, Robustness> =>
  createJobs((asked, control) => runRobustness(asked, askPool(pool, AT_ONCE), control, knowledge), log);

const chunks = ({ draws }: RobustnessWork, first: number, size: number): { from: number; count: number }[] =>
  Array.from({ length: Math.ceil((draws - first) / size) }, (_, i) => ({
    from: first + i * size,
    count: Math.min(size, draws - first - i * size),
  }));

/** Does every task of a list, `atOnce` at a time, until it is stopped. */
async function inTurn<T>(
  list: readonly T[],
  atOnce: number,
  signal: AbortSignal,
  work: (one: T) => Promise<void>,
): Promise<void> {
  let next = 0;
  const hand = async (): Promise<void> => {
    while (next < list.length && !signal.aborted) await work(list[next++]!);
  };
  await Promise.all(Array.from({ length: atOnce }, hand));
}

/** The map where all its rows are there. */
function mapSoFar(rows: ReadonlyMap<number, MapRowAnswer>): MapSoFar | null {
  const axes = rows.get(0)?.axes ?? null;
  if (axes === null || rows.size < MAP_ROWS) return null;
  return { axes, rows: Array.from({ length: MAP_ROWS }, (_, row) => rows.get(row)!.row) };
}
