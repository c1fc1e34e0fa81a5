import { describe, expect, it } from "vitest";
import { pHDrop, bufferModel } from "../../src/chemistry/buffer.ts";
import { singleMethod, type EvaluatedMethod } from "../../src/methods/methods.ts";
import { weighted } from "../../src/methods/optimise-ph.ts";
import { optimised, type OptimisedMethod } from "../../src/methods/optimise.ts";
import { protonsFreed } from "../../src/methods/protons.ts";
import { searchMethods } from "../../src/methods/search.ts";
import { toleranceLimits } from "../../src/methods/tolerance.ts";
import type { StagePlan, Task } from "../../src/methods/types.ts";
import { expandedWhereHeld, workingRange } from "../../src/methods/working-range.ts";
import { developed } from "../recommendation/developed.ts";
import { calciumPlan, dye, inventedPlan, inventedTask, KNOWLEDGE } from "./invented.ts";

type Window = readonly [number, number];

/** A titration as the search hands it on, with the published window and pH of its dye. */
function planned(task: Task, plan: StagePlan, window: Window, publishedPH = plan.pH): EvaluatedMethod {
  const stage = developed(task, plan);
  const skeleton = { ...stage.skeleton, window, plan: { ...stage.skeleton.plan, pH: publishedPH } };
  return singleMethod(task, { ...stage, skeleton }, KNOWLEDGE);
}

const best = (task: Task, plan: StagePlan, window: Window, publishedPH?: number): OptimisedMethod =>
  optimised(task, planned(task, plan, window, publishedPH), KNOWLEDGE);

const planOf = ({ method }: OptimisedMethod): StagePlan => method.stages[0]!.plan;

const zinc = inventedTask({ "Zn2+": 0.008 });
const XYLENOL_ORANGE: Window = [5, 6.2];
const zincAt = (pH: number): StagePlan => inventedPlan({ pH, buffer: { id: "hexamine", molPerL: 0.1 } });

/** Shelves on which one plain titration stands, and the pH at which common practice does it. */
const PLAIN = [
  // Vogel's Textbook of Quantitative Chemical Analysis, chapter 10 (from memory), and common practice.
  { ion: "Zn2+", shelf: ["EDTA", "hexamine", "xylenol-orange"], practised: [5, 6] },
  { ion: "Pb2+", shelf: ["EDTA", "hexamine", "xylenol-orange"], practised: [5, 6] },
  { ion: "Ca2+", shelf: ["EDTA", "sodium-hydroxide", "calcon"], practised: [12, 13] },
  { ion: "Mg2+", shelf: ["EDTA", "ammonia", "mordant-black-11"], practised: [9.8, 10.5] },
  { ion: "Bi3+", shelf: ["EDTA", "nitric-acid", "xylenol-orange"], practised: [1, 2] },
  { ion: "Cd2+", shelf: ["EDTA", "ammonia", "mordant-black-11"], practised: [9.5, 10.5] },
] as const;

describe("optimised conditions of plain titrations", () => {
  for (const { ion, shelf, practised } of PLAIN) {
    const task = inventedTask({ [ion]: 0.008 }, { "NO3-": 0.02 });
    const equipped = { ...task, laboratory: { ...task.laboratory, available: shelf } };
    const methods = searchMethods(equipped, KNOWLEDGE).methods.filter((m) => m.mode === "direct");
    it(`are no worse than what the search planned, and as wide: ${ion}`, () => {
      expect(methods.length).toBeGreaterThan(0);
      for (const method of methods) {
        const before = workingRange(equipped, method.stages[0]!, KNOWLEDGE);
        const made = optimised(equipped, method, KNOWLEDGE);
        const after = workingRange(equipped, made.method.stages[0]!, KNOWLEDGE);
        const [u, v] = [method, made.method].map((m) => m.results[0]!.budget.expanded) as [number, number];
        const { pH } = method.stages[0]!.plan;
        const clear = Math.min(pH - before.low, before.high - pH) >= 0.3;
        if (clear) expect(v, method.id).toBeLessThanOrEqual(1.013 * u);
        expect(after.high - after.low, method.id).toBeGreaterThanOrEqual(before.high - before.low - 0.101);
      }
    });
    it(`stand where practice has them: ${ion}`, () => {
      for (const method of methods) {
        const { pH } = planOf(optimised(equipped, method, KNOWLEDGE));
        expect(pH).toBeGreaterThanOrEqual(practised[0]);
        expect(pH).toBeLessThanOrEqual(practised[1]);
      }
    });
  }
});

