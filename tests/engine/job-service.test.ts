import { setImmediate as turn } from "node:timers/promises";
import { expect, test } from "vitest";
import { createJobs, type JobControl } from "../../src/engine/job-service.ts";
import { UnavailableError } from "../../src/engine/worker-pool.ts";

/** A calculation that takes a step whenever the event loop turns. */
async function count(to: number, { signal, report }: JobControl<number>): Promise<number> {
  for (let i = 0; i < to; i++) {
    if (signal.aborted) return i;
    report(i, to, i);
    await turn();
  }
  return to;
}

async function settled<T>(look: () => { readonly state: string } & T): Promise<T> {
  while (look().state === "running") await turn();
  return look();
}

test("a job is done with its result, and the same question finds it again", async () => {
  let runs = 0;
  const jobs = createJobs<number, number>(
    (to, control) => {
      runs++;
      return count(to, control);
    },
    () => undefined,
  );
  const id = jobs.start(3);
  expect(jobs.look(id)?.state).toBe("running");
  expect(await settled(() => jobs.look(id)!)).toMatchObject({ state: "done", result: 3, message: null });
  expect(jobs.start(3)).toBe(id);
  expect(runs).toBe(1);
  expect(jobs.start(4)).not.toBe(id);
});

test("a stopped job keeps what it found so far and can be started again", async () => {
  const jobs = createJobs<number, number>(count, () => undefined);
  const id = jobs.start(1e6);
  await turn();
  await turn();
  expect(jobs.stop(id)).toBe(true);
  const job = await settled(() => jobs.look(id)!);
  expect(job).toMatchObject({ state: "stopped", progress: { total: 1e6 } });
  expect(job.result).toBeGreaterThan(0);
  expect(job.result).toBeLessThan(100);
  expect(jobs.start(1e6)).toBe(id);
  expect(jobs.look(id)?.state).toBe("running");
  jobs.stop(id);
});

test("a job that fails says why and leaves a line in the log", async () => {
  const lines: string[] = [];
  const jobs = createJobs<string, number>(
    (asks) => Promise.reject(new Error(`no ${asks}`)),
    (line) => lines.push(line),
  );
  const id = jobs.start("water");
  expect(await settled(() => jobs.look(id)!)).toMatchObject({ state: "failed", message: "no water" });
  expect(lines).toEqual([`job ${id}: no water`]);
});

test("too many at once are refused, and old finished jobs are forgotten", async () => {
  const jobs = createJobs<number, number>(count, () => undefined, { kept: 2, running: 1 });
  const first = jobs.start(1);
  expect(() => jobs.start(2)).toThrow(UnavailableError);
  await settled(() => jobs.look(first)!);
  const second = jobs.start(2);
  await settled(() => jobs.look(second)!);
  const third = jobs.start(3);
  await settled(() => jobs.look(third)!);
  expect(jobs.look(first)).toBeNull();
  expect(jobs.look(third)?.state).toBe("done");
  expect(jobs.stop(first)).toBe(false);
});
