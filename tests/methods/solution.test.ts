import { describe, expect, it } from "vitest";
import { conversionProduct, stageSolution, vesselSample } from "../../src/methods/solution.ts";
import type { MaskingStep } from "../../src/methods/types.ts";
import { expectRelative } from "../expect-relative.ts";
import { inventedPlan, inventedTask, KNOWLEDGE } from "./invented.ts";

const task = inventedTask({ "Zn2+": 0.008 }, { "Fe3+": 0.002, "Al3+": 0.004, sulfate: 0.02 });
const step = (change: Partial<MaskingStep>): MaskingStep => ({
  agent: "fluoride",
  masks: ["Al3+"],
  via: "complexation",
  molPerL: 0.25,
  basis: "equilibrium",
  ...change,
});
const solution = (...masking: MaskingStep[]) => stageSolution(task, inventedPlan({ masking }), KNOWLEDGE);

describe("vesselSample", () => {
  it("dilutes every row by the portion over the titration volume", () => {
    const rows = vesselSample(task);
    expect(rows.map((row) => row.component)).toEqual(["Zn2+", "Fe3+", "Al3+", "sulfate"]);
    rows.forEach((row) => expectRelative(row.inVesselMolPerL, row.molPerL / 4, 1e-12));
  });
});

describe("stageSolution", () => {
  it("holds the sample, the buffer and an agent of the equilibrium", () => {
    const { totals, held, volumeL } = solution(step({}));
    expect(volumeL).toBe(0.1);
    expectRelative(totals.get("Al3+")!, 0.001, 1e-12);
    expect([totals.get("fluoride"), totals.get("hexamine")]).toEqual([0.25, 0.05]);
    expect(held).toEqual([]);
  });
  it("takes out what is separated, and says so", () => {
    const { totals, fromSample, held } = stageSolution(task, inventedPlan({ removed: ["Fe3+"] }), KNOWLEDGE);
    expect([totals.has("Fe3+"), fromSample.has("Fe3+")]).toEqual([false, false]);
    expect(held).toEqual([{ component: "Fe3+", molPerL: 0.0005, why: "separated", by: "separate" }]);
  });
  it("turns iron(III) whole into iron(II) where a reductant converts it, and counts it as sample", () => {
    const reduce = step({
      agent: "ascorbic-acid",
      masks: ["Fe3+"],
      via: "reduction",
      molPerL: 0.015,
      basis: "conversion",
    });
    const { totals, fromSample, converted, held } = solution(reduce);
    expect(totals.has("Fe3+")).toBe(false);
    expectRelative(totals.get("Fe2+")!, 0.0005, 1e-12);
    expectRelative(fromSample.get("Fe2+")!, 0.0005, 1e-12);
    expect(converted).toEqual([{ from: "Fe3+", to: "Fe2+", by: "ascorbic-acid" }]);
    expect(held).toEqual([]);
  });
  it("adds a product of conversion to what the sample already had of it", () => {
    const both = inventedTask({ "Zn2+": 0.008 }, { "Fe3+": 0.002, "Fe2+": 0.004 });
    const reduce = step({ agent: "ascorbic-acid", masks: ["Fe3+"], via: "reduction", basis: "conversion" });
    const { totals } = stageSolution(both, inventedPlan({ masking: [reduce] }), KNOWLEDGE);
    expectRelative(totals.get("Fe2+")!, 0.0015, 1e-12);
  });
  it("holds aside what is masked on record only, and leaves out what a conversion without product takes", () => {
    const { totals, held } = solution(
      step({ basis: "empirical" }),
      step({ agent: "formaldehyde", masks: ["Fe3+"], basis: "conversion" }),
    );
    expect([totals.has("Al3+"), totals.has("Fe3+")]).toEqual([false, false]);
    expect(held).toEqual([
      { component: "Fe3+", molPerL: 0.0005, why: "converted", by: "formaldehyde" },
      { component: "Al3+", molPerL: 0.001, why: "masked-empirically", by: "fluoride" },
    ]);
  });
  it("counts one bottle once, however many steps it serves: the larger of its amounts", () => {
    const { totals } = solution(step({ molPerL: 0.1 }), step({ masks: ["Fe3+"], molPerL: 0.25 }));
    expect(totals.get("fluoride")).toBe(0.25);
    const alsoAuxiliary = stageSolution(
      task,
      inventedPlan({ masking: [step({ molPerL: 0.1 })], auxiliary: [{ id: "fluoride", molPerL: 0.3, purpose: "" }] }),
      KNOWLEDGE,
    );
    expect(alsoAuxiliary.totals.get("fluoride")).toBe(0.3);
  });
  it("adds an agent to the buffer made of the same ligand", () => {
    const { totals } = stageSolution(
      task,
      inventedPlan({
        buffer: { id: "ammonia", molPerL: 0.1 },
        auxiliary: [{ id: "ammonia", molPerL: 0.5, purpose: "" }],
      }),
      KNOWLEDGE,
    );
    expectRelative(totals.get("ammonia")!, 0.6, 1e-12);
  });
  it("brings metal and ligand of a chelate in equal amounts, neither of them as sample", () => {
    const chelate = { metal: "Mg2+", ligand: "EDTA", molPerL: 1e-4 };
    const { totals, fromSample } = stageSolution(task, inventedPlan({ chelate }), KNOWLEDGE);
    expect([totals.get("Mg2+"), totals.get("EDTA")]).toEqual([1e-4, 1e-4]);
    expect([fromSample.has("Mg2+"), fromSample.has("EDTA")]).toEqual([false, false]);
  });
});

describe("conversionProduct", () => {
  it("is what the agent makes of the ion, or null", () => {
    expect(conversionProduct(KNOWLEDGE, "ascorbic-acid", "Fe3+")).toBe("Fe2+");
    expect(conversionProduct(KNOWLEDGE, "ascorbic-acid", "Zn2+")).toBe(null);
    expect(conversionProduct(KNOWLEDGE, "fluoride", "Fe3+")).toBe(null);
  });
});
