import { describe, expect, it } from "vitest";
import { budgetTable, differenceTable, type BudgetTable } from "../../src/methods/budget-table.ts";
import { evaluate } from "../../src/methods/evaluate.ts";
import type { StageEvaluation } from "../../src/methods/evaluate-stage.ts";
import type { StagePlan, Task } from "../../src/methods/types.ts";
import { combineDifference, stageBudget, type Budget } from "../../src/methods/uncertainty.ts";
import { expectRelative } from "../expect-relative.ts";
import { backPlan, calciumPlan, inventedPlan, inventedTask, KNOWLEDGE, magnesiumPlan } from "./invented.ts";

const ofTerm = (table: BudgetTable, term: string): number =>
  Math.sqrt(table.rows.filter((r) => r.term === term).reduce((sum, r) => sum + r.relative ** 2, 0));

/** Both ways to one figure: the sums that the search uses, and the propagation through the result. */
function expectEqual(table: BudgetTable, budget: Budget): void {
  expectRelative(table.combined, budget.combined, 1e-4);
  expect(new Set(table.rows.map((r) => r.term))).toEqual(new Set(budget.terms.map((t) => t.source)));
  for (const { source, relative } of budget.terms) expectRelative(ofTerm(table, source), relative, 1e-3);
}

const laboratory = (buretteML: number): Pick<Task, "laboratory"> => ({
  laboratory: { avoid: [], available: null, detection: ["visual"], heating: true, buretteML },
});

describe("budgetTable", () => {
  const cases: readonly (readonly [string, Task, StagePlan])[] = [
    ["a direct titration", inventedTask({ "Zn2+": 0.008 }), inventedPlan()],
    ["calcium with a calcon dye", inventedTask({ "Ca2+": 0.004 }), calciumPlan()],
    [
      "a weak titrant, its standard diluted",
      inventedTask({ "Zn2+": 0.0008 }),
      inventedPlan({ titrant: { id: "EDTA", molPerL: 0.001 } }),
    ],
    ["two fillings of a small burette", inventedTask({ "Zn2+": 0.008 }, {}, laboratory(10)), inventedPlan()],
    ["a back titration", inventedTask({ "Ni2+": 0.008 }), backPlan({ excessTitrantMolPerL: 0.0028 })],
    [
      "a chelate that lends its metal",
      inventedTask({ "Ca2+": 0.004 }),
      magnesiumPlan({ determines: ["Ca2+"], chelate: { metal: "Mg2+", ligand: "EDTA", molPerL: 1e-4 } }),
    ],
  ];
  it.each(cases)("has for %s the figure that the search uses, term by term", (_, task, plan) => {
    const evaluation = evaluate(task, plan, KNOWLEDGE);
    expect(evaluation.status).toBe("converged");
    expectEqual(budgetTable(task, evaluation, KNOWLEDGE), stageBudget(task, evaluation, KNOWLEDGE));
  });

  it("would notice a term that is left out", () => {
    const task = inventedTask({ "Zn2+": 0.008 });
    const evaluation = evaluate(task, inventedPlan(), KNOWLEDGE);
    const { rows, combined } = budgetTable(task, evaluation, KNOWLEDGE);
    const without = Math.sqrt(rows.slice(1).reduce((sum, r) => sum + r.relative ** 2, 0));
    expect(Math.abs(without / combined - 1)).toBeGreaterThan(0.01);
  });

  it("lays out a difference: what both portions have in common is one quantity", () => {
    const both = inventedTask({ "Zn2+": 0.008, "Cd2+": 0.002 });
    const whole = evaluate(both, inventedPlan({ determines: ["Zn2+", "Cd2+"] }), KNOWLEDGE);
    const part = evaluate(both, inventedPlan({ determines: ["Zn2+"], removed: ["Cd2+"] }), KNOWLEDGE);
    const table = differenceTable(both, whole, part, KNOWLEDGE);
    expectEqual(table, combineDifference(both, whole, part, KNOWLEDGE).budget);
    expectRelative(table.resultMolPerL, 0.002, 1e-6);
    expect(table.rows.filter((r) => r.name.startsWith("pipette of the portion"))).toHaveLength(1);
    expect(table.rows.filter((r) => r.name.startsWith("two readings"))).toHaveLength(2);
  });

  it("counts the titrant's strength twice where the two portions are titrated from two bottles", () => {
    const both = inventedTask({ "Zn2+": 0.008, "Cd2+": 0.002 });
    const whole = evaluate(both, inventedPlan({ determines: ["Zn2+", "Cd2+"] }), KNOWLEDGE);
    const other = { id: "EDTA", molPerL: 0.02 };
    const part = evaluate(both, inventedPlan({ determines: ["Zn2+"], removed: ["Cd2+"], titrant: other }), KNOWLEDGE);
    const table = differenceTable(both, whole, part, KNOWLEDGE);
    expectEqual(table, combineDifference(both, whole, part, KNOWLEDGE).budget);
    expect(table.rows.filter((r) => r.name.startsWith("mass of the standard"))).toHaveLength(2);
  });
});

