import { describe, expect, it } from "vitest";
import { biasCauses, type BiasCause } from "../../src/methods/bias-causes.ts";
import { evaluate } from "../../src/methods/evaluate.ts";
import { evaluateStage } from "../../src/methods/evaluate-stage.ts";
import { bufferStrain } from "../../src/methods/protons.ts";
import type { StagePlan, Task } from "../../src/methods/types.ts";
import { expectRelative } from "../expect-relative.ts";
import { backPlan, calciumPlan, inventedPlan, inventedTask, KNOWLEDGE, magnesiumPlan } from "./invented.ts";

const causesOf = (task: Task, plan: StagePlan): BiasCause[] =>
  biasCauses(task, evaluate(task, plan, KNOWLEDGE), KNOWLEDGE);
const of = (causes: readonly BiasCause[], source: string): BiasCause => {
  const found = causes.find((c) => c.source === source);
  if (!found) throw new Error(`no cause ${source} among ${causes.map((c) => c.source).join(", ")}`);
  return found;
};
/** What a bias before cancellation changes by when something is switched off in the same vessel. */
const switchedOff = (task: Task, plan: StagePlan, without: Task, otherPlan = plan): number =>
  evaluate(task, plan, KNOWLEDGE).uncancelledBiasFraction -
  evaluate(without, otherPlan, KNOWLEDGE).uncancelledBiasFraction;

const fluoride: StagePlan["masking"] = [
  { agent: "fluoride", masks: ["Al3+"], via: "complexation", molPerL: 0.02, basis: "equilibrium" },
];
const zinc = inventedTask({ "Zn2+": 0.008 }, { "Fe3+": 0.00004, "Al3+": 0.001, "Ca2+": 0.001 });
const hard = inventedTask({ "Ca2+": 0.008 }, { carbonate: 0.004 });
const nickel = inventedTask({ "Ni2+": 0.008 });

/** Within 10 % or 0.002 % of the result: what is switched off also moves the ionic strength and, a little, the end point. */
const near = (actual: number, expected: number): void =>
  expect(Math.abs(actual - expected), `${actual} against ${expected}`).toBeLessThan(
    Math.max(0.1 * Math.abs(expected), 2e-5),
  );

