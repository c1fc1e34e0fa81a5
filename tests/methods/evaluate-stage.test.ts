import { describe, expect, it } from "vitest";
import { evaluate } from "../../src/methods/evaluate.ts";
import { evaluateStage, type StageEvaluation } from "../../src/methods/evaluate-stage.ts";
import type { StagePlan } from "../../src/methods/types.ts";
import { expectRelative } from "../expect-relative.ts";
import { backPlan, calciumPlan, dye, inventedPlan, inventedTask, KNOWLEDGE, magnesiumPlan } from "./invented.ts";

const fluoride = {
  agent: "fluoride",
  masks: ["Al3+"],
  via: "complexation",
  molPerL: 0.25,
  basis: "equilibrium",
} as const;

/** Invented titrations of every kind, each with something in it that its account must not lose. */
const PLANS: readonly (readonly [what: string, matrix: Readonly<Record<string, number>>, plan: StagePlan])[] = [
  ["direct, alone", {}, inventedPlan()],
  ["direct, beside what is titrated in part", { "Mn2+": 0.002, "Cd2+": 0.0005 }, inventedPlan()],
  ["direct, with a mask of the equilibrium", { "Al3+": 0.002 }, inventedPlan({ masking: [fluoride] })],
  ["direct, one component taken out", { "Cd2+": 0.002 }, inventedPlan({ removed: ["Cd2+"] })],
  [
    "direct, iron reduced",
    { "Fe3+": 0.0005 },
    inventedPlan({
      masking: [{ agent: "ascorbic-acid", masks: ["Fe3+"], via: "reduction", molPerL: 0.015, basis: "conversion" }],
    }),
  ],
  ["direct, by constants of the dye", { "Mg2+": 0.001 }, calciumPlan()],
  [
    "direct, magnesium chelate added",
    { "Mg2+": 0.0002 },
    magnesiumPlan({ determines: ["Ca2+"], chelate: { metal: "Mg2+", ligand: "EDTA", molPerL: 1e-4 } }),
  ],
  ["back, alone", {}, backPlan()],
  [
    "back, beside the metal of the back titrant and another",
    { "Zn2+": 0.001, "Cd2+": 0.0005 },
    backPlan({ excessTitrantMolPerL: 0.0035 }),
  ],
  [
    "the second in one vessel",
    { "Bi3+": 0.008 },
    inventedPlan({ carried: { metals: ["Bi3+"], titrantMolPerL: 0.0002 / 0.12, addedML: 20 }, pH: 5.5 }),
  ],
];

const taskOf = (plan: StagePlan, matrix: Readonly<Record<string, number>>) =>
  inventedTask({ [plan.determines[0]!]: 0.008 }, matrix);

const ledgerSum = (evaluation: StageEvaluation) => evaluation.ledger.reduce((sum, line) => sum + line.fraction, 0);

describe.each(PLANS)("a titration %s", (_what, matrix, plan) => {
  const task = taskOf(plan, matrix);
  const alone = evaluateStage(task, plan, KNOWLEDGE);
  const standardised = evaluate(task, plan, KNOWLEDGE);

  it("comes to an end point", () => expect([alone.status, alone.why]).toEqual(["converged", null]));
  it("accounts for its whole bias, line by line, standardised alike or not", () => {
    expect(Math.abs(ledgerSum(alone) - alone.biasFraction)).toBeLessThan(1e-6);
    expect(Math.abs(ledgerSum(standardised) - standardised.biasFraction)).toBeLessThan(1e-6);
  });
  it("finds what went in: c x V, or the excess less c x V of the back titrant", () => {
    const volumeL = alone.endPointML / 1000;
    const found = plan.backTitrant
      ? plan.excessTitrantMolPerL * 0.1 - plan.backTitrant.molPerL * volumeL
      : plan.titrant.molPerL * volumeL;
    expectRelative(alone.foundMol, found, 1e-12);
    expectRelative(alone.presentMol, 0.008 * 0.025, 1e-12);
    expect(Math.abs(alone.biasFraction - (alone.foundMol / alone.presentMol - 1))).toBeLessThan(1e-12);
  });
  it("keeps the end point inside the observer's band", () => {
    const [low, high] = alone.bandML;
    expect(low).toBeLessThanOrEqual(alone.endPointML);
    expect(high).toBeGreaterThanOrEqual(alone.endPointML);
    expect(high - low).toBeGreaterThan(0);
    expectRelative(
      alone.sharpnessFraction,
      (high - low) / 2 / (plan.backTitrant ? (1000 * alone.presentMol) / plan.titrant.molPerL : alone.endPointML),
      1e-9,
    );
  });
  it("balances every metal and the titrant at the start and at the end point", () => {
    for (const volumeL of [0, alone.endPointML / 1000]) {
      const state = alone.model.at(volumeL);
      expect(state.residual).toBeLessThan(1e-9);
      let bound = 0;
      for (const metal of alone.model.metals) {
        bound += state.boundToTitrant(metal);
        // Solids hold the rest where they stand in equilibrium.
        const solid = alone.model.system.solids.reduce(
          (sum, s, i) => sum + (s.components[metal] ?? 0) * (state.result.solidsMolPerL[i] ?? 0),
          0,
        );
        const total = state.total(metal);
        expect(Math.abs(state.boundToTitrant(metal) + state.unbound(metal) + solid - total), metal).toBeLessThan(
          1e-6 * total + 1e-18,
        );
      }
      expect(Math.abs(bound + state.titrantUnbound - state.titrantTotal)).toBeLessThan(
        1e-6 * state.titrantTotal + 1e-15,
      );
    }
  });
});