describe("the pH", () => {
  it("is that of a scan of everything a bench would set, where the planned one is at an edge", () => {
    const window: Window = [4.6, 6.4];
    const made = best(zinc, zincAt(4.8), window);
    const stage = planned(zinc, zincAt(4.8), window).stages[0]!;
    const tenths = Array.from({ length: 41 }, (_, i) => Math.round(10 * (3.5 + 0.1 * i)) / 10);
    const holds = (pH: number): boolean => expandedWhereHeld(zinc, stage, pH, KNOWLEDGE) !== null;
    const held = tenths.filter((pH) => tenths.filter((p) => (p - pH) * (p - 4.8) <= 0).every(holds));
    const range = { low: Math.min(...held), high: Math.max(...held) };
    expect(made.ranges[0]).toEqual(range);
    const cost = (pH: number): number =>
      weighted({ pH, expanded: expandedWhereHeld(zinc, stage, pH, KNOWLEDGE)! }, range);
    // Within the window of the dye and what hexamine buffers (4.5 to 6.2).
    const set = held.filter((pH) => pH >= 4.6 && pH <= 6.2 && Number.isInteger(2 * pH));
    const least = Math.min(...set.map(cost));
    expect(cost(4.8)).toBeGreaterThan(1.1 * least);
    expect(cost(planOf(made).pH)).toBe(least);
  });
  it("stays at the published one where another gains less than a tenth, and leaves it where the gain is real", () => {
    expect(planOf(best(zinc, zincAt(6), XYLENOL_ORANGE, 5.5)).pH).toBe(5.5);
    // In dilute solution the end point at pH 5 is soft.
    const dilute = inventedTask({ "Zn2+": 0.002 }, {}, { requirementPercent: 3 });
    const plan = { ...zincAt(5), titrant: { id: "EDTA", molPerL: 0.002 } };
    const made = best(dilute, plan, XYLENOL_ORANGE);
    expect(planOf(made).pH).toBeGreaterThan(5);
    expect(made.choices[0]!.pH!.chosen.expanded).toBeLessThan(0.9 * made.choices[0]!.pH!.start.expanded);
  });
  it("takes no more alkali than it has to: what does at 12.5 is not done at 13.2", () => {
    const task = inventedTask({ "Ca2+": 0.008 });
    for (const id of ["murexide", "calcon"]) {
      const buffer = { id: "sodium-hydroxide", molPerL: 0.25 };
      // No published pH inside the window: the alkali decides.
      const made = best(task, calciumPlan({ pH: 13.2, buffer, indicator: dye(id) }), [12, 13.4], 14);
      expect(planOf(made).pH, id).toBeGreaterThanOrEqual(12);
      expect(planOf(made).pH, id).toBeLessThanOrEqual(12.5);
      expect(planOf(made).buffer.molPerL, id).toBeLessThan(0.1);
    }
  });
  it("is kept where the requirement is missed as planned, and nothing is said of it", () => {
    const strict = inventedTask({ "Zn2+": 0.008 }, {}, { requirementPercent: 0.05 });
    const made = best(strict, zincAt(4.8), XYLENOL_ORANGE);
    expect(planOf(made).pH).toBe(4.8);
    expect(made.choices[0]).toEqual({ pH: null, buffer: null, masks: [] });
  });
});

describe("the buffer", () => {
  it("is the least usual amount with which the pH falls by a tenth or less", () => {
    const made = best(zinc, zincAt(5.5), XYLENOL_ORANGE);
    const { evaluation, plan } = made.method.stages[0]!;
    const hexamine = KNOWLEDGE.buffers.get("hexamine")!;
    const model = bufferModel(KNOWLEDGE, hexamine, { ionicStrengthMolPerL: 0.1, temperatureC: 25 });
    const fall = (molPerL: number): number =>
      pHDrop(model, (molPerL * 100) / (100 + evaluation.endPointML), plan.pH, protonsFreed(evaluation, KNOWLEDGE));
    expect([0.05, 0.1, 0.2]).toContain(plan.buffer.molPerL);
    expect(fall(plan.buffer.molPerL)).toBeLessThanOrEqual(0.1);
    expect(fall(plan.buffer.molPerL / 2)).toBeGreaterThan(0.1);
    // By hand: hexamine, pKa 5.0 here, 83 mmol/L in 120 mL: capacity 2.303 x 83 x 0.24 x 0.76 = 35 mmol/L a unit; 3.3 mmol/L of protons: 0.095.
    expect(fall(0.1)).toBeGreaterThan(0.07);
    expect(fall(0.1)).toBeLessThan(0.12);
  });
  it("is less where less is set free", () => {
    const dilute = inventedTask({ "Zn2+": 0.001 }, {}, { requirementPercent: 3 });
    const made = best(dilute, { ...zincAt(5.5), titrant: { id: "EDTA", molPerL: 0.001 } }, XYLENOL_ORANGE);
    expect(planOf(made).buffer.molPerL).toBe(0.05);
  });
});

