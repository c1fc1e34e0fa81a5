import { describe, expect, it } from "vitest";
import { loadKnowledge } from "../../src/constants/index.ts";
import { runRobustness, type RobustnessAsk } from "../../src/engine/robustness-service.ts";
import { InputError } from "../../src/errors.ts";
import { robustnessSchema } from "../../src/recommendation/contract.ts";
import { robustnessWork, workOutDraws, workOutMapRow } from "../../src/recommendation/robustness.ts";
import { robustnessText } from "../../src/recommendation/robustness-text.ts";
import { DOCUMENT } from "../recommendation/example-document.ts";

const knowledge = loadKnowledge();
const asked = (draws: number, seed = 4) => ({
  document: DOCUMENT,
  ...robustnessWork(DOCUMENT, undefined, { draws, seed }, knowledge),
});
/** Answers in this thread, later asked first answered, as threads may. */
const here = (atOnce: number): RobustnessAsk => ({
  atOnce,
  draws: async (asks) => {
    if (asks.from % 3 === 0) await new Promise((resolve) => setTimeout(resolve, 5));
    return workOutDraws(asks, knowledge);
  },
  mapRow: (asks) => Promise.resolve(workOutMapRow(asks, knowledge)),
});
const quiet = { signal: new AbortController().signal, report: () => undefined };

describe("runRobustness", () => {
  it("gives the same document however many answer, and it keeps its contract", async () => {
    const one = await runRobustness(asked(700), here(1), quiet, knowledge);
    const two = await runRobustness(asked(700), here(2), quiet, knowledge);
    expect(two).toEqual(one);
    const document = robustnessSchema.parse(one);
    expect(document.done).toBe(700);
    expect(document.map?.expandedPercent).toHaveLength(13);
    expect(robustnessText(document)).toMatch(/met in \d+\.\d % of 700 draws/);
    expect(await runRobustness(asked(700, 5), here(2), quiet, knowledge)).not.toEqual(one);
  });

  it("stops with the draws made so far", async () => {
    const stop = new AbortController();
    const found = await runRobustness(
      asked(5000),
      here(1),
      { signal: stop.signal, report: (done) => (done >= 260 ? stop.abort() : undefined) },
      knowledge,
    );
    expect(found!.done).toBe(260);
    expect(found!.draws).toBe(5000);
    expect(found!.map).toBeNull();
  });

  it.each([
    ["gone", {}, "$.method"],
    [undefined, { draws: 5 }, "$.draws"],
    [undefined, { seed: -1 }, "$.seed"],
  ])("refuses method %s with %j", (which, options, path) => {
    const ask = (): unknown => robustnessWork(DOCUMENT, which, options, knowledge);
    expect(ask).toThrow(InputError);
    try {
      ask();
    } catch (error) {
      expect((error as InputError).faults[0]?.path).toBe(path);
    }
  });
});
