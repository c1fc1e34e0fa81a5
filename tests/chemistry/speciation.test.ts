import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { prepareSystem } from "../../src/chemistry/prepare-system.ts";
import { conditionalConstant, fractionsOf, log10SideReaction } from "../../src/chemistry/speciation.ts";
import { expectRelative } from "../expect-relative.ts";
import { zincKnowledge } from "./small-knowledge.ts";

const knowledge = zincKnowledge();
const conditions = { ionicStrengthMolPerL: 0.1, temperatureC: 25 };
const betas = { EDTA: [0, 10.2, 16.3, 19, 21], ammonia: [0, 2.3, 4.6, 7, 9.1], hydroxide: [0, -9, -17] };

describe("speciation", () => {
  test("alpha from the species list equals the direct sum for any pH and free ammonia", () => {
    const system = prepareSystem(knowledge, ["Zn2+", "EDTA", "ammonia"], conditions);
    fc.assert(
      fc.property(
        fc.double({ min: 0, max: 14, noNaN: true }),
        fc.double({ min: -6, max: 0, noNaN: true }),
        (pH, log10Free) => {
          const log10H = -pH - system.log10GammaH;
          const lnFree = Float64Array.from([log10H, -35, -35, log10Free], (v) => v * Math.LN10);
          const zinc =
            betas.ammonia.reduce((sum, b, n) => sum + 10 ** (b + n * log10Free), 0) +
            betas.hydroxide.slice(1).reduce((sum, b, n) => sum + 10 ** (b - (n + 1) * log10H), 0);
          const edta = betas.EDTA.reduce((sum, b, n) => sum + 10 ** (b + n * log10H), 0);
          expectRelative(10 ** log10SideReaction(system, lnFree, "Zn2+", ["EDTA"]), zinc, 1e-10);
          expectRelative(10 ** log10SideReaction(system, lnFree, "EDTA", ["Zn2+"]), edta, 1e-10);
        },
      ),
      { seed: 1, numRuns: 200 },
    );
  });

  test("the conditional constant is log K less both alphas plus that of the complex", () => {
    const found = conditionalConstant(knowledge, {
      metal: "Zn2+",
      ligand: "EDTA",
      pH: 10,
      free: { ammonia: 0.1 },
      conditions,
    })!;
    expectRelative(found.log10K, 16.5, 1e-12);
    expectRelative(
      found.log10ConditionalK,
      found.log10K - found.log10AlphaMetal - found.log10AlphaLigand + found.log10AlphaComplex,
      1e-12,
    );
    expectRelative(found.log10AlphaMetal, Math.log10(betas.ammonia.reduce((s, b, n) => s + 10 ** (b - n), 0)), 1e-3);
  });

  test("another metal free in the solution lowers the constant through the ligand", () => {
    const ask = (free: Record<string, number>) =>
      conditionalConstant(knowledge, { metal: "Ca2+", ligand: "EDTA", pH: 10, free, conditions })!;
    expect(ask({ "Zn2+": 1e-10 }).log10AlphaLigand - ask({}).log10AlphaLigand).toBeGreaterThan(5);
  });

  test("there is no constant for a pair without a complex", () => {
    expect(conditionalConstant(knowledge, { metal: "Ca2+", ligand: "ammonia", pH: 10, conditions })).toBe(null);
  });

  test("fractions of a component add up to one, largest first", () => {
    const system = prepareSystem(knowledge, ["Zn2+", "EDTA", "ammonia"], conditions);
    const lnFree = Float64Array.from([-9.9, -6, -5, -1], (v) => v * Math.LN10);
    const shares = fractionsOf(system, lnFree, "Zn2+");
    expectRelative(
      shares.reduce((sum, s) => sum + s.fraction, 0),
      1,
      1e-12,
    );
    expect(shares.map((s) => s.fraction)).toEqual(shares.map((s) => s.fraction).sort((a, b) => b - a));
  });
});
