import { describe, expect, it } from "vitest";
import { evaluate } from "../../src/methods/evaluate.ts";
import { combineDifference, stageBudget, type Budget } from "../../src/methods/uncertainty.ts";
import { expectRelative } from "../expect-relative.ts";
import { backPlan, inventedPlan, inventedTask, KNOWLEDGE } from "./invented.ts";

const term = (budget: Budget, source: string): number => budget.terms.find((t) => t.source === source)?.relative ?? 0;

describe("the budget of zinc with xylenol orange, by hand", () => {
  const task = inventedTask({ "Zn2+": 0.008 });
  const evaluation = evaluate(task, inventedPlan(), KNOWLEDGE);
  const budget = stageBudget(task, evaluation, KNOWLEDGE);
  // 25 mL pipette class A, 0.03 mL; 25 mL burette, 0.03 mL; both triangular. Titre 19.993 mL, one filling.
  const portion = 0.03 / Math.sqrt(6) / 25;
  const burette = Math.sqrt((0.03 / Math.sqrt(6)) ** 2 + 2 * 0.01 ** 2) / 19.993; // read twice, 0.01 mL each
  const endPoint = Math.sqrt((0.00848 / 2 / Math.sqrt(3)) ** 2 + (0.015 / Math.sqrt(3)) ** 2) / 19.993; // band 8.5 uL, half a drop
  // Zinc of 99.99 % (U 0.05 %, k = 2), 0.00013 g in 0.523 g for 1000 mL (0.4 mL), 25 mL by pipette (0.03 mL), 20 mL from the burette
  // (0.03 mL), in triplicate: two readings, band and half a drop as in the titration itself.
  const scatter = Math.sqrt((2 * 0.01 ** 2 + (0.00848 / 2) ** 2 / 3 + 0.015 ** 2 / 3) / 3);
  const strength = Math.sqrt(
    (0.0005 / 2 / 0.9999) ** 2 +
      (0.00013 / (0.008 * 65.38)) ** 2 +
      (0.4 / Math.sqrt(6) / 1000) ** 2 +
      (0.03 / Math.sqrt(6) / 25) ** 2 +
      (0.03 / Math.sqrt(6) / 20) ** 2 +
      (scatter / 20) ** 2,
  );
  const temperature = (3 * 2.0e-4) / Math.sqrt(3);
  const blank = 0.015 / Math.sqrt(3) / 19.993;
  // A tenth of what cancels against the standard, which here is the whole of the end-point error.
  const alike = 0.1 * Math.abs(evaluation.uncancelledBiasFraction);
  it.each([
    ["portion", portion],
    ["burette", burette],
    ["end point", endPoint],
    ["titrant strength", strength],
    ["temperature", temperature],
    ["blank", blank],
    ["standardised alike", alike],
  ])("has %s within 1 %%", (source, relative) => expectRelative(term(budget, source), relative, 0.01));
  it("adds them in quadrature, to within 1 % of the sum by hand", () => {
    const combined = Math.sqrt(
      portion ** 2 + burette ** 2 + endPoint ** 2 + strength ** 2 + temperature ** 2 + blank ** 2 + alike ** 2,
    );
    expectRelative(budget.combined, combined, 0.01);
    expect(budget.terms).toHaveLength(7);
  });
  it("names the largest first", () => {
    expect(budget.terms[0]!.source).toBe("titrant strength");
    const sizes = budget.terms.map((t) => t.relative);
    expect(sizes).toEqual([...sizes].sort((a, b) => b - a));
  });
});

