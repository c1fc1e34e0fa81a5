import { describe, expect, it } from "vitest";
import { evaluate } from "../../src/methods/evaluate.ts";
import { singleMethod, type EvaluatedMethod } from "../../src/methods/methods.ts";
import type { StagePlan, Task } from "../../src/methods/types.ts";
import { stageBudget } from "../../src/methods/uncertainty.ts";
import { wouldMeet } from "../../src/methods/would-meet.ts";
import { expectRelative } from "../expect-relative.ts";
import { developed } from "../recommendation/developed.ts";
import { inventedPlan, inventedTask, KNOWLEDGE } from "./invented.ts";

const methodOf = (task: Task, plan: StagePlan): EvaluatedMethod => singleMethod(task, developed(task, plan), KNOWLEDGE);

// 3 mmol/L in 25 mL: 0.075 mmol, a titre of 15 mL with 0.005 mol/L.
const plan = inventedPlan({ titrant: { id: "EDTA", molPerL: 0.005 } });
const asking = (requirementPercent: number, matrix = {}): Task =>
  inventedTask({ "Zn2+": 0.003 }, matrix, { requirementPercent });

describe("wouldMeet", () => {
  it("finds ware and strength that meet the requirement, with the figure that the same evaluation gives", () => {
    const task = asking(0.33);
    const method = methodOf(task, plan);
    expect(100 * method.results[0]!.budget.expanded).toBeGreaterThan(0.33);
    const found = wouldMeet(task, method, KNOWLEDGE)!;
    expect(found.meets).toBe(true);
    const other: Task = {
      ...task,
      portion: { ...task.portion, volumeML: found.portionML },
      laboratory: { ...task.laboratory, buretteML: found.buretteML },
    };
    const evaluation = evaluate(other, { ...plan, titrant: { id: "EDTA", molPerL: found.titrantMolPerL } }, KNOWLEDGE);
    expectRelative(found.expanded, stageBudget(other, evaluation, KNOWLEDGE).expanded, 1e-9);
    expectRelative(found.titreML, evaluation.endPointML, 1e-9);
    expect(100 * found.expanded).toBeLessThanOrEqual(0.33);
  });
  it("changes no more than it must: a larger titre of the same burette before new ware all over", () => {
    const task = asking(0.37);
    const found = wouldMeet(task, methodOf(task, plan), KNOWLEDGE)!;
    const changed = [found.buretteML !== 25, found.portionML !== 25, found.titrantMolPerL !== 0.005];
    expect(found.meets).toBe(true);
    expect(changed.filter(Boolean).length).toBeLessThanOrEqual(2);
  });
  it("keeps every titre between 30 % and all of its burette", () => {
    const found = wouldMeet(asking(0.01), methodOf(asking(0.01), plan), KNOWLEDGE)!;
    expect(found.titreML).toBeGreaterThan(0.3 * found.buretteML);
    expect(found.titreML).toBeLessThan(found.buretteML);
  });
  it("tries the largest titre that a trace can have where none is read well", () => {
    const trace = inventedTask({ "Zn2+": 0.00001 }, {}, { requirementPercent: 1 });
    const weak = inventedPlan({ titrant: { id: "EDTA", molPerL: 0.002 } });
    const found = wouldMeet(trace, methodOf(trace, weak), KNOWLEDGE)!;
    expect(found).toMatchObject({ meets: false, buretteML: 10, portionML: 100, titrantMolPerL: 0.002 });
    expect(found.titreML).toBeLessThan(1);
  });
  it("says that nothing does, and names the largest part: the bias where an interferent is titrated whole", () => {
    const task = asking(0.3, { "Cd2+": 0.00006 });
    const found = wouldMeet(task, methodOf(task, plan), KNOWLEDGE)!;
    expect(found.meets).toBe(false);
    expect(found.largest.source).toBe("bias");
    expectRelative(found.largest.relative, 0.02, 0.05); // 0.06 of 3 mmol/L
  });
  it("names a term of the budget where no bias stands in the way", () => {
    const task = asking(0.05);
    const found = wouldMeet(task, methodOf(task, plan), KNOWLEDGE)!;
    expect([found.meets, found.largest.source]).not.toContain("bias");
    expect(found.meets).toBe(false);
  });
});
