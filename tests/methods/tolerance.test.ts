import { describe, expect, it } from "vitest";
import { evaluate } from "../../src/methods/evaluate.ts";
import { singleMethod } from "../../src/methods/methods.ts";
import { bearsRicherMatrix, toleranceLimits } from "../../src/methods/tolerance.ts";
import type { StagePlan, Task } from "../../src/methods/types.ts";
import { stageBudget } from "../../src/methods/uncertainty.ts";
import { workingRange } from "../../src/methods/working-range.ts";
import { developed } from "../recommendation/developed.ts";
import { expectRelative } from "../expect-relative.ts";
import { backPlan, calciumPlan, inventedPlan, inventedTask, KNOWLEDGE, magnesiumPlan } from "./invented.ts";

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

describe("a limit of toleranceLimits", () => {
  const fluoride = {
    agent: "fluoride",
    masks: ["Al3+"],
    via: "complexation",
    molPerL: 0.25,
    basis: "equilibrium",
  } as const;
  const cyanide = (masks: readonly string[]) =>
    ({ agent: "cyanide", masks, via: "complexation", molPerL: 0.08, basis: "equilibrium" }) as const;
  const record = {
    agent: "triethanolamine",
    masks: ["Al3+"],
    via: "complexation",
    molPerL: 0.1,
    basis: "empirical",
  } as const;
  const hard = (matrix: Readonly<Record<string, number>>) =>
    inventedTask({ "Mg2+": 0.004 }, matrix, { requirementPercent: 2 });
  const cases: readonly (readonly [string, Task, StagePlan])[] = [
    [
      "metals beside zinc",
      inventedTask({ "Zn2+": 0.008 }, { "Cd2+": 1e-5, "Mn2+": 1e-5, sulfate: 0.01 }),
      inventedPlan(),
    ],
    [
      "aluminium under fluoride",
      inventedTask({ "Zn2+": 0.008 }, { "Al3+": 5e-4, "Ca2+": 1e-3 }),
      inventedPlan({ masking: [fluoride] }),
    ],
    [
      "metals in hard water",
      hard({ "Cu2+": 1e-7, "Zn2+": 1e-6, "Ni2+": 1e-8, "Mn2+": 1e-6, "Fe3+": 1e-6, carbonate: 1e-3 }),
      magnesiumPlan(),
    ],
    [
      "metals in hard water under cyanide",
      hard({ "Zn2+": 1e-5, "Ni2+": 1e-5 }),
      magnesiumPlan({ masking: [cyanide(["Zn2+", "Ni2+"])] }),
    ],
    [
      "phosphate on calcium",
      inventedTask({ "Ca2+": 0.008 }, { phosphate: 1e-4, "Mg2+": 1e-3 }, { requirementPercent: 2 }),
      calciumPlan(),
    ],
    [
      "metals beside nickel, titrated back",
      inventedTask({ "Ni2+": 0.008 }, { "Cd2+": 1e-5, "Mn2+": 1e-5 }),
      backPlan(),
    ],
  ];
  it.each(cases)("holds 1 % below and breaks 1 % above: %s", (_what, task, plan) => {
    const rows = limits(task, plan).filter((row) => row.withMasking && row.endsBy !== "none" && row.limitMolPerL > 0);
    expect(rows.length).toBeGreaterThan(0);
    for (const { component, limitMolPerL, endsBy } of rows) {
      if (endsBy === "precipitation") continue; // flocs are no matter of the titre: see below
      expect(holds(withLevel(task, component, 0.99 * limitMolPerL), plan), `${component} below`).toBe(true);
      expect(holds(withLevel(task, component, 1.01 * limitMolPerL), plan), `${component} above`).toBe(false);
    }
  });
  const end = (task: Task, plan: StagePlan, component: string, withMasking = true) =>
    limits(task, plan).find((row) => row.component === component && row.withMasking === withMasking)!;
  it("ends by the requirement where the component is titrated along", () => {
    expect(end(cases[0]![1], cases[0]![2], "Cd2+").endsBy).toBe("requirement");
  });
  it("ends by blocking at the level read for copper and the dye: 0.10 mg/L in the vessel (NEMI 4725, read)", () => {
    const copper = end(hard({ "Cu2+": 1e-7 }), magnesiumPlan(), "Cu2+");
    expect(copper.endsBy).toBe("blocking");
    expectRelative(copper.limitMolPerL * 0.25, 0.1e-3 / 63.546, 0.1);
  });
  it("ends where the agent is used up: four cyanide a nickel, Ni(CN)4 2-", () => {
    const nickel = end(cases[3]![1], cases[3]![2], "Ni2+");
    expect(nickel.endsBy).toBe("masking-used-up");
    expectRelative(nickel.limitMolPerL, 0.08 / 4 / 0.25, 0.1);
  });
  it("ends where the record of an empirical mask ends, and is told apart from its agent being used up", () => {
    const plan = magnesiumPlan({ masking: [record] });
    const aluminium = end(hard({ "Al3+": 1e-5 }), plan, "Al3+");
    const read = KNOWLEDGE.masking.filter(
      (r) => r.agent === "triethanolamine" && r.ion === "Al3+" && r.upToMolPerL !== null,
    );
    expect(read.length).toBeGreaterThan(0);
    expect(aluminium.endsBy).toBe("empirical-record");
    expectRelative(aluminium.limitMolPerL, Math.min(...read.map((r) => r.upToMolPerL!)) / 0.25, 1e-9);
    const little = magnesiumPlan({ masking: [{ ...record, molPerL: 1e-4 }] });
    expect(end(hard({ "Al3+": 1e-5 }), little, "Al3+")).toMatchObject({
      endsBy: "masking-used-up",
      limitMolPerL: 2e-4,
    });
  });
  it("ends by precipitation where iron(III) lies as flocs of hydroxide", () => {
    const iron = end(hard({ "Fe3+": 1e-6 }), magnesiumPlan(), "Fe3+");
    expect(iron.endsBy).toBe("precipitation");
    expectRelative(iron.limitMolPerL, 0.02 * 0.004, 0.01);
  });
  it("without its mask is that of the component alone, not of what the same agent holds beside it", () => {
    const both = end(cases[3]![1], cases[3]![2], "Zn2+", false);
    const alone = end(hard({ "Zn2+": 1e-6 }), magnesiumPlan(), "Zn2+");
    expect(both.endsBy).toBe("requirement");
    expectRelative(both.limitMolPerL, alone.limitMolPerL, 0.02);
  });
  it("is 0 where the method misses anyway, and the highest level where nothing ends it", () => {
    expect(
      end(inventedTask({ "Zn2+": 0.008 }, { "Cd2+": 1e-5 }, { requirementPercent: 0.01 }), inventedPlan(), "Cd2+"),
    ).toMatchObject({ limitMolPerL: 0, endsBy: "requirement" });
    expect(end(inventedTask({ "Zn2+": 0.008 }, { nitrate: 0.01 }), inventedPlan(), "nitrate")).toMatchObject({
      limitMolPerL: 2,
      endsBy: "none",
    });
  });
  it("can be asked for what the brief does not name", () => {
    const task = inventedTask({ "Zn2+": 0.008 });
    const named = limits(inventedTask({ "Zn2+": 0.008 }, { "Cd2+": 1e-6 }), inventedPlan())[0]!;
    const method = singleMethod(task, developed(task, inventedPlan()), KNOWLEDGE);
    expect(toleranceLimits(task, method, KNOWLEDGE)).toEqual([]);
    const [asked] = toleranceLimits(task, method, KNOWLEDGE, ["Cd2+"]);
    expect(asked).toMatchObject({ component: "Cd2+", presentMolPerL: 0, endsBy: "requirement" });
    expectRelative(asked!.limitMolPerL, named.limitMolPerL, 0.005);
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