describe("evaluateStage", () => {
  it("titrates half of what is bound half: each metal's bias is its share times its amount over the analyte's", () => {
    const matrix = { "Mn2+": 0.002, "Cd2+": 0.0005 };
    const evaluation = evaluateStage(taskOf(inventedPlan(), matrix), inventedPlan(), KNOWLEDGE);
    for (const [ion, molPerL] of Object.entries(matrix))
      expectRelative(evaluation.biasOf.get(ion)!, (evaluation.titrated.get(ion)! * molPerL) / 0.008, 1e-9);
    expect(evaluation.titrated.get("Cd2+")!).toBeGreaterThan(0.99);
    expect(evaluation.titrated.get("Mn2+")!).toBeLessThan(evaluation.titrated.get("Cd2+")!);
  });
  it("counts a metal in full that binds as strongly as the analyte", () => {
    const evaluation = evaluateStage(taskOf(inventedPlan(), { "Cd2+": 0.0008 }), inventedPlan(), KNOWLEDGE);
    expectRelative(evaluation.biasOf.get("Cd2+")!, 0.1, 0.01);
  });
  it("has no end point where the metal does not colour the dye, and has one where it does", () => {
    const at = (pH: number, buffer: string) => {
      const plan = magnesiumPlan({ pH, buffer: { id: buffer, molPerL: 0.05 } });
      const { status, why } = evaluateStage(inventedTask({ "Mg2+": 0.008 }), plan, KNOWLEDGE);
      return [status, why];
    };
    expect(at(7, "imidazole")).toEqual(["failed", "no-colour"]);
    expect(at(10, "ammonia")).toEqual(["converged", null]);
  });
  it("has a wide band and equivalence as its end where the dye has neither constants nor table", () => {
    const plan = calciumPlan({ indicator: dye("hydroxynaphthol-blue") });
    const evaluation = evaluateStage(inventedTask({ "Ca2+": 0.008 }), plan, KNOWLEDGE);
    expect(evaluation.basis).toBe("empirical");
    expect(evaluation.bandPM).toBeGreaterThan(KNOWLEDGE.indicators.get("hydroxynaphthol-blue")!.observerBandPM);
    expectRelative(evaluation.endPointML, evaluation.equivalenceML, 1e-4);
  });
  it("does not depend on the order in which the matrix is written", () => {
    const matrix = { "Mn2+": 0.002, "Cd2+": 0.0005, sulfate: 0.01 };
    const reversed = Object.fromEntries(Object.entries(matrix).reverse());
    const [a, b] = [matrix, reversed].map((m) => evaluateStage(taskOf(inventedPlan(), m), inventedPlan(), KNOWLEDGE));
    expectRelative(a!.endPointML, b!.endPointML, 1e-6);
    expect(Math.abs(a!.biasFraction - b!.biasFraction)).toBeLessThan(1e-6);
  });
  it("needs twice the titre for twice the portion in twice the vessel", () => {
    const double = { portion: { volumeML: 50, titrationVolumeML: 200 } };
    const one = evaluateStage(inventedTask({ "Zn2+": 0.008 }), inventedPlan(), KNOWLEDGE);
    const two = evaluateStage(inventedTask({ "Zn2+": 0.008 }, {}, double), inventedPlan(), KNOWLEDGE);
    expectRelative(two.endPointML, 2 * one.endPointML, 1e-5);
  });
});
