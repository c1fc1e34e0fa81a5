import { describe, expect, it } from "vitest";
import { prepareSystem } from "../../src/chemistry/prepare-system.ts";
import { solveEquilibrium } from "../../src/chemistry/solve-equilibrium.ts";
import { protonFixed, vesselSolver } from "../../src/methods/vessel-solver.ts";
import { expectRelative } from "../expect-relative.ts";
import { KNOWLEDGE } from "./invented.ts";

// The vessel solver takes short ways (metals eliminated, hydroxides as fixed free metal); the general solver, which takes none, is the judge.

const COMPONENTS = ["Mg2+", "Cu2+", "Zn2+", "Ca2+", "EDTA", "ammonia"];
const METALS = new Set(["Mg2+", "Cu2+", "Zn2+", "Ca2+"]);
const HYDROXIDES = KNOWLEDGE.solids.filter(
  (s) => s.fresh && Object.keys(s.components).every((c) => c === "H+" || METALS.has(c)),
);
const system = prepareSystem(
  KNOWLEDGE,
  COMPONENTS,
  { ionicStrengthMolPerL: 0.1, temperatureC: 25 },
  { solids: (s) => HYDROXIDES.includes(s) },
);
const totals = (edta: number): Float64Array =>
  Float64Array.from(system.components, (c) => ({ "H+": 0, EDTA: edta, ammonia: 0.01 })[c] ?? 2e-3);

/** Titrant rises from none to more than all metals: hydroxides lie at first and dissolve one after the other. */
const TITRATION = [0, 5e-4, 1e-3, 2e-3, 3e-3, 4e-3, 5e-3, 6e-3, 7e-3, 7.9e-3, 8.1e-3, 1e-2];

describe.each([9, 11, 12.5])("a vessel with hydroxides at pH %d", (pH) => {
  it("agrees with the general solver at every volume, solids and all", () => {
    const solve = vesselSolver(system, pH, METALS);
    for (const edta of TITRATION) {
      const t = totals(edta);
      const ours = solve(t);
      const judge = solveEquilibrium(system.problem, t, { fixedLnFree: protonFixed(system, pH) });
      expect(ours.ok && judge.status === "converged").toBe(true);
      judge.solidsMolPerL.forEach((amount, i) => {
        if (amount > 1e-12) expectRelative(ours.solidsMolPerL[i]!, amount, 1e-7);
        else expect(ours.solidsMolPerL[i]!).toBeLessThan(2e-12);
      });
      judge.speciesMolPerL.forEach((amount, row) => {
        if (amount > 1e-30) expectRelative(ours.species(row), amount, 1e-7);
        else expect(ours.species(row)).toBeLessThan(1e-29);
      });
    }
  });
});

describe("what a vessel holds of a component that is not there", () => {
  it("is nothing at all, also when the vessel is solved from another that had it", () => {
    const solve = vesselSolver(system, 9, METALS);
    solve(totals(1e-3));
    const without = solve(totals(0));
    const withTitrant = system.species.flatMap((s, row) => ((s.components["EDTA"] ?? 0) > 0 ? [row] : []));
    expect(withTitrant.length).toBeGreaterThan(5);
    expect(withTitrant.map((row) => without.species(row))).toEqual(withTitrant.map(() => 0));
  });
  it("a hydroxide that lies has the solubility product of its solid (handbook form: [M][OH]^n)", () => {
    const solve = vesselSolver(system, 11, METALS);
    solve(totals(0));
    const state = solve(totals(1e-3));
    const lying = system.solids.flatMap((solid, i) => (state.solidsMolPerL[i]! > 0 ? [solid] : []));
    expect(lying.length).toBeGreaterThan(0);
    const lnH = state.lnFree[0]!;
    for (const solid of lying) {
      const [metal, atoms] = Object.entries(solid.components).find(([c]) => c !== "H+")!;
      const product = atoms * state.lnFree[system.index.get(metal)!]! + solid.components["H+"]! * lnH;
      expectRelative(product / Math.LN10, -solid.log10Beta, 2e-11);
    }
  });
});
