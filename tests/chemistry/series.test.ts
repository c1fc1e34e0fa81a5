import { describe, expect, test } from "vitest";
import { prepareSystem } from "../../src/chemistry/prepare-system.ts";
import { conditionalConstantSeries, distributionSeries, evenly } from "../../src/chemistry/series.ts";
import { conditionalConstant } from "../../src/chemistry/speciation.ts";
import { expectRelative } from "../expect-relative.ts";
import { zincKnowledge } from "./small-knowledge.ts";

const knowledge = zincKnowledge();
const conditions = { ionicStrengthMolPerL: 0.1, temperatureC: 25 };

describe("series for figures", () => {
  test("evenly includes both ends", () => {
    expect(evenly(2, 4, 5)).toEqual([2, 2.5, 3, 3.5, 4]);
  });

  test("log K' against pH is the conditional constant at each pH, with nothing for a metal without a complex", () => {
    const pHs = evenly(2, 12, 11);
    const free = (pH: number): Record<string, number> => (pH > 8 ? { ammonia: 0.1 } : {});
    const [zinc, calcium] = conditionalConstantSeries(knowledge, ["Zn2+", "Ca2+"], "EDTA", pHs, conditions, free);
    pHs.forEach((pH, i) => {
      const direct = conditionalConstant(knowledge, { metal: "Zn2+", ligand: "EDTA", pH, free: free(pH), conditions })!;
      expectRelative(zinc!.y[i]!, direct.log10ConditionalK, 1e-12);
    });
    expect(zinc!.y[8]).toBeGreaterThan(calcium!.y[8]!);
    const none = conditionalConstantSeries(knowledge, ["Ca2+"], "ammonia", [10], conditions, () => ({}));
    expect(none[0]!.y).toEqual([null]);
  });

  test("a distribution adds up to one at every pH and crosses at the pK", () => {
    const system = prepareSystem(knowledge, ["ammonia"], conditions);
    const pHs = evenly(5, 13, 33);
    const lines = distributionSeries(system, "ammonia", {}, pHs);
    expect(lines).toHaveLength(2);
    pHs.forEach((_, i) => {
      expectRelative(
        lines.reduce((sum, line) => sum + line.y[i]!, 0),
        1,
        1e-12,
      );
    });
    const atPK = distributionSeries(system, "ammonia", {}, [9.3 - system.log10GammaH]);
    expectRelative(atPK[0]!.y[0]!, 0.5, 1e-9);
  });
});