describe("biasCauses", () => {
  const cases: readonly (readonly [string, Task, StagePlan])[] = [
    ["zinc beside iron, calcium and masked aluminium", zinc, inventedPlan({ masking: fluoride })],
    ["magnesium", inventedTask({ "Mg2+": 0.004 }), magnesiumPlan()],
    ["calcium beside carbonate", hard, calciumPlan()],
    ["nickel, back with zinc", nickel, backPlan({ excessTitrantMolPerL: 0.0028 })],
    [
      "calcium with Mg-EDTA",
      inventedTask({ "Ca2+": 0.004 }),
      magnesiumPlan({ determines: ["Ca2+"], chelate: { metal: "Mg2+", ligand: "EDTA", molPerL: 1e-4 } }),
    ],
  ];
  it.each(cases)("add up to the bias of %s, with and without what cancels", (_, task, plan) => {
    const evaluation = evaluate(task, plan, KNOWLEDGE);
    const causes = biasCauses(task, evaluation, KNOWLEDGE);
    const sum = (part: (c: BiasCause) => number): number => causes.reduce((s, c) => s + part(c), 0);
    expect(causes.length).toBeGreaterThan(2);
    expect(Math.abs(sum((c) => c.fraction) - evaluation.biasFraction)).toBeLessThan(1e-6);
    expect(Math.abs(sum((c) => c.uncancelledFraction) - evaluation.uncancelledBiasFraction)).toBeLessThan(1e-6);
    expect(new Set(causes.map((c) => c.source)).size).toBe(causes.length);
  });

  it("takes back what the standardisation shares: end point and dye, not an interferent", () => {
    const causes = causesOf(inventedTask({ "Mg2+": 0.004 }, { "Zn2+": 0.00002 }), magnesiumPlan());
    const dye = of(causes, "indicator consumption");
    expect(dye.uncancelledFraction).toBeLessThan(-1e-3);
    expect(Math.abs(dye.fraction)).toBeLessThan(0.02 * Math.abs(dye.uncancelledFraction));
    const interferent = of(causes, "Zn2+");
    expectRelative(interferent.fraction, interferent.uncancelledFraction, 0.01);
    expectRelative(interferent.uncancelledFraction, 0.005, 0.02); // 0.02 mmol/L beside 4 mmol/L, titrated whole
  });

  it("has nothing to take back where no standard of the metal is on record", () => {
    const lanthanum = inventedTask({ "Ga3+": 0.008 });
    const causes = causesOf(
      lanthanum,
      inventedPlan({ determines: ["Ga3+"], pH: 3, buffer: { id: "chloroacetate", molPerL: 0.1 } }),
    );
    for (const cause of causes) expect(cause.fraction).toBe(cause.uncancelledFraction);
  });

  it("names what a mask leaves as its remainder, and an ion without a mask as an interferent", () => {
    const weak = causesOf(zinc, inventedPlan({ masking: fluoride.map((m) => ({ ...m, molPerL: 0.0005 })) }));
    expect(of(weak, "Al3+")).toMatchObject({ kind: "incomplete-masking", by: "fluoride" });
    expect(of(weak, "Fe3+")).toMatchObject({ kind: "interferent", by: null });
  });

  it("is what switching a cause off in the same vessel takes away", () => {
    const without = (task: Task, component: string): Task => ({
      ...task,
      matrix: task.matrix.map((c) => (c.component === component ? { ...c, molPerL: 1e-12 } : c)),
    });
    const masked = inventedPlan({ masking: fluoride });
    const lines = causesOf(zinc, masked);
    for (const ion of ["Fe3+", "Ca2+"])
      near(of(lines, ion).uncancelledFraction, switchedOff(zinc, masked, without(zinc, ion)));
    near(
      of(causesOf(hard, calciumPlan()), "Ca2+ held by carbonate").uncancelledFraction,
      switchedOff(hard, calciumPlan(), without(hard, "carbonate")),
    );
    const magnesium = inventedTask({ "Mg2+": 0.004 });
    const dye = magnesiumPlan().indicator!;
    near(
      of(causesOf(magnesium, magnesiumPlan()), "indicator consumption").uncancelledFraction,
      switchedOff(magnesium, magnesiumPlan(), magnesium, magnesiumPlan({ indicator: { ...dye, molPerL: 1e-9 } })),
    );
  });

  it("counts the metal on the dye: twice the dye holds twice as much", () => {
    const task = inventedTask({ "Mg2+": 0.004 });
    const once = of(causesOf(task, magnesiumPlan()), "indicator consumption").uncancelledFraction;
    const dye = magnesiumPlan().indicator!;
    const twice = causesOf(task, magnesiumPlan({ indicator: { ...dye, molPerL: 2 * dye.molPerL } }));
    expectRelative(of(twice, "indicator consumption").uncancelledFraction, 2 * once, 0.01);
  });

  it("parts the drift of a weak buffer from the end point, and leaves it out where the buffer holds", () => {
    const plan = (molPerL: number): StagePlan => inventedPlan({ buffer: { id: "hexamine", molPerL } });
    const task = inventedTask({ "Zn2+": 0.008 });
    const drift = (molPerL: number): number =>
      Math.abs(causesOf(task, plan(molPerL)).find((c) => c.kind === "buffer-drift")?.uncancelledFraction ?? 0);
    const drop = (molPerL: number): number =>
      bufferStrain(evaluate(task, plan(molPerL), KNOWLEDGE), 25, KNOWLEDGE)!.pHDrop;
    expect(drop(0.02)).toBeGreaterThan(2 * drop(0.2));
    expect(drift(0.02)).toBeGreaterThan(2 * drift(0.2));
    expect(drift(0.02)).toBeGreaterThan(1e-5);
  });

  it("says of a back titration what the back titrant sets free, which is what a complex that does not exchange would keep", () => {
    const cadmium = inventedTask({ "Cd2+": 0.008 });
    const plan = backPlan({ determines: ["Cd2+"], excessTitrantMolPerL: 0.0028 });
    const stolen = of(causesOf(cadmium, plan), "displaced by Zn2+");
    expect(stolen.kind).toBe("back-titrant-displacement");
    expect(stolen.uncancelledFraction).toBeLessThan(-1e-4);
    const labile = evaluateStage(cadmium, plan, KNOWLEDGE);
    const inert = evaluateStage(cadmium, plan, KNOWLEDGE, new Map([["Cd2+", 0.002]]));
    near(stolen.uncancelledFraction, labile.biasFraction - inert.biasFraction);
  });

  it("is empty for a titration without an end point", () =>
    expect(causesOf(inventedTask({ "Zn2+": 0.008 }), inventedPlan({ pH: 4.5, determines: ["Mg2+"] }))).toEqual([]));
});
