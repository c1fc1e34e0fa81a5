import { describe, expect, test } from "vitest";
import { equilibrate } from "../../src/chemistry/equilibrate.ts";
import { expectRelative } from "../expect-relative.ts";
import { zincKnowledge } from "./small-knowledge.ts";

const knowledge = zincKnowledge();
const base = { pH: 10, temperatureC: 25, ionicStrength: "auto" } as const;

describe("equilibrate", () => {
  test("balances close to 1e-12 and the ionic strength is that of the composition with its counter-ions", () => {
    const state = equilibrate(knowledge, {
      ...base,
      totals: { "Zn2+": 0.01, EDTA: 0.012, ammonia: 0.2 },
      inert: { "Na+": 0.05, "NO3-": 0.05 },
    });
    expect(state.status).toBe("converged");
    expect(state.result.residual).toBeLessThanOrEqual(1e-12);
    const { system, result } = state;
    let sum = 0.1 + state.counterAnionMolPerL + state.counterCationMolPerL;
    let charge = state.counterCationMolPerL - state.counterAnionMolPerL;
    system.species.forEach((s, i) => {
      sum += s.charge ** 2 * result.speciesMolPerL[i]!;
      charge += s.charge * result.speciesMolPerL[i]!;
    });
    expect(Math.abs(charge)).toBeLessThan(1e-15);
    expectRelative(state.ionicStrengthMolPerL, sum / 2, 2e-4);
  });

  test("salt raises the ionic strength by its own amount and lowers the conditional constant", () => {
    const poor = equilibrate(knowledge, { ...base, totals: { "Ca2+": 0.001, EDTA: 0.001 } });
    const rich = equilibrate(knowledge, {
      ...base,
      totals: { "Ca2+": 0.001, EDTA: 0.001 },
      inert: { "K+": 0.1, "Cl-": 0.1 },
    });
    expect(rich.ionicStrengthMolPerL - poor.ionicStrengthMolPerL).toBeGreaterThan(0.099);
    expect(rich.freeMolPerL("Ca2+")).toBeGreaterThan(poor.freeMolPerL("Ca2+"));
  });

  test("the charge of an inert ion is read from its spelling, and a name without one is refused", () => {
    const withSulfate = equilibrate(knowledge, {
      ...base,
      totals: { "Ca2+": 1e-6 },
      inert: { "SO4^2-": 0.01, "Na+": 0.02 },
    });
    expectRelative(withSulfate.ionicStrengthMolPerL, 0.03, 0.01);
    expect(() => equilibrate(knowledge, { ...base, totals: {}, inert: { salt: 0.1 } })).toThrow(/salt/);
  });

  test("pH is an activity and log10H a concentration", () => {
    const byPH = equilibrate(knowledge, { ...base, totals: { ammonia: 0.1 }, ionicStrength: 0.1 });
    const byH = equilibrate(knowledge, { ...base, log10H: -10, totals: { ammonia: 0.1 }, ionicStrength: 0.1 });
    expectRelative(byPH.freeMolPerL("H+"), 10 ** (-10 - byPH.system.log10GammaH), 1e-12);
    expectRelative(byH.freeMolPerL("H+"), 1e-10, 1e-12);
  });

  test("a fast solid forms until it is saturated, and only its saturation is told when asked so", () => {
    const totals = { "Ca2+": 0.01, fluoride: 0.03 };
    const options = { solids: (s: { readonly pace: string }) => s.pace === "fast" };
    const formed = equilibrate(knowledge, { ...base, pH: 6, totals, options });
    expect(formed.result.solidsMolPerL[0]).toBeGreaterThan(0.005);
    expect(Math.abs(formed.result.saturationIndex[0]!)).toBeLessThan(1e-9);
    const told = equilibrate(knowledge, { ...base, pH: 6, totals, options, solids: "saturation-only" });
    expect(told.result.solidsMolPerL[0]).toBe(0);
    expect(told.result.saturationIndex[0]).toBeGreaterThan(2);
  });

  test("a free ligand is held, and beyond 0.5 mol/L the status says so", () => {
    const state = equilibrate(knowledge, { ...base, totals: { "Zn2+": 0.01 }, free: { ammonia: 0.1 } });
    expectRelative(state.freeMolPerL("ammonia"), 0.1, 1e-12);
    expect(state.status).toBe("converged");
    const salty = equilibrate(knowledge, { ...base, totals: { "Zn2+": 0.01 }, inert: { "Na+": 1, "Cl-": 1 } });
    expect(salty.status).toBe("outOfModelRange");
  });

  test("a negative amount is refused, zero is absent", () => {
    expect(() => equilibrate(knowledge, { ...base, totals: { "Zn2+": -1 } })).toThrow(/Zn2\+/);
    expect(equilibrate(knowledge, { ...base, totals: { "Zn2+": 0, ammonia: 0.1 } }).freeMolPerL("Zn2+")).toBe(0);
  });
});
