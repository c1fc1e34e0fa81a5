import { describe, expect, it } from "vitest";
import { expectRelative } from "../expect-relative.ts";
import { criterionOf } from "../../src/methods/criterion.ts";
import { firstCrossing, foretoldCrossing, foretoldEdge, type Outlook } from "../../src/methods/end-point-search.ts";
import { readEndPoint } from "../../src/methods/read-end-point.ts";
import { stageModel } from "../../src/methods/stage-model.ts";
import type { StagePlan } from "../../src/methods/types.ts";
import { calciumPlan, dye, inventedPlan, inventedTask, KNOWLEDGE, magnesiumPlan } from "./invented.ts";

// Every end found by foretelling is held against the criterion itself, and against the plain search that knows nothing of chemistry.

const back: StagePlan = inventedPlan({
  determines: ["Ni2+"],
  mode: "back",
  backTitrant: { id: "Zn2+", molPerL: 0.01 },
  excessTitrantMolPerL: 0.004,
});
const CASES: readonly [name: string, task: ReturnType<typeof inventedTask>, plan: StagePlan][] = [
  ["zinc, table of xylenol orange", inventedTask({ "Zn2+": 0.01 }), inventedPlan()],
  ["zinc beside lead that is titrated along", inventedTask({ "Zn2+": 0.01 }, { "Pb2+": 0.004 }), inventedPlan()],
  ["calcium beside magnesium that lies as hydroxide", inventedTask({ "Ca2+": 0.01 }, { "Mg2+": 0.005 }), calciumPlan()],
  ["magnesium, constants of the dye", inventedTask({ "Mg2+": 0.01 }), magnesiumPlan()],
  ["zinc with a dye that has neither", inventedTask({ "Zn2+": 0.01 }), inventedPlan({ indicator: dye("zincon") })],
  ["nickel, back with zinc", inventedTask({ "Ni2+": 0.01 }), back],
];

describe("an end point found by what each vessel foretells", () => {
  it.each(CASES)("%s: meets the criterion, and its band the edges", (_, task, plan) => {
    const model = stageModel(task, plan, KNOWLEDGE);
    const isBack = plan.backTitrant !== null;
    const expectedL = isBack ? (model.at(0).titrantUnbound * model.volumeL) / model.burette.molPerL : 0.025;
    const determined = new Set(plan.determines);
    const read = readEndPoint(model, determined, expectedL, KNOWLEDGE);
    expect(read.why).toBe(null);
    const criterion = criterionOf(model, determined, isBack);
    const plain = firstCrossing((v) => criterion.of(model.at(v)), expectedL);
    expect(Math.abs(read.volumeL - plain.volumeL)).toBeLessThanOrEqual(4e-7 * expectedL);
    const [low, high] = read.bandL;
    expect(low).toBeLessThan(read.volumeL);
    expect(high).toBeGreaterThan(read.volumeL);
    const within = 0.02 * criterion.bandLog10;
    expect(Math.abs(criterion.of(model.at(low)) + criterion.bandLog10)).toBeLessThan(within);
    expect(Math.abs(criterion.of(model.at(high)) - criterion.bandLog10)).toBeLessThan(within);
  });
  it("needs a handful of vessels where the plain search needs dozens", () => {
    const model = stageModel(inventedTask({ "Zn2+": 0.01 }), inventedPlan(), KNOWLEDGE);
    const criterion = criterionOf(model, new Set(["Zn2+"]), false);
    const look = (v: number): Outlook => {
      const state = model.at(v);
      return { criterion: criterion.of(state), remainingL: criterion.remainingL(state, 0) };
    };
    expect(foretoldCrossing(look, 0.0125, 0.025)!.evaluations).toBeLessThanOrEqual(8);
    expect(firstCrossing((v) => look(v).criterion, 0.025).evaluations).toBeGreaterThan(10);
  });
});

describe("foretelling that does not help", () => {
  const straight = (v: number): Outlook => ({ criterion: v - 1, remainingL: 1 - v });
  it("leaves the search to others where the first look is past the end or no number", () => {
    expect(foretoldCrossing(straight, 1.1, 1)).toBe(null);
    expect(foretoldCrossing(() => ({ criterion: Number.NaN, remainingL: 1 }), 0.5, 1)).toBe(null);
  });
  it("reports none where nothing turns within four times the expected volume", () => {
    expect(foretoldCrossing((v) => ({ criterion: -1, remainingL: 10 - v }), 0.5, 1)).toMatchObject({ found: false });
  });
  it("still closes in where it misjudges the way by far", () => {
    const search = foretoldCrossing((v) => ({ criterion: v - 1.7, remainingL: 0.05 * (1.7 - v) }), 0.5, 1);
    expectRelative(search!.volumeL, 1.7, 2e-7);
  });
  it("gives no edge outside the burette", () => {
    expect(foretoldEdge((v) => ({ criterion: 0, remainingL: -2 - v }), 1, 1)).toBe(null);
  });
});
