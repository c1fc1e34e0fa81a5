import { beforeAll, describe, expect, it } from "vitest";
import type { RuleRunner } from "../../src/inference/index.ts";
import type { ToleranceLimit } from "../../src/methods/tolerance.ts";
import type { StagePlan, Task } from "../../src/methods/types.ts";
import { methodSchema, type RecommendedMethod } from "../../src/recommendation/contract.ts";
import { constantsUsed } from "../../src/recommendation/constants-used.ts";
import { colourChangeOf, methodDocument } from "../../src/recommendation/document.ts";
import { judge } from "../../src/recommendation/judge.ts";
import { expectRelative } from "../expect-relative.ts";
import { backPlan, inventedPlan, magnesiumPlan, inventedTask, KNOWLEDGE } from "../methods/invented.ts";
import { developed, underJudgement } from "./developed.ts";

const silent: RuleRunner = {
  run: () => Promise.resolve([]),
  runAll: (questions) => Promise.resolve(questions.map(() => [])),
  nearMisses: () => [],
};
const fluoride = {
  agent: "fluoride",
  masks: ["Al3+"],
  via: "complexation",
  molPerL: 0.25,
  basis: "equilibrium",
} as const;

async function written(task: Task, plan: StagePlan, tolerance: readonly ToleranceLimit[] = []) {
  const stage = developed(task, plan);
  const judged = await judge(task, underJudgement(task, stage), KNOWLEDGE, silent);
  return { stage, judged, document: methodDocument(task, judged, 1, tolerance, KNOWLEDGE) };
}

