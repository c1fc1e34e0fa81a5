import { describe, expect, it } from "vitest";
import { evaluate } from "../../src/methods/evaluate.ts";
import { bufferStrain, leastBuffer, protonsFreed } from "../../src/methods/protons.ts";
import { expectRelative } from "../expect-relative.ts";
import { backPlan, calciumPlan, inventedPlan, inventedTask, KNOWLEDGE, magnesiumPlan } from "./invented.ts";

describe("protonsFreed", () => {
  it("is two for each zinc where the titrant comes as H2Y2- and the complex is ZnY2-", () => {
    // By hand: 8 mmol/L of zinc, 25 mL in 100 mL, 20 mL of 0.01 mol/L titrant; 2 x 0.2 mmol in 120 mL.
    const evaluation = evaluate(inventedTask({ "Zn2+": 0.008 }), inventedPlan(), KNOWLEDGE);
    expectRelative(protonsFreed(evaluation, KNOWLEDGE), (2 * 0.2) / 120, 0.01);
  });
  it("is less in alkali where hydroxide held the metal, and counts the excess alone in a back titration", () => {
    const calcium = evaluate(inventedTask({ "Ca2+": 0.008 }), calciumPlan(), KNOWLEDGE);
    expect(protonsFreed(calcium, KNOWLEDGE)).toBeLessThan((2 * 0.2) / 120);
    const back = evaluate(inventedTask({ "Al3+": 0.004 }), backPlan(), KNOWLEDGE);
    const direct = evaluate(inventedTask({ "Zn2+": 0.008 }), inventedPlan(), KNOWLEDGE);
    expect(protonsFreed(back, KNOWLEDGE)).toBeGreaterThan(0);
    expect(protonsFreed(back, KNOWLEDGE)).toBeLessThan(protonsFreed(direct, KNOWLEDGE));
  });
});

describe("bufferStrain", () => {
  it("is what the capacity of ammonia by the equation of Van Slyke makes of the protons", () => {
    // Van Slyke, J. Biol. Chem. 1922, 52, 525: 2.303 c a (1 - a) for the pair; pKa of ammonium 9.29 at I = 0.1 mol/L (SRD 46), water left out.
    const task = inventedTask({ "Mg2+": 0.008 });
    const evaluation = evaluate(task, magnesiumPlan({ buffer: { id: "ammonia", molPerL: 0.1 } }), KNOWLEDGE);
    const strain = bufferStrain(evaluation, 25, KNOWLEDGE)!;
    const base = 1 / (1 + 10 ** (9.29 - 10));
    const capacity = 2.303 * (0.1 / 1.2) * base * (1 - base);
    expectRelative(strain.capacityMolPerLPerPH, capacity, 0.05);
    expectRelative(strain.pHDrop, protonsFreed(evaluation, KNOWLEDGE) / capacity, 0.15);
  });
});

describe("leastBuffer", () => {
  it("stays within the usual amounts and grows with the analyte", () => {
    const ammonia = KNOWLEDGE.buffers.get("ammonia")!;
    const at = (molPerL: number): number =>
      leastBuffer(inventedTask({ "Mg2+": molPerL }), magnesiumPlan(), ammonia, KNOWLEDGE);
    const [least, most] = ammonia.usualMolPerL;
    expect([at(1e-5), at(1)]).toEqual([least, most]);
    expect(at(0.012)).toBeGreaterThan(at(0.008));
  });
});
