import { createHash } from "node:crypto";
import { UnavailableError } from "./worker-pool.ts";

/** A long calculation as it stands: how far it is, and what it has found so far. */
export interface Job<Result> {
  readonly id: string;
  readonly state: "running" | "done" | "stopped" | "failed";
  readonly progress: { readonly done: number; readonly total: number };
  /** The answer, or what there is of it while the calculation runs or after it was stopped; null where there is nothing yet. */
  readonly result: Result | null;
  /** Why it failed; null otherwise. */
  readonly message: string | null;
}

/** What a calculation is given to say how far it is, and to be stopped by. */
export interface JobControl<Result> {
  readonly signal: AbortSignal;
  readonly report: (done: number, total: number, soFar: Result | null) => void;
}

/** Long calculations that are started, watched and stopped by their id. */
export interface JobService<Asks, Result> {
  /**
   * Starts the calculation, or finds it: the same question has the same id, and one that was stopped or failed begins again.
   * Throws an UnavailableError "busy" where too many run already.
   */
  readonly start: (asks: Asks) => string;
  /** The job of this id; null where none is kept. */
  readonly look: (id: string) => Job<Result> | null;
  /** Stops a running job; what it found so far stays. False where no such job is kept. */
  readonly stop: (id: string) => boolean;
}

export interface JobOptions {
  readonly kept?: number;
  readonly running?: number;
}

/** How many jobs are kept, the oldest finished one goes first. */
const KEPT = 32;
/** How many may run at once; they share the threads of the server. */
const RUNNING = 4;

interface Kept<Result> {
  job: Job<Result>;
  readonly abort: AbortController;
}

/**
 * A service for one kind of long calculation.
 * @param run does the work; it looks at `signal` now and then and returns what it has when it is aborted
 * @param log takes one line for each job that failed
 */
export function createJobs<Asks, Result>(
  run: (asks: Asks, control: JobControl<Result>) => Promise<Result | null>,
  log: (line: string) => void,
  options: JobOptions = {},
): JobService<Asks, Result> {
  const { kept = KEPT, running = RUNNING } = options;
  const jobs = new Map<string, Kept<Result>>();
  const isRunning = ({ job }: Kept<Result>): boolean => job.state === "running";

  const begin = (id: string, asks: Asks): void => {
    const entry: Kept<Result> = {
      job: { id, state: "running", progress: { done: 0, total: 0 }, result: null, message: null },
      abort: new AbortController(),
    };
    jobs.delete(id);
    jobs.set(id, entry);
    const oldest = [...jobs].find(([, other]) => !isRunning(other));
    if (jobs.size > kept && oldest) jobs.delete(oldest[0]);
    const { signal } = entry.abort;
    const report: JobControl<Result>["report"] = (done, total, soFar) => {
      entry.job = { ...entry.job, progress: { done, total }, result: soFar ?? entry.job.result };
    };
    void (async () => {
      try {
        const result = await run(asks, { signal, report });
        entry.job = { ...entry.job, state: signal.aborted ? "stopped" : "done", result: result ?? entry.job.result };
      } catch (error) {
        const message = error instanceof Error ? error.message : String(error);
        log(`job ${id}: ${message}`);
        entry.job = { ...entry.job, state: "failed", message };
      }
    })();
  };

  return {
    start: (asks) => {
      const id = createHash("sha256").update(JSON.stringify(asks)).digest("hex").slice(0, 16);
      const known = jobs.get(id);
      if (known && (known.job.state === "running" || known.job.state === "done")) return id;
      if ([...jobs.values()].filter(isRunning).length >= running)
        throw new UnavailableError("busy", `${running} long calculations are running already`);
      begin(id, asks);
      return id;
    },
    look: (id) => jobs.get(id)?.job ?? null,
    stop: (id) => {
      const entry = jobs.get(id);
      if (!entry) return false;
      if (isRunning(entry)) entry.abort.abort();
      return true;
    },
  };
}
