import { describe, expect, it } from "vitest";
import { evaluate } from "../../src/methods/evaluate.ts";
import { singleMethod } from "../../src/methods/methods.ts";
import { bearsRicherMatrix, toleranceLimits } from "../../src/methods/tolerance.ts";
import type { StagePlan, Task } from "../../src/methods/types.ts";
import { stageBudget } from "../../src/methods/uncertainty.ts";
import { workingRange } from "../../src/methods/working-range.ts";
import { developed } from "../recommendation/developed.ts";
import { expectRelative } from "../expect-relative.ts";
import { calciumPlan, inventedPlan, inventedTask, KNOWLEDGE } from "./invented.ts";

const limits = (task: Task, plan: StagePlan) =>
  toleranceLimits(task, singleMethod(task, developed(task, plan), KNOWLEDGE), KNOWLEDGE);

const withLevel = (task: Task, component: string, molPerL: number): Task => ({
  ...task,
  matrix: task.matrix.map((row) => (row.component === component ? { ...row, molPerL } : row)),
});

/** Whether the titration meets the requirement with its dye clear. */
function holds(task: Task, plan: StagePlan): boolean {
  const evaluation = evaluate(task, plan, KNOWLEDGE);
  return (
    evaluation.status !== "failed" &&
    evaluation.blockedBy.length === 0 &&
    100 * stageBudget(task, evaluation, KNOWLEDGE).expanded <= task.requirementPercent
  );
}

describe("toleranceLimits", () => {
  const task = inventedTask({ "Zn2+": 0.008 }, { "Cd2+": 0.00001, "Mn2+": 0.00001, nitrate: 0.01 });
  const rows = limits(task, inventedPlan());
  it("are confirmed by the evaluation: it holds just inside and breaks beyond", () => {
    const broken = rows.filter((row) => row.limitMolPerL < 2);
    expect(broken.map((row) => row.component)).toEqual(["Cd2+", "Mn2+"]);
    for (const { component, limitMolPerL } of broken) {
      expect(holds(withLevel(task, component, 0.98 * limitMolPerL), inventedPlan()), component).toBe(true);
      expect(holds(withLevel(task, component, 1.05 * limitMolPerL), inventedPlan()), component).toBe(false);
    }
  });
  it("of what is titrated whole leave the requirement what the uncertainty does not use, as a share of the analyte", () => {
    const alone = inventedTask({ "Zn2+": 0.008 }, { "Cd2+": 0.00001 });
    const clean = stageBudget(alone, evaluate(withLevel(alone, "Cd2+", 1e-9), inventedPlan(), KNOWLEDGE), KNOWLEDGE);
    const [cadmium] = limits(alone, inventedPlan());
    expectRelative(cadmium!.limitMolPerL, 0.008 * (0.01 - 2 * clean.combined), 0.04);
  });
  it("shrink with the requirement", () => {
    const [wide] = limits(task, inventedPlan());
    const [narrow] = limits({ ...task, requirementPercent: 0.5 }, inventedPlan());
    expect(narrow!.limitMolPerL).toBeLessThan(0.5 * wide!.limitMolPerL);
  });
  it("stand with and without the mask where there is one, the masked one higher", () => {
    const masking = [
      { agent: "fluoride", masks: ["Al3+"], via: "complexation", molPerL: 0.25, basis: "equilibrium" },
    ] as const;
    const aluminium = limits(inventedTask({ "Zn2+": 0.008 }, { "Al3+": 0.0005 }), inventedPlan({ masking }));
    expect(aluminium.map((row) => row.withMasking)).toEqual([true, false]);
    expect(aluminium[0]!.limitMolPerL).toBeGreaterThan(100 * aluminium[1]!.limitMolPerL);
  });
  it("are none for what carries charge and nothing else", () => {
    expect(limits(inventedTask({ "Zn2+": 0.008 }, { perchlorate: 0.01 }), inventedPlan())).toEqual([]);
  });
});

describe("workingRange", () => {
  const at = (plan: StagePlan, task = inventedTask({ [plan.determines[0]!]: 0.008 })) => {
    const stage = developed(task, plan);
    const window = KNOWLEDGE.indicators
      .get(plan.indicator!.id)!
      .uses.find((u) => u.mode === "direct" && u.ions.length === 1 && u.ions[0] === plan.determines[0])!.pH;
    return { window, range: workingRange(task, { ...stage, skeleton: { ...stage.skeleton, window } }, KNOWLEDGE) };
  };
  it.each([
    ["zinc", inventedPlan()],
    ["calcium", calciumPlan()],
  ])("of %s contains the target, stays by the dye's window, and its ends still meet the requirement", (_ion, plan) => {
    const { window, range } = at(plan);
    expect(range.low).toBeLessThan(plan.pH);
    expect(range.high).toBeGreaterThan(plan.pH);
    expect(range.low).toBeGreaterThanOrEqual(window[0] - 0.3 - 1e-9);
    expect(range.high).toBeLessThanOrEqual(window[1] + 0.3 + 1e-9);
    for (const pH of [range.low, range.high])
      expect(holds(inventedTask({ [plan.determines[0]!]: 0.008 }), { ...plan, pH })).toBe(true);
  });
  it("has no width where the target itself misses", () => {
    const { range } = at(inventedPlan(), inventedTask({ "Zn2+": 0.008 }, {}, { requirementPercent: 0.01 }));
    expect(range).toEqual({ low: 5.5, high: 5.5 });
  });
  it("never reaches below pH 9.5 with cyanide in the vessel", () => {
    const cyanide = { id: "cyanide", molPerL: 0.05, purpose: "invented" };
    const plan = calciumPlan({
      pH: 9.8,
      auxiliary: [cyanide],
      determines: ["Mg2+"],
      buffer: { id: "ammonia", molPerL: 0.1 },
    });
    const magnesium = { ...plan, indicator: { id: "mordant-black-11", molPerL: 1e-5 } };
    const { range } = at(magnesium, inventedTask({ "Mg2+": 0.008 }, {}, { requirementPercent: 3 }));
    expect(range.high).toBeGreaterThan(10);
    expect(range.low).toBeGreaterThanOrEqual(9.5);
  });
});

describe("bearsRicherMatrix", () => {
  const bears = (matrix: Readonly<Record<string, number>>): boolean | null => {
    const task = inventedTask({ "Zn2+": 0.008 }, matrix);
    return bearsRicherMatrix(task, singleMethod(task, developed(task, inventedPlan()), KNOWLEDGE), KNOWLEDGE);
  };
  it("asks whether one and a half times the metals of the matrix are still within the limit of tolerance", () => {
    const task = inventedTask({ "Zn2+": 0.008 }, { "Cd2+": 0.00001 });
    const { limitMolPerL } = limits(task, inventedPlan()).find((row) => row.component === "Cd2+")!;
    expect(bears({ "Cd2+": limitMolPerL / 1.6 })).toBe(true);
    expect(bears({ "Cd2+": limitMolPerL / 1.4 })).toBe(false);
  });
  it("says nothing where no metal is beside the analyte, or the method misses as it is", () => {
    expect(bears({ nitrate: 0.1, "Na+": 0.1 })).toBe(null);
    expect(bears({ "Cd2+": 0.004 })).toBe(null);
  });
});