describe("stageBudget", () => {
  it("adds an uncorrected bias to the doubled uncertainty, never inside it", () => {
    const matrix = { "Cd2+": 0.0001 };
    const task = inventedTask({ "Zn2+": 0.008 }, matrix);
    const clean = stageBudget(task, evaluate(inventedTask({ "Zn2+": 0.008 }), inventedPlan(), KNOWLEDGE), KNOWLEDGE);
    const evaluation = evaluate(task, inventedPlan(), KNOWLEDGE);
    const budget = stageBudget(task, evaluation, KNOWLEDGE);
    expect(Math.abs(evaluation.biasFraction)).toBeGreaterThan(0.01);
    expectRelative(budget.expanded, 2 * budget.combined + Math.abs(evaluation.biasFraction), 1e-12);
    expectRelative(budget.combined, clean.combined, 0.02); // cadmium is in the bias alone
  });
  it("charges a refill: the burette term grows by the root of the fillings", () => {
    const small = { avoid: [], available: null, detection: ["visual" as const], heating: true, buretteML: 10 };
    const task = inventedTask({ "Zn2+": 0.008 }, {}, { laboratory: small });
    const budget = stageBudget(task, evaluate(task, inventedPlan(), KNOWLEDGE), KNOWLEDGE);
    // 10 mL burette, 0.02 mL; 19.99 mL are two fillings.
    const once = Math.sqrt((0.02 / Math.sqrt(6)) ** 2 + 2 * 0.01 ** 2) / 19.993;
    expectRelative(term(budget, "burette"), Math.SQRT2 * once, 0.01);
  });
  it("weighs the end point of a back titration against the result, and counts excess and back titrant", () => {
    const task = inventedTask({ "Ni2+": 0.008 });
    const evaluation = evaluate(task, backPlan({ excessTitrantMolPerL: 0.0028 }), KNOWLEDGE);
    const budget = stageBudget(task, evaluation, KNOWLEDGE);
    // 0.2 mmol stand for 20 mL of the back titrant; the excess is 1.4 times the result.
    expectRelative(term(budget, "burette"), Math.sqrt((0.03 / Math.sqrt(6)) ** 2 + 2 * 0.01 ** 2) / 20, 0.01);
    // Pipette of 25 mL, 0.03 mL; the back titrant's strength from triplicates: pipette, burette, scatter of the three.
    expectRelative(term(budget, "excess titrant"), (1.4 * 0.03) / Math.sqrt(6) / 25, 1e-6);
    const band = Math.abs(evaluation.bandML[1] - evaluation.bandML[0]) / 2;
    const scatter = Math.sqrt((2 * 0.01 ** 2 + (band ** 2 + 0.015 ** 2) / 3) / 3);
    const ratio = Math.hypot(0.03 / Math.sqrt(6) / 25, 0.03 / Math.sqrt(6) / 20, scatter / 20);
    expectRelative(term(budget, "back titrant strength"), 0.4 * ratio, 1e-6);
  });
  it("has no finite figure for a titration without an end point", () => {
    const task = inventedTask({ "Zn2+": 0.008 });
    const failed = evaluate(task, inventedPlan({ pH: 4.5, determines: ["Mg2+"] }), KNOWLEDGE);
    expect(failed.status).toBe("failed");
    expect(Number.isFinite(stageBudget(task, failed, KNOWLEDGE).expanded)).toBe(false);
  });
});

describe("combineDifference", () => {
  it("is worked relative to the difference: independent terms in quadrature of amounts, common ones once", () => {
    const both = inventedTask({ "Zn2+": 0.008, "Cd2+": 0.002 });
    const sum = evaluate(both, inventedPlan({ determines: ["Zn2+", "Cd2+"] }), KNOWLEDGE);
    const zinc = evaluate(both, inventedPlan({ determines: ["Zn2+"], removed: ["Cd2+"] }), KNOWLEDGE);
    const a = stageBudget(both, sum, KNOWLEDGE);
    const b = stageBudget(both, zinc, KNOWLEDGE);
    const { budget, biasFraction } = combineDifference(both, sum, zinc, KNOWLEDGE);
    // 0.25 mmol less 0.2 mmol: the difference is a fifth of the whole and a quarter of the part.
    for (const source of ["burette", "end point", "blank"])
      expectRelative(term(budget, source), Math.hypot(5 * term(a, source), 4 * term(b, source)), 1e-9);
    for (const source of ["titrant strength", "temperature"])
      expectRelative(term(budget, source), term(a, source), 1e-9);
    expect(Math.abs(biasFraction - (5 * sum.biasFraction - 4 * zinc.biasFraction))).toBeLessThan(1e-12);
    expectRelative(budget.expanded, 2 * budget.combined + Math.abs(biasFraction), 1e-12);
    expect(budget.expanded).toBeGreaterThan(3 * Math.max(a.expanded, b.expanded)); // a small difference of large amounts says so
  });
});
