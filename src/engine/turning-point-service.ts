import { setTimeout as pause } from "node:timers/promises";
import type { Knowledge } from "../constants/knowledge.ts";
import type { Task } from "../methods/types.ts";
import type { TurningPoints } from "../recommendation/contract.ts";
import { turningPoints, type AskStanding } from "../recommendation/turning-points.ts";
import { createJobs, type JobService } from "./job-service.ts";
import { UnavailableError, type WorkerPool } from "./worker-pool.ts";

/** How long the search stands back when all threads are taken and many wait, ms. */
const STAND_BACK_MS = 2000;

/** Asks a thread for the standing of a task, again and again while too many wait. */
export function patientStanding(pool: WorkerPool, signal?: AbortSignal): AskStanding {
  return async (task) => {
    for (;;) {
      signal?.throwIfAborted();
      try {
        return await pool.ask("standing", task);
      } catch (error) {
        if (!(error instanceof UnavailableError) || error.code !== "busy") throw error;
        await pause(STAND_BACK_MS, undefined, { ref: false });
      }
    }
  };
}

/** Turning points as long calculations of a server: two tasks are out in the threads at a time, others find a place between them. */
export function createTurningPoints(
  pool: WorkerPool,
  knowledge: Knowledge,
  log: (line: string) => void,
): JobService<Task, TurningPoints> {
  return createJobs(
    (task, { signal, report }) =>
      turningPoints(task, patientStanding(pool, signal), knowledge, {
        signal,
        report: (soFar) => report(soFar.done, soFar.total, soFar),
      }),
    log,
  );
}
