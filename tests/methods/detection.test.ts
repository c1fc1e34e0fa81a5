import { describe, expect, it } from "vitest";
import { expectRelative } from "../expect-relative.ts";
import { evaluateStage, type StageEvaluation } from "../../src/methods/evaluate-stage.ts";
import { steepestOf } from "../../src/methods/inflection.ts";
import type { StagePlan, Task } from "../../src/methods/types.ts";
import { inventedPlan, inventedTask, KNOWLEDGE, magnesiumPlan } from "./invented.ts";

const withElectrode = (electrode: string, change: Partial<StagePlan>): StagePlan =>
  inventedPlan({ detection: "electrode", indicator: null, electrode, ...change });
const calciumAt = (pH: number, buffer: string): StagePlan =>
  withElectrode("ca-ise", { determines: ["Ca2+"], pH, buffer: { id: buffer, molPerL: 0.02 } });
const copperElectrode = (metal: string, pH: number, buffer: string): StagePlan =>
  withElectrode("cu-edta-cu-ise", {
    determines: [metal],
    pH,
    buffer: { id: buffer, molPerL: 0.05 },
    chelate: { metal: "Cu2+", ligand: "EDTA", molPerL: 5e-5 },
  });
const withPhotometer = (plan: StagePlan): StagePlan => ({
  ...plan,
  detection: "photometric",
  indicator: plan.indicator && { ...plan.indicator, molPerL: plan.indicator.molPerL / 5 },
});
const read = (task: Task, plan: StagePlan): StageEvaluation => evaluateStage(task, plan, KNOWLEDGE);
const jumpOf = (evaluation: StageEvaluation): number => evaluation.electrode?.jumpMV ?? Number.NaN;

/** Free metal by the quadratic of one 1:1 complex, mol/L. */
function freeMetal(metalTotal: number, ligandTotal: number, conditionalK: number): number {
  const b = 1 / conditionalK + ligandTotal - metalTotal;
  return (-b + Math.sqrt(b * b + (4 * metalTotal) / conditionalK)) / 2;
}

/** Step from 99 to 101 % by hand: 1 mmol/L metal in 100 mL, 10 mL of titrant at equivalence. */
function jumpByHand(conditionalK: number, slopeMV: number, limitMolPerL: number): number {
  const metal = 1e-3 / 1.1;
  const at = (part: number): number => freeMetal(metal, part * metal, conditionalK) + limitMolPerL;
  return slopeMV * Math.log10(at(0.99) / at(1.01));
}

describe("steepestOf", () => {
  it("finds the inflection of a known curve", () => {
    const found = steepestOf((v) => 100 * Math.tanh((v - 0.0103) / 1e-5), 0.01);
    expect(found.atEdge).toBe(false);
    expect(Math.abs(found.volumeL - 0.0103)).toBeLessThan(1e-6);
    expect(found.slopePerL).toBeGreaterThan(0);
  });
  it("says of a curve that only flattens that it has none", () => {
    expect(steepestOf((v) => Math.log(v), 0.01).atEdge).toBe(true);
  });
});