const acetylacetone = (molPerL: number): StagePlan["masking"] => [
  { agent: "acetylacetone", masks: ["Al3+"], via: "complexation", molPerL, basis: "equilibrium" },
];
const triethanolamine = (basis: "empirical"): StagePlan["masking"] => [
  { agent: "triethanolamine", masks: ["Fe3+"], via: "complexation", molPerL: 0.2, basis },
];

describe("the amount of a mask", () => {
  it("is a 1-2-5 figure that holds ten times what would matter, by the tolerance limit as well", () => {
    const task = inventedTask({ "Zn2+": 0.008 }, { "Al3+": 0.00005 });
    const made = best(task, { ...zincAt(6), masking: acetylacetone(0.08) }, XYLENOL_ORANGE, 6);
    const [choice] = made.choices[0]!.masks;
    const { molPerL } = planOf(made).masking[0]!;
    expect(molPerL).toBe(0.05);
    expect(choice).toMatchObject({ agent: "acetylacetone", chosenMolPerL: 0.05, startMolPerL: 0.08, ion: "Al3+" });
    expect(choice!.log10Margin).toBeGreaterThanOrEqual(1);
    const [limit] = toleranceLimits(task, made.method, KNOWLEDGE);
    expect(limit === undefined || limit.limitMolPerL > 10 * 0.00005).toBe(true);
  });
  it("is not cut where the margin would go", () => {
    const task = inventedTask({ "Zn2+": 0.008 }, { "Al3+": 0.004 });
    const made = best(task, { ...zincAt(6), masking: acetylacetone(0.08) }, XYLENOL_ORANGE, 6);
    expect(planOf(made).masking[0]!.molPerL).toBe(0.08);
  });
  it("is the least usual one for a trace far below the level on record, the usual one near it", () => {
    const at = (iron: number): number => {
      const task = inventedTask({ "Ca2+": 0.008 }, { "Fe3+": iron });
      return planOf(best(task, calciumPlan({ masking: triethanolamine("empirical") }), [12, 13.2])).masking[0]!.molPerL;
    };
    // On record: up to 0.54 mmol/L in the vessel (ISO 6058, 30 mg/L, from memory); 0.05 to 0.5 mol/L are usual (common practice).
    expect(at(4 * 0.01e-3)).toBe(0.05);
    expect(at(4 * 0.2e-3)).toBe(0.2);
  });
});

describe("titrations that hang on each other", () => {
  it("keep what the search planned", () => {
    const task = inventedTask({ "Bi3+": 0.008, "Pb2+": 0.008 }, { "NO3-": 0.06 });
    const shelf = ["EDTA", "nitric-acid", "hexamine", "xylenol-orange"];
    const equipped = { ...task, laboratory: { ...task.laboratory, available: shelf } };
    const method = searchMethods(equipped, KNOWLEDGE).methods.find((m) => m.mode === "successive")!;
    const made = optimised(equipped, method, KNOWLEDGE);
    expect(made.method).toBe(method);
    expect(made.ranges).toHaveLength(2);
    expect(made.choices.map((c) => c.pH?.why)).toEqual(["another-hangs-on-it", "another-hangs-on-it"]);
  });
  it("of a difference are moved one by one, and the difference is no worse for it", () => {
    const task = inventedTask({ "Ca2+": 0.008, "Mg2+": 0.004 }, { "Cl-": 0.024 });
    const shelf = ["EDTA", "ammonia", "sodium-hydroxide", "mordant-black-11", "murexide"];
    const equipped = { ...task, laboratory: { ...task.laboratory, available: shelf } };
    const method = searchMethods(equipped, KNOWLEDGE).methods.find((m) => m.mode === "difference")!;
    const made = optimised(equipped, method, KNOWLEDGE);
    made.method.results.forEach((r, i) => {
      expect(r.determines).toEqual(method.results[i]!.determines);
      expect(r.budget.expanded).toBeLessThanOrEqual(1.013 * method.results[i]!.budget.expanded);
    });
    const alone = made.method.stages.find((s) => s.plan.indicator?.id === "murexide")!;
    expect(alone.plan.pH).toBeGreaterThanOrEqual(12);
    expect(alone.plan.pH).toBeLessThanOrEqual(12.5);
  });
});