describe("a complexometric budget worked by hand: magnesium in an invented water, 50 mL, 0.01 mol/L EDTA, mordant black 11, pH 10", () => {
  // The water holds 4 mmol/L Mg, so 50 mL hold 0.2 mmol and take 20.0 mL; the standard is magnesium metal.
  const task = inventedTask({ "Mg2+": 0.004 }, {}, { portion: { volumeML: 50, titrationVolumeML: 100 } });
  const evaluation: StageEvaluation = evaluate(task, magnesiumPlan(), KNOWLEDGE);
  const table = budgetTable(task, evaluation, KNOWLEDGE);
  // Standard uncertainties, % of the result, by pocket calculator:
  const byHand = {
    // 50 mL pipette, 0.05 mL: 0.05 / 2.4495 = 0.02041 mL, of 50 mL
    portion: 0.04082,
    // 25 mL burette, 0.03 mL: 0.01225 mL; read twice to 0.01 mL: 0.01414 mL; together 0.01871 mL of 20.0 mL
    burette: 0.09354,
    // magnesium metal 99.95 % with U = 0.1 %: 0.05 %; 0.13 mg in 0.1944 g (0.008 mol/L, 1 L) is below 0.2 g, so 1.944 g for a tenfold
    // stronger solution: 0.0067 %; flask 1000 mL 0.4 mL: 0.0163 %; dilution 25 mL in 250 mL: 0.0490 and 0.0245 %;
    // its portions 25 mL: 0.0490 %; burette 0.01225 mL in 20 mL: 0.0612 %; three titrations, each 0.01414 mL read, 0.00866 mL a drop,
    // 0.0332 mL the band (0.0576 mL over 1.732), 0.0371 mL together, of which 0.2 % of 20 mL would be accepted: over 1.732, 0.1072 %
    "titrant strength": 0.1531,
    // 3 K x 0.0002 / 1.7321
    temperature: 0.03464,
    // half a drop, 0.015 / 1.7321 = 0.00866 mL, of 20.0 mL
    blank: 0.0433,
  };
  it.each(Object.entries(byHand))("has %s within 1 %%", (term, percent) =>
    expectRelative(100 * ofTerm(table, term), percent, 0.01),
  );
  it("has its end point from the slope: the band in pMg carried to the volume, and a drop", () => {
    const band = Math.abs(evaluation.bandML[1] - evaluation.bandML[0]) / 2;
    expectRelative(ofTerm(table, "end point"), Math.hypot(band, 0.015) / Math.sqrt(3) / evaluation.endPointML, 1e-3);
    const row = table.rows.find((r) => r.unit === "pM")!;
    // d V / d pM = band in mL over band in pM
    expectRelative(row.relativeSensitivity, band / evaluation.bandPM / evaluation.endPointML, 1e-3);
  });
  it("is together within 1 % of the sum by hand", () => {
    const end = 100 * ofTerm(table, "end point");
    const alike = 100 * ofTerm(table, "standardised alike");
    expectRelative(100 * table.combined, Math.hypot(...Object.values(byHand), end, alike), 0.01);
  });
  it("has effective degrees of freedom between those of its bench figures and infinity, by Welch and Satterthwaite", () => {
    const spread = table.rows.reduce((sum, r) => sum + r.relative ** 4 / r.degreesOfFreedom, 0);
    expectRelative(table.effectiveDegreesOfFreedom, table.combined ** 4 / spread, 1e-3);
    expect(table.effectiveDegreesOfFreedom).toBeGreaterThan(8);
    expect(table.effectiveDegreesOfFreedom).toBeLessThan(1e4);
  });
});