describe("methodDocument", () => {
  const task = inventedTask({ "Zn2+": 0.008 }, { "Al3+": 0.001, "Cd2+": 0.00002, "Mn2+": 0.0001 });
  const limit = {
    component: "Cd2+",
    limitMolPerL: 0.0000512345,
    presentMolPerL: 0.00002,
    withMasking: true,
    endsBy: "requirement",
  } as const;
  const plan = inventedPlan({ masking: [fluoride], removed: ["Mn2+"], preparation: ["separate"] });
  let written1: Awaited<ReturnType<typeof written>>;
  let document: RecommendedMethod;
  beforeAll(async () => {
    written1 = await written(task, plan, [limit]);
    document = written1.document;
  });

  it("keeps the contract", () => {
    const parsed = methodSchema.safeParse(JSON.parse(JSON.stringify(document)));
    expect(parsed.success ? [] : parsed.error.issues).toEqual([]);
  });
  it("says what the calculation says: bias, uncertainty, titre, to four figures", () => {
    const { evaluation } = written1.stage;
    expectRelative(document.predicted.biasPercent, 100 * evaluation.biasFraction, 1e-3);
    expectRelative(document.predicted.titreML, evaluation.endPointML, 1e-4);
    expectRelative(document.predicted.relativeExpandedUncertaintyPercent, written1.judged.expandedPercent, 1e-3);
  });
  it("gives sources of bias that add up to the bias, and a budget whose quadrature is the uncertainty without it", () => {
    const sum = document.predicted.biasBySource.reduce((s, row) => s + row.percent, 0);
    expect(Math.abs(sum - document.predicted.biasPercent)).toBeLessThan(2e-3);
    const combined = Math.hypot(...document.uncertaintyBudget.map((row) => row.percent));
    const { relativeExpandedUncertaintyPercent, biasPercent } = document.predicted;
    expectRelative(2 * combined + Math.abs(biasPercent), relativeExpandedUncertaintyPercent, 5e-3);
  });
  it("shows each cause before and after the standardisation, and what a mask leaves with its agent", async () => {
    const weak = { ...fluoride, molPerL: 0.003 };
    const { document: masked } = await written(task, inventedPlan({ masking: [weak] }));
    const { biasBySource, biasUncancelledPercent } = masked.predicted;
    const before = biasBySource.reduce((sum, cause) => sum + cause.uncancelledPercent, 0);
    expect(Math.abs(before - biasUncancelledPercent)).toBeLessThan(2e-3);
    expect(biasBySource.find((c) => c.source === "Al3+")).toMatchObject({ kind: "incomplete-masking", by: "fluoride" });
    expect(biasBySource.find((c) => c.source === "Cd2+")).toMatchObject({ kind: "interferent", by: null });
    expect(biasBySource.some((c) => c.source === "standardised alike")).toBe(false);
  });
  it("says what of bias and uncertainty it leaves out: carbonate of the air at pH 10, where the brief has none", async () => {
    const left = async (matrix: Readonly<Record<string, number>>): Promise<string> => {
      const hard = inventedTask({ "Mg2+": 0.004 }, matrix);
      return (await written(hard, magnesiumPlan())).document.budget.notCounted.join();
    };
    expect(await left({})).toContain("Carbonate from the air");
    expect(await left({ carbonate: 0.001 })).not.toContain("Carbonate from the air");
    expect(await left({})).toContain("uncertainty of the constants");
  });
  it("says of every metal beside the analyte how it is kept out", () => {
    const by = Object.fromEntries(document.stages[0]!.interferents.map((row) => [row.component, row.maskedBy]));
    expect(by).toEqual({ "Al3+": "fluoride", "Cd2+": null, "Mn2+": "separate" });
    expect(document.stages[0]!.vessel.removed).toEqual(["Mn2+"]);
  });
  it("carries the cautions of what it uses and the limits it was given", () => {
    expect(document.cautions.join("\n")).toMatch(/hydrofluoric/);
    expect(document.tolerance).toEqual([{ ...limit, limitMolPerL: 0.00005123 }]);
  });
  it("writes ions as the brief wrote them", async () => {
    const spelt: Task = { ...task, matrix: [], analytes: task.analytes.map((row) => ({ ...row, shown: "zinc(II)" })) };
    const other = (await written(spelt, inventedPlan())).document;
    expect([other.stages[0]!.determines, other.predicted.perAnalyte[0]!.determines]).toEqual([
      ["zinc(II)"],
      ["zinc(II)"],
    ]);
    expect(other.summary).toContain("zinc(II)");
  });
  it("is not fit where the requirement is missed, fit where it is met without reservation", async () => {
    expect(document.verdict).toBe("fit");
    const strict = await written({ ...task, requirementPercent: 0.01 }, plan);
    expect([strict.document.verdict, strict.document.meetsRequirement]).toEqual(["not-fit", false]);
  });
  it("writes the excess of a back titration and the back titrant of the method once", async () => {
    const back = (await written(inventedTask({ "Ni2+": 0.008 }), backPlan())).document;
    expect(back.backTitrant).toEqual({ id: "Zn2+", molPerL: 0.01 });
    expect(back.stages[0]!.backTitrant).toBe(null);
    expect(back.stages[0]!.vessel.excessTitrantMolPerL).toBe(0.0028);
    expect(back.stages[0]!.added).toEqual([{ id: "EDTA", molPerL: 0.0028, purpose: "titrant in excess" }]);
  });
});

describe("colourChangeOf", () => {
  it("runs from the metal's colour to the dye's own in a direct titration, the other way round in a back titration", () => {
    const direct = colourChangeOf(developed(inventedTask({ "Zn2+": 0.008 }), inventedPlan()));
    const back = colourChangeOf(developed(inventedTask({ "Ni2+": 0.008 }), backPlan()));
    expect(direct[0]).not.toBe(direct[1]);
    expect(back).toEqual([direct[1], direct[0]]);
  });
});

describe("constantsUsed", () => {
  const used = constantsUsed([developed(inventedTask({ "Zn2+": 0.008 }), inventedPlan())], KNOWLEDGE);
  it("follows what takes part down to its records", () => {
    const zinc = used.find((c) => c.species === "Zn(EDTA) 2-");
    expect(zinc?.evidence.length).toBeGreaterThan(0);
    for (const { evidence } of used)
      for (const use of evidence) expect(KNOWLEDGE.sources.has(use.source), use.source).toBe(true);
  });
  it("leaves out what is there in traces only", () => {
    const named = used.map((c) => c.species);
    expect(named).not.toContain("Zn(OH)4 2-");
    expect(new Set(named).size).toBe(named.length);
  });
});
