import { describe, expect, it } from "vitest";
import { bareStage, type BareStage } from "../../src/methods/develop.ts";
import { shelfOf } from "../../src/methods/shelf.ts";
import { directSkeletons, USUAL_FIELD } from "../../src/methods/skeletons.ts";
import { stageBudget } from "../../src/methods/uncertainty.ts";
import { expectRelative } from "../expect-relative.ts";
import { inventedTask, KNOWLEDGE } from "./invented.ts";

const withMagnesium = (ion: string): { little: BareStage; bulk: BareStage } => {
  const task = inventedTask({ [ion]: 0.005 });
  const shelf = shelfOf(task, KNOWLEDGE, false);
  const made = directSkeletons({ task, knowledge: KNOWLEDGE, shelf, determines: [ion], field: USUAL_FIELD })
    .filter((s) => s.plan.indicator?.id === "mordant-black-11" && s.plan.chelate?.metal === "Mg2+")
    .map((s) => bareStage(task, s, KNOWLEDGE, shelf));
  return {
    little: made.find((s) => s.plan.mode === "direct")!,
    bulk: made.find((s) => s.plan.mode === "displacement")!,
  };
};

describe("a chelate in bulk", () => {
  it("is a fifth more than the analyte", () => {
    const { little, bulk } = withMagnesium("Ba2+");
    expectRelative(bulk.plan.chelate!.molPerL, 1.2 * 0.00125, 0.02);
    expect(little.plan.chelate!.molPerL).toBeLessThan(0.1 * 0.00125);
  });

  // Schwarzenbach & Flaschka 1969 (recalled): barium has no end point of its own with mordant black 11, and is titrated with Mg-EDTA in excess.
  it("binds barium further where the dye turns than a little of it does, with less to read", () => {
    const { little, bulk } = withMagnesium("Ba2+");
    expect(bulk.bare.titrated.get("Ba2+")!).toBeGreaterThan(0.998);
    expect(bulk.bare.titrated.get("Ba2+")!).toBeGreaterThan(little.bare.titrated.get("Ba2+")!);
    expect(bulk.bare.sharpnessFraction).toBeLessThan(little.bare.sharpnessFraction);
    expect(Math.abs(bulk.bare.biasFraction)).toBeLessThan(1e-3);
  });

  it("costs calcium, which needs only a little of it, its balance of metal and ligand", () => {
    const task = inventedTask({ "Ca2+": 0.005 });
    const { little, bulk } = withMagnesium("Ca2+");
    const balance = (stage: BareStage): number =>
      stageBudget(task, stage.bare, KNOWLEDGE).terms.find((t) => t.source === "balance of the chelate")!.relative;
    // By hand: limits of one thousandth of 1.2 mol a mol, rectangular.
    expectRelative(balance(bulk), (1.2 * 1e-3) / Math.sqrt(3), 0.02);
    expect(balance(little)).toBeLessThan(0.1 * balance(bulk));
    expect(stageBudget(task, bulk.bare, KNOWLEDGE).expanded).toBeGreaterThan(
      stageBudget(task, little.bare, KNOWLEDGE).expanded,
    );
  });
});
