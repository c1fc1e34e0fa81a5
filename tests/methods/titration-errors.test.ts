import { describe, expect, it } from "vitest";
import { stageModel } from "../../src/methods/stage-model.ts";
import type { StagePlan } from "../../src/methods/types.ts";
import { inventedPlan, inventedTask, KNOWLEDGE } from "./invented.ts";

/**
 * Titration errors of worked examples (Wuhan University, Analytical Chemistry, type examples; from memory) in the vessel of the program,
 * with its own constants: 0.02 mol/L metal with 0.02 mol/L EDTA, stopped where the unbound metal has the pM' of the dye's change. What
 * the dye itself holds is in none of them. Tolerances are those of the examples.
 */
function errorPercent(metal: string, plan: Partial<StagePlan>, endPointPM: number): number {
  const task = inventedTask({ [metal]: 0.02 }, {}, { portion: { volumeML: 50, titrationVolumeML: 50 } });
  const model = stageModel(
    task,
    inventedPlan({ determines: [metal], titrant: { id: "EDTA", molPerL: 0.02 }, indicator: null, ...plan }),
    KNOWLEDGE,
  );
  let low = 0.045;
  let high = 0.055;
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2;
    if (-Math.log10(model.at(middle).unbound(metal)) < endPointPM) low = middle;
    else high = middle;
  }
  return 100 * (low / 0.05 - 1);
}

const ammonia = (free: number): Partial<StagePlan> => ({
  pH: 10,
  // About 0.8 of the buffer is ammonia at pH 10 (pKa 9.4 at this ionic strength), and the titrant doubles the volume.
  buffer: { id: "ammonia", molPerL: (2 * free) / 0.8 },
});
const hexamine: Partial<StagePlan> = { pH: 5, buffer: { id: "hexamine", molPerL: 0.05 } };

describe("titration errors of worked examples, with the program's own constants", () => {
  it.each([
    ["Ca2+ with mordant black 11 at pCa 3.8", "Ca2+", ammonia(0.1), 3.8, -1.5, 0.1],
    ["Mg2+ with mordant black 11 at pMg 5.4", "Mg2+", ammonia(0.1), 5.4, 0.11, 0.02],
    ["Zn2+ with mordant black 11 in 0.20 mol/L ammonia at pZn' 5.52", "Zn2+", ammonia(0.2), 5.52, -0.02, 0.005],
    ["Zn2+ with mordant black 11 in 0.10 mol/L ammonia at pZn' 7.1", "Zn2+", ammonia(0.1), 7.1, 0.01, 0.005],
    ["Pb2+ with xylenol orange at pPb 7.0", "Pb2+", hexamine, 7.0, 0.002, 0.001],
  ] as const)("%s", (_, metal, plan, pM, expected, tolerance) => {
    const found = errorPercent(metal, plan, pM);
    expect(Math.abs(found - expected), `${found} % against ${expected} %`).toBeLessThanOrEqual(tolerance);
  });
  it("would notice an end point half a unit off", () =>
    expect(Math.abs(errorPercent("Ca2+", ammonia(0.1), 4.3) - -1.5)).toBeGreaterThan(0.5));
});
