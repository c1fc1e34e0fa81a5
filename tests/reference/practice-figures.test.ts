import { describe, expect, test } from "vitest";
import { equilibrate } from "../../src/chemistry/equilibrate.ts";
import { prepareSystem } from "../../src/chemistry/prepare-system.ts";
import { lnSpeciesAt } from "../../src/chemistry/speciation.ts";
import type { PreparedSystem } from "../../src/chemistry/types.ts";
import { loadKnowledge } from "../../src/constants/index.ts";

const knowledge = loadKnowledge();
const noSolids = { solids: () => false };

/** Share of a metal that is bound to EDTA among the species at these concentrations (mol/L, row order). */
function shareWithEDTA(system: PreparedSystem, molPerL: ArrayLike<number>, metal: string): number {
  let bound = 0;
  let total = 0;
  system.species.forEach((s, i) => {
    const atoms = Math.max(s.components[metal] ?? 0, 0) * molPerL[i]!;
    total += atoms;
    if ("EDTA" in s.components) bound += atoms;
  });
  return bound / total;
}

describe("figures of practice, computed from the knowledge", () => {
  test("hydrogen cyanide is 52 % at pH 9 and 78 % at 8.5, pH as concentration at 0.1 mol/L; as activity 58 and 82 %", () => {
    const share = (acidity: { readonly pH: number; readonly log10H?: number }) => {
      const state = equilibrate(knowledge, {
        ...acidity,
        totals: { cyanide: 0.01 },
        temperatureC: 25,
        ionicStrength: 0.1,
      });
      const row = state.system.species.findIndex((s) => s.components["cyanide"] === 1 && s.components["H+"] === 1);
      return state.result.speciesMolPerL[row]! / 0.01;
    };
    expect(Math.abs(share({ pH: 9, log10H: -9 }) - 0.52)).toBeLessThan(0.005);
    expect(Math.abs(share({ pH: 8.5, log10H: -8.5 }) - 0.78)).toBeLessThan(0.005);
    expect(Math.abs(share({ pH: 9 }) - 0.58)).toBeLessThan(0.01);
    expect(Math.abs(share({ pH: 8.5 }) - 0.82)).toBeLessThan(0.01);
  });

  test("traces of zinc at the equivalence point of 1 mmol/L calcium at pH 10 are titrated to 100, 77, 3 and 0 % at total cyanide 0.001, 0.003, 0.01 and 0.1", () => {
    const published = [
      [0.001, 100],
      [0.003, 77],
      [0.01, 3],
      [0.1, 0],
    ] as const;
    for (const [cyanide, percent] of published) {
      const state = equilibrate(knowledge, {
        totals: { "Ca2+": 0.001, "Zn2+": 1e-9, EDTA: 0.001, cyanide },
        pH: 10,
        temperatureC: 25,
        ionicStrength: 0.1,
        options: noSolids,
      });
      const share = 100 * shareWithEDTA(state.system, state.result.speciesMolPerL, "Zn2+");
      expect(Math.abs(share - percent), `cyanide ${cyanide}: ${share} %`).toBeLessThan(1.5);
    }
  });

  test("iron(II) beside 2 mmol/L zinc is titrated to 44, 86 and 98 % at the xylenol orange transition of pH 5, 5.5 and 6", () => {
    const table = knowledge.indicators.get("xylenol-orange")!.transitions.find((t) => t.ion === "Zn2+")!.points;
    const system = prepareSystem(
      knowledge,
      ["Zn2+", "Fe2+", "EDTA"],
      { ionicStrengthMolPerL: 0.1, temperatureC: 25 },
      noSolids,
    );
    const log10K = system.species.find(
      (s) => s.components["Zn2+"] === 1 && s.components["EDTA"] === 1 && !("H+" in s.components),
    )!.log10Beta;
    const published = [
      [5, 44],
      [5.5, 86],
      [6, 98],
    ] as const;
    for (const [pH, percent] of published) {
      const pZn = table.find(([at]) => at === pH)![1];
      const log10Free = system.components.map((id) =>
        id === "H+"
          ? -pH - system.log10GammaH
          : id === "Zn2+"
            ? -pZn
            : id === "EDTA"
              ? Math.log10(0.002) + pZn - log10K
              : -9,
      );
      const molPerL = lnSpeciesAt(
        system,
        log10Free.map((v) => v * Math.LN10),
      ).map(Math.exp);
      const share = 100 * shareWithEDTA(system, molPerL, "Fe2+");
      expect(Math.abs(share - percent), `pH ${pH}: ${share} %`).toBeLessThan(1);
    }
  });

  test("iron(II) beside zinc is hardly titrated at pH 2, where zinc itself is not", () => {
    const state = equilibrate(knowledge, {
      totals: { "Zn2+": 0.002, "Fe2+": 0.002, EDTA: 0.002 },
      pH: 2,
      temperatureC: 25,
      ionicStrength: 0.1,
      options: noSolids,
    });
    expect(shareWithEDTA(state.system, state.result.speciesMolPerL, "Fe2+")).toBeLessThan(0.03);
    expect(shareWithEDTA(state.system, state.result.speciesMolPerL, "Zn2+")).toBeLessThan(0.9);
  });
});
