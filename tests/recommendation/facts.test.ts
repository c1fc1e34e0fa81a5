import { describe, expect, it } from "vitest";
import { factFaults } from "../../src/inference/check-facts.ts";
import type { StagePlan } from "../../src/methods/types.ts";
import { componentFacts } from "../../src/recommendation/component-facts.ts";
import { methodFacts } from "../../src/recommendation/method-facts.ts";
import { contrastAt, stageContext, stageFacts } from "../../src/recommendation/stage-facts.ts";
import { expectRelative } from "../expect-relative.ts";
import {
  backPlan,
  calciumPlan,
  dye,
  inventedPlan,
  inventedTask,
  KNOWLEDGE,
  magnesiumPlan,
} from "../methods/invented.ts";
import { developed, underJudgement } from "./developed.ts";

const fluoride = {
  agent: "fluoride",
  masks: ["Al3+"],
  via: "complexation",
  molPerL: 0.25,
  basis: "equilibrium",
} as const;

/** All facts of a titration of an invented sample. */
function factsOf(plan: StagePlan, matrix: Readonly<Record<string, number>> = {}) {
  const task = inventedTask({ [plan.determines[0]!]: 0.008 }, matrix);
  const stage = developed(task, plan);
  const under = underJudgement(task, stage);
  const context = stageContext(task, stage, KNOWLEDGE);
  return {
    stage,
    method: methodFacts(task, under, KNOWLEDGE),
    ofStage: stageFacts(task, stage, under.ranges[0] ?? null, context, KNOWLEDGE),
    components: componentFacts(task, stage, context, KNOWLEDGE),
  };
}

const PLANS: readonly (readonly [string, StagePlan, Readonly<Record<string, number>>])[] = [
  ["a plain direct titration", inventedPlan(), {}],
  ["a masked one", inventedPlan({ masking: [fluoride] }), { "Al3+": 0.001, sulfate: 0.01 }],
  ["a back titration", backPlan(), { "Mg2+": 0.001 }],
  ["one by constants, with solids", calciumPlan(), { "Mg2+": 0.002, carbonate: 0.002 }],
  ["one that rests on experience", calciumPlan({ indicator: dye("hydroxynaphthol-blue") }), {}],
  ["one without an end point", magnesiumPlan({ pH: 7 }), { "Ca2+": 0.001 }],
];

describe("facts", () => {
  it.each(PLANS)("of %s keep the catalogue of the rules, in every scope", (_what, plan, matrix) => {
    const { method, ofStage, components } = factsOf(plan, matrix);
    expect(factFaults("method", method)).toEqual([]);
    expect(factFaults("stage", ofStage)).toEqual([]);
    for (const { facts } of components) expect(factFaults("component", facts)).toEqual([]);
    expect(components.map((c) => c.component)).toEqual([plan.determines[0], ...Object.keys(matrix)]);
  });
  it("leave the numbers out where nothing converged, and say so", () => {
    const { method, ofStage, components } = factsOf(magnesiumPlan({ pH: 7 }), { "Ca2+": 0.001 });
    expect([method["evaluationStatus"], ofStage["solutionStatus"]]).toEqual(["failed", "failed"]);
    for (const name of ["biasPercent", "expandedUncertaintyPercent", "minTitreML"])
      expect(method).not.toHaveProperty(name);
    expect(ofStage).not.toHaveProperty("titreML");
    expect(components[1]!.facts).not.toHaveProperty("biasPercent");
    expect(method["meetsRequirement"]).toBe(false);
  });
  it("are the figures of the evaluation, in per cent", () => {
    const { stage, method, ofStage } = factsOf(inventedPlan(), { "Cd2+": 0.0001 });
    expectRelative(method["biasPercent"] as number, 100 * stage.evaluation.biasFraction, 1e-12);
    expectRelative(ofStage["titreToBuretteRatio"] as number, stage.evaluation.endPointML / 25, 1e-12);
    expectRelative(ofStage["log10ConditionalK"] as number, stage.evaluation.log10ConditionalK.get("Zn2+")!, 1e-12);
  });
  it("say of a masked component by what, how, and how much of it is titrated all the same", () => {
    const masked = factsOf(inventedPlan({ masking: [fluoride] }), { "Al3+": 0.001 }).components[1]!.facts;
    expect([masked["maskedBy"], masked["maskedVia"], masked["maskingBasis"]]).toEqual([
      "fluoride",
      "complexation",
      "equilibrium",
    ]);
    const open = factsOf(inventedPlan(), { "Al3+": 0.001 }).components[1]!.facts;
    expect([open["maskedBy"], open["wouldBlock"]]).toEqual(["none", true]);
    expect(open["kinetics"]).toBe("slow");
  });
  it("see the carbonate that would fall, and not where there is none", () => {
    expect(factsOf(calciumPlan(), { carbonate: 0.002 }).ofStage["carbonateRisk"]).toBe(true);
    expect(factsOf(calciumPlan()).ofStage["carbonateRisk"]).toBe(false);
  });
  it("count hydroxide as no bottle", () => {
    const step = {
      agent: "hydroxide",
      masks: ["Mg2+"],
      via: "precipitation",
      molPerL: 0,
      basis: "equilibrium",
    } as const;
    const count = (plan: StagePlan) => factsOf(plan, { "Mg2+": 0.001 }).method["reagentCount"];
    expect(count(calciumPlan({ masking: [step] }))).toBe(count(calciumPlan()));
    expect(count(inventedPlan({ masking: [fluoride] }))).toBe((count(inventedPlan()) as number) + 1);
  });
});

describe("contrastAt", () => {
  const { colours } = KNOWLEDGE.indicators.get("xylenol-orange")!;
  const stage = developed(inventedTask({ "Zn2+": 0.008 }), inventedPlan());
  const contrast = (recorded: typeof colours, use: "published" | "analogous") => {
    const indicator = { ...KNOWLEDGE.indicators.get("xylenol-orange")!, colours: recorded };
    const evaluation = { ...stage.evaluation, model: { ...stage.evaluation.model, indicator } };
    return contrastAt({ ...stage, evaluation, skeleton: { ...stage.skeleton, use } });
  };
  const record = (pH: readonly [number, number], word: "good" | "poor" | "none") => ({
    ...colours[0]!,
    pH,
    contrast: word,
  });
  it("is the best on record at the pH of the titration, ends included", () => {
    expect(contrast([record([5.5, 6], "poor"), record([6, 9], "good")], "published")).toBe("poor");
    expect(contrast([record([5, 6], "poor"), record([4, 5.5], "good")], "published")).toBe("good");
  });
  it("counts as good in a published use and as poor by analogy where nothing is on record", () => {
    expect([contrast([], "published"), contrast([record([7, 8], "none")], "analogous")]).toEqual(["good", "poor"]);
  });
});
