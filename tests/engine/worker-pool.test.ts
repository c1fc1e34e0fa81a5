import { afterEach, describe, expect, test } from "vitest";
import { createWorkerPool, type PoolOptions, type WorkerPool } from "../../src/engine/worker-pool.ts";
import { openServices } from "../../src/main.ts";
import { startSite } from "../web/fixture/site.ts";

const script = new URL("./fixture/worker.mjs", import.meta.url);
let pool: WorkerPool;
const open = (options: PoolOptions = {}): WorkerPool => {
  pool = createWorkerPool({ script, workers: 1, ...options });
  return pool;
};
afterEach(async () => {
  await pool.close();
});
/** Sends a word to the stand-in thread, which answers with it unless the word says otherwise. */
const ask = (word: string): Promise<unknown> => pool.ask("mapIon", word);

describe("createWorkerPool", () => {
  test("answers each question with its own answer, whatever the order they come back in", async () => {
    open({ workers: 2 });
    const answers = await Promise.all(["wait 60", "a", "b", "wait 5", "c"].map(ask));
    expect(answers).toEqual(["wait 60", "a", "b", "wait 5", "c"]);
  });

  test.each(["die", "throw"])(
    "refuses the question over which its thread %ss, and answers the next from a new one",
    async (word) => {
      open();
      const dying = ask(word);
      const waiting = ask("after it");
      await expect(dying).rejects.toMatchObject({ code: "worker" });
      await expect(waiting).resolves.toBe("after it");
      await expect(ask("later")).resolves.toBe("later");
    },
  );

  test("hands on a failure with the trace of the thread it happened in", async () => {
    open();
    await expect(ask("fail")).rejects.toMatchObject({ message: "invented failure", stack: "where it happened" });
    await expect(ask("a")).resolves.toBe("a");
  });

  test("ends a thread that takes longer than the limit, and goes on", async () => {
    open({ timeLimitMS: 300 });
    await expect(ask("hang")).rejects.toMatchObject({ code: "time-limit", status: 503 });
    await expect(ask("a")).resolves.toBe("a");
  });

  test("refuses what goes beyond the queue, and takes questions again when it is shorter", async () => {
    open({ waiting: 1 });
    const first = ask("wait 100");
    const second = ask("b");
    await expect(ask("c")).rejects.toMatchObject({ code: "busy", status: 503 });
    await expect(Promise.all([first, second])).resolves.toEqual(["wait 100", "b"]);
    await expect(ask("d")).resolves.toBe("d");
  });

  test("tells those who wait when it closes, and refuses what comes later", async () => {
    open();
    const outcome = Promise.allSettled([ask("hang"), ask("b")]);
    await pool.close();
    for (const result of await outcome)
      expect(result).toMatchObject({ status: "rejected", reason: { code: "closed" } });
    await expect(ask("c")).rejects.toMatchObject({ code: "closed" });
  });
});

describe("a site over the pool", () => {
  const brief = { title: "Invented", analytes: [{ ion: "Zn2+", concentration: { value: 1, unit: "mmol/L" } }] };
  const post = (url: string): Promise<Response> =>
    fetch(`${url}/api/recommendations`, { method: "POST", body: JSON.stringify(brief) });

  test("answers 500 with an id when a thread dies, 503 when it takes too long, and pages meanwhile", async () => {
    open({ timeLimitMS: 300 });
    let word = "die";
    const site = await startSite({ recommend: () => ask(word) as never });
    try {
      const died = await post(site.url);
      expect(died.status).toBe(500);
      const { id } = (await died.json()) as { readonly id: string };
      expect(site.lines.join("\n")).toContain(id);
      word = "hang";
      const slow = post(site.url);
      expect((await fetch(`${site.url}/about`)).status).toBe(200);
      const late = await slow;
      expect({ status: late.status, retry: late.headers.get("retry-after") }).toEqual({ status: 503, retry: "60" });
    } finally {
      await site.stop();
    }
  });

  test("works a real brief out in a thread while the thread of the server stays free", async () => {
    open();
    const { services, close } = await openServices((line) => {
      throw new Error(line);
    });
    try {
      const before = performance.eventLoopUtilization();
      const analytes = ["Fe3+"].map((ion) => ({ ion, concentration: { value: 2, unit: "mmol/L" } }));
      const answer = await services.recommend({ ...brief, analytes });
      const { utilization } = performance.eventLoopUtilization(before);
      expect(answer.methods.length).toBeGreaterThan(0);
      expect(answer.knowledge.hash).toBe(services.knowledge.hash);
      // Worked out on the server's own thread this brief would take all of its time.
      expect(utilization).toBeLessThan(0.4);
      await expect(services.recommend({})).rejects.toMatchObject({ code: "input" });
    } finally {
      await close();
    }
  });
});