describe("a titration read with an electrode", () => {
  // Potassium perchlorate brings the vessel to the 0.1 mol/L of the tables.
  const calcium = inventedTask({ "Ca2+": 0.004 }, { "K+": 0.4, perchlorate: 0.4 });

  // alpha(Y4-) of EDTA 4.80e-4 at pH 7 and 0.35 at pH 10, K(CaY) 5.0e10: Skoog, West, Holler, Crouch, Fundamentals of
  // Analytical Chemistry, tables of EDTA (recalled). Slope 26 mV and limit 1e-7 mol/L are the record's.
  it.each([
    [7, "imidazole", 4.8e-4],
    [10, "ethanolamine", 0.35],
  ])("gives the step of calcium at pH %d that Nernst and a quadratic give", (pH, buffer, alpha) => {
    const evaluation = read(calcium, calciumAt(pH, buffer));
    const byHand = jumpByHand(5.0e10 * alpha, 26, 1e-7);
    expect(Math.abs(jumpOf(evaluation) / byHand - 1)).toBeLessThan(0.2);
    expect(Math.abs(evaluation.biasFraction)).toBeLessThan(1e-3);
  });

  it("shows a smaller step of calcium at pH 7 than at pH 10, and a wider band", () => {
    const [neutral, alkaline] = [
      read(calcium, calciumAt(7, "imidazole")),
      read(calcium, calciumAt(10, "ethanolamine")),
    ];
    expect(jumpOf(neutral)).toBeLessThan(0.6 * jumpOf(alkaline));
    expect(neutral.sharpnessFraction).toBeGreaterThan(5 * alkaline.sharpnessFraction);
  });

  it("fails for want of a step where the titrant hardly binds, and says which", () => {
    const evaluation = read(calcium, calciumAt(5, "hexamine"));
    expect(evaluation.status).toBe("failed");
    expect(["no-inflection", "jump-small"]).toContain(evaluation.why);
    expect(evaluation.electrode).not.toBeNull();
  });

  it("fails below the detection limit", () => {
    expect(read(inventedTask({ "Ca2+": 1e-6 }), calciumAt(10, "ethanolamine")).why).toBe("below-limit");
  });

  it("fails where an interfering ion sets the potential, and not where it is absent", () => {
    const plan = withElectrode("pb-ise", { determines: ["Pb2+"], pH: 5, buffer: { id: "hexamine", molPerL: 0.05 } });
    const clean = read(inventedTask({ "Pb2+": 0.004 }), plan);
    const disturbed = read(inventedTask({ "Pb2+": 0.004 }, { "Cu2+": 0.02 }), plan);
    expect(clean.why).toBeNull();
    expect(disturbed.why).toBe("interferent");
    expect(disturbed.electrode?.interferingIon).toBe("Cu2+");
    expect(disturbed.electrode?.poisonedBy).toContain("Cu2+");
    expect(disturbed.blockedBy).toEqual([]);
  });

  // With Cu-EDTA the electrode follows pM: log K(ZnY) 16.5 less log alpha(H) 6.45 at pH 5 (Ringbom, recalled) leaves 10.05;
  // pZn goes from 5.04 at 99 % to 8.05 at 101 %, 3.0 decades of 28 mV.
  it("follows zinc by a little Cu-EDTA with the step that its pM makes", () => {
    const evaluation = read(inventedTask({ "Zn2+": 0.004 }), copperElectrode("Zn2+", 5, "hexamine"));
    expect(evaluation.basis).toBe("electrode");
    expect(Math.abs(jumpOf(evaluation) - 84)).toBeLessThan(10);
    expect(Math.abs(evaluation.biasFraction)).toBeLessThan(1e-4);
    expect(evaluation.blockedBy).toEqual([]);
  });

  it("follows nickel more sharply than zinc, as its complex is stronger", () => {
    const nickel = read(inventedTask({ "Ni2+": 0.004 }), copperElectrode("Ni2+", 5, "hexamine"));
    const zinc = read(inventedTask({ "Zn2+": 0.004 }), copperElectrode("Zn2+", 5, "hexamine"));
    expect(jumpOf(nickel)).toBeGreaterThan(jumpOf(zinc) + 20);
  });

  it("cannot follow iron(III), which EDTA binds more firmly than copper, by Cu-EDTA", () => {
    expect(read(inventedTask({ "Fe3+": 0.004 }), copperElectrode("Fe3+", 5, "hexamine")).status).toBe("failed");
  });

  it("reads the back titration of nickel with copper", () => {
    const plan = withElectrode("cu-ise", {
      determines: ["Ni2+"],
      mode: "back",
      backTitrant: { id: "Cu2+", molPerL: 0.01 },
      excessTitrantMolPerL: 0.0014,
      pH: 5,
    });
    const evaluation = read(inventedTask({ "Ni2+": 0.004 }), plan);
    expectRelative(evaluation.endPointML, 4, 1e-3); // 0.04 mmol of excess against 0.01 mol/L copper
    expect(jumpOf(evaluation)).toBeGreaterThan(60);
  });
});

describe("a titration read with a photometer", () => {
  it.each([
    ["zinc with xylenol orange", inventedTask({ "Zn2+": 0.004 }), inventedPlan()],
    ["magnesium with mordant black 11", inventedTask({ "Mg2+": 0.004 }), magnesiumPlan()],
  ])("reads %s in a narrower band than the eye, with a fifth of the dye", (_, task, plan) => {
    const eye = read(task, plan);
    const photometer = read(task, withPhotometer(plan));
    expect(photometer.why).toBeNull();
    expect(photometer.sharpnessFraction).toBeLessThan(0.5 * eye.sharpnessFraction);
    expect(photometer.bandPM).toBeLessThan(eye.bandPM);
    expect(photometer.photometric?.wavelengthNm).not.toBeNull();
  });

  it("puts the end where the two branches meet", () => {
    const evaluation = read(inventedTask({ "Zn2+": 0.004 }), withPhotometer(inventedPlan()));
    const { steep, level } = evaluation.photometric ?? expect.unreachable();
    const volumeL = evaluation.endPointML / 1000;
    expect(
      Math.abs(steep.slopePerL * volumeL + steep.intercept - (level.slopePerL * volumeL + level.intercept)),
    ).toBeLessThan(1e-9);
  });

  // Copper by the colour of its EDTA complex at 745 nm breaks at equivalence: Underwood, Anal. Chem. 1953, 25, 1910 (recalled).
  it("needs no dye for copper, whose complex is coloured", () => {
    const plan = inventedPlan({
      determines: ["Cu2+"],
      detection: "photometric",
      indicator: null,
      pH: 3.5,
      buffer: { id: "formate", molPerL: 0.05 },
    });
    const evaluation = read(inventedTask({ "Cu2+": 0.004 }), plan);
    expect(Math.abs(evaluation.biasFraction)).toBeLessThan(1e-3);
    const [low, high] = evaluation.photometric?.wavelengthNm ?? [0, 0];
    expect(low <= 745 && high >= 745).toBe(true);
  });

  it("finds no break where the colour only fades", () => {
    const plan = withPhotometer(inventedPlan({ determines: ["Mg2+"] })); // log K' of only 4 at pH 5.5
    expect(read(inventedTask({ "Mg2+": 0.004 }), plan).why).toBe("no-break");
  });

  it("counts the precipitate that clouds the cell", () => {
    const plan = withPhotometer(
      inventedPlan({
        determines: ["Ca2+"],
        pH: 12.5,
        buffer: { id: "sodium-hydroxide", molPerL: 0.05 },
        indicator: { id: "murexide", molPerL: 1e-4 },
      }),
    );
    const clear = read(inventedTask({ "Ca2+": 0.004 }), plan).photometric?.turbidMolPerL;
    const cloudy = read(inventedTask({ "Ca2+": 0.004 }, { "Mg2+": 0.004 }), plan).photometric?.turbidMolPerL;
    expect(clear).toBe(0);
    expect(cloudy).toBeGreaterThan(5e-4);
  });
});
