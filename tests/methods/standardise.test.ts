import { describe, expect, it } from "vitest";
import { evaluateStage } from "../../src/methods/evaluate-stage.ts";
import { standardisedAlike } from "../../src/methods/standardise.ts";
import type { StagePlan } from "../../src/methods/types.ts";
import { calciumPlan, dye, inventedPlan, inventedTask, KNOWLEDGE } from "./invented.ts";

const both = (plan: StagePlan, matrix: Readonly<Record<string, number>> = {}, knowledge = KNOWLEDGE) => {
  const task = inventedTask({ [plan.determines[0]!]: 0.008 }, matrix);
  const plain = evaluateStage(task, plan, knowledge);
  return { plain, alike: standardisedAlike(task, plain, knowledge) };
};

describe("standardisedAlike", () => {
  it("takes away what the observer does wrong in both titrations, and keeps the figure without it", () => {
    const { plain, alike } = both(calciumPlan());
    expect(Math.abs(plain.biasFraction)).toBeGreaterThan(1e-3);
    expect(Math.abs(alike.biasFraction)).toBeLessThan(1e-6);
    expect(alike.uncancelledBiasFraction).toBe(plain.biasFraction);
    expect(alike.ledger.at(-1)?.source).toBe("standardised alike");
  });
  it("leaves what an interferent does: the factor of the titrant is (1 + bias) over (1 + bias alone)", () => {
    const alone = both(inventedPlan()).plain.biasFraction;
    const { plain, alike } = both(inventedPlan(), { "Cd2+": 0.0004 });
    expect(Math.abs(alike.biasFraction - ((1 + plain.biasFraction) / (1 + alone) - 1))).toBeLessThan(1e-7);
    expect(alike.biasFraction).toBeGreaterThan(0.04);
  });
  it("cancels nothing where no primary standard of the metal is on record", () => {
    const { plain, alike } = both(calciumPlan(), {}, { ...KNOWLEDGE, standards: [] });
    expect(alike).toBe(plain);
  });
  it("cancels nothing where the end point is taken from experience", () => {
    const { plain, alike } = both(calciumPlan({ indicator: dye("hydroxynaphthol-blue") }));
    expect(plain.basis).toBe("empirical");
    expect(alike).toBe(plain);
  });
});
