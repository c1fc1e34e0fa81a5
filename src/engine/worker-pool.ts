import { Worker } from "node:worker_threads";
import { AppError } from "../errors.ts";
import type { JobKind, Jobs, Question, Reply } from "./messages.ts";

/** How many threads answer at once. */
const WORKERS = 2;
/** How many questions may wait; more are refused, so that a queue never grows without end. */
const WAITING = 64;
/** How long one question may take, ms: several times the longest brief that was measured. */
const TIME_LIMIT_MS = 10 * 60_000;

export interface PoolOptions {
  readonly script?: URL;
  readonly data?: unknown;
  readonly workers?: number;
  readonly waiting?: number;
  readonly timeLimitMS?: number;
}

/** Threads that answer questions one at a time each; those that die are replaced when the next question comes. */
export interface WorkerPool {
  /** Resolves with the answer. Rejects with AppError "worker", or with an UnavailableError "time-limit", "busy" or "closed". */
  readonly ask: <K extends JobKind>(kind: K, asks: Jobs[K]["asks"]) => Promise<Jobs[K]["answers"]>;
  /** Ends the threads at once; whoever still waits is told "closed". */
  readonly close: () => Promise<void>;
}

interface Job {
  readonly question: Question;
  readonly resolve: (answer: Jobs[JobKind]["answers"]) => void;
  readonly reject: (error: Error) => void;
}

interface Seat {
  worker: Worker | null;
  job: Job | null;
  timer: NodeJS.Timeout | null;
}

/** A refusal for now, not a failure: the same question can be asked again later. */
export class UnavailableError extends AppError {
  readonly status = 503;
}

/** The failure as it happened in the thread, with its own trace, which is what the log shows. */
function asError({ message, stack }: Reply & { readonly ok: false }): AppError {
  const error = new AppError("worker", message);
  error.stack = stack;
  return error;
}

const ENGINE_WORKER = new URL("./engine-worker.mjs", import.meta.url);

/** A pool of threads; none is started before the first question. */
export function createWorkerPool(options: PoolOptions = {}): WorkerPool {
  const { script = ENGINE_WORKER, data, workers = WORKERS, waiting = WAITING, timeLimitMS = TIME_LIMIT_MS } = options;
  const seats: Seat[] = Array.from({ length: workers }, () => ({ worker: null, job: null, timer: null }));
  const queue: Job[] = [];
  let nextId = 1;
  let closing = false;

  const release = (seat: Seat): Job | null => {
    const { job, timer } = seat;
    if (timer) clearTimeout(timer);
    seat.job = null;
    seat.timer = null;
    return job;
  };
  const next = (): void => {
    for (const seat of seats) {
      if (seat.job) continue;
      const job = queue.shift();
      if (!job) break;
      begin(seat, job);
    }
  };
  const begin = (seat: Seat, job: Job): void => {
    seat.job = job;
    seat.worker ??= start(seat);
    seat.timer = setTimeout(() => {
      void drop(seat, new UnavailableError("time-limit", `no answer within ${timeLimitMS / 1000} s`));
    }, timeLimitMS);
    seat.worker.ref();
    seat.worker.postMessage(job.question);
  };
  const drop = async (seat: Seat, error: Error): Promise<void> => {
    const { worker } = seat;
    seat.worker = null;
    release(seat)?.reject(error);
    await worker?.terminate();
    next();
  };
  const start = (seat: Seat): Worker => {
    // The thread registers its own loader; the flags of the process would register a second one.
    const worker = new Worker(script, { workerData: data, execArgv: [] });
    worker.unref();
    worker.on("message", (reply: Reply | "ready") => {
      if (reply === "ready" || seat.worker !== worker || seat.job?.question.id !== reply.id) return;
      const job = release(seat);
      worker.unref();
      if (reply.ok) job?.resolve(reply.answers);
      else job?.reject(asError(reply));
      next();
    });
    const died = (why: string, cause?: unknown): void => {
      if (seat.worker === worker) void drop(seat, new AppError("worker", why, {}, cause));
    };
    worker.on("error", (error) => {
      died(`a worker failed: ${error instanceof Error ? error.message : String(error)}`, error);
    });
    worker.on("exit", (code) => {
      died(`a worker ended with code ${code}`);
    });
    return worker;
  };

  return {
    ask: (kind, asks) =>
      new Promise((resolve, reject) => {
        if (closing) reject(new UnavailableError("closed", "the server is stopping"));
        else if (queue.length >= waiting)
          reject(new UnavailableError("busy", `${waiting} questions are waiting already`));
        else {
          const question: Question = { id: nextId++, kind, asks };
          queue.push({ question, resolve, reject });
          next();
        }
      }),
    close: async () => {
      closing = true;
      const closed = new UnavailableError("closed", "the server is stopping");
      for (const job of queue.splice(0)) job.reject(closed);
      await Promise.all(seats.map((seat) => drop(seat, closed)));
    },
  };
}
