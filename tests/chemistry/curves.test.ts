import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { explicitCurve, whyNotExplicit } from "../../src/chemistry/curve-explicit.ts";
import { generalCurve } from "../../src/chemistry/curve-general.ts";
import { prepareSystem } from "../../src/chemistry/prepare-system.ts";
import { titrationSeries } from "../../src/chemistry/series.ts";
import type { Titration } from "../../src/chemistry/titration.ts";
import { loadKnowledge } from "../../src/constants/index.ts";
import { expectRelative } from "../expect-relative.ts";
import { smallKnowledge, zincKnowledge } from "./small-knowledge.ts";

const knowledge = zincKnowledge();
const conditions = { ionicStrengthMolPerL: 0.1, temperatureC: 25 };
const noSolids = { solids: () => false };
const zincAndCalcium: Titration = {
  system: prepareSystem(knowledge, ["Zn2+", "Ca2+", "EDTA", "ammonia"], conditions, noSolids),
  log10H: -9.9,
  sampleVolumeML: 50,
  sampleMolPerL: { "Zn2+": 0.004, "Ca2+": 0.003 },
  titrant: { component: "EDTA", molPerL: 0.01 },
  freeMolPerL: { ammonia: 0.1 },
  follow: "Zn2+",
};

/** Both forms agree to this many pM wherever both apply: the standing test of the contract. */
const AGREE_PM = 1e-6;

describe("titration curves", () => {
  test("the explicit and the general curve agree within 1e-6 pM for random titrations where both apply", () => {
    let compared = 0;
    fc.assert(
      fc.property(
        fc.record({
          log10H: fc.double({ min: -13, max: -1, noNaN: true }),
          zinc: fc.double({ min: -6, max: -1, noNaN: true }),
          calcium: fc.double({ min: -7, max: -1, noNaN: true }),
          strength: fc.double({ min: -3, max: -1, noNaN: true }),
          ammonia: fc.double({ min: -5, max: 0, noNaN: true }),
          kZinc: fc.double({ min: 3, max: 25, noNaN: true }),
          kCalcium: fc.double({ min: 2, max: 20, noNaN: true }),
          follow: fc.constantFrom("Zn2+", "Ca2+", "EDTA"),
          fractions: fc.array(fc.double({ min: 0, max: 3, noNaN: true }), { minLength: 3, maxLength: 3 }),
        }),
        (c) => {
          const titration: Titration = {
            ...zincAndCalcium,
            system: prepareSystem(
              smallKnowledge({ "Zn2+": 2, "Ca2+": 2, EDTA: -4, ammonia: 0 }, [
                { components: { EDTA: 1, "H+": 1 }, log10Beta: 10.2 },
                { components: { EDTA: 1, "H+": 2 }, log10Beta: 16.3 },
                { components: { "Zn2+": 1, EDTA: 1 }, log10Beta: c.kZinc },
                { components: { "Zn2+": 1, EDTA: 2 }, log10Beta: c.kZinc + 2 },
                { components: { "Zn2+": 1, ammonia: 2 }, log10Beta: 5 },
                { components: { "Zn2+": 1, "H+": -1 }, log10Beta: -9 },
                { components: { "Ca2+": 1, EDTA: 1 }, log10Beta: c.kCalcium },
                { components: { "Ca2+": 1, EDTA: 1, "H+": 1 }, log10Beta: c.kCalcium + 3 },
              ]),
              ["Zn2+", "Ca2+", "EDTA", "ammonia"],
              conditions,
            ),
            log10H: c.log10H,
            sampleMolPerL: { "Zn2+": 10 ** c.zinc, "Ca2+": 10 ** c.calcium },
            titrant: { component: "EDTA", molPerL: 10 ** c.strength },
            freeMolPerL: { ammonia: 10 ** c.ammonia },
            follow: c.follow,
          };
          const explicit = explicitCurve(titration);
          const general = generalCurve(titration);
          const equivalence = (50 * (10 ** c.zinc + 10 ** c.calcium)) / 10 ** c.strength;
          for (const fraction of [...c.fractions, 0, 0.999, 1, 1.001]) {
            const volume = Math.min(fraction * equivalence, 1e6);
            if (volume < 1e-9 && c.follow === "EDTA") continue; // no titrant, no pM of it
            const a = explicit.at(volume);
            const b = general.at(volume);
            expect(b.status).toBe("converged");
            expect(Math.abs(a.pM - b.pM), `pM at ${volume} mL`).toBeLessThan(AGREE_PM);
            expect(Math.abs(a.pMTotal - b.pMTotal), `pM' at ${volume} mL`).toBeLessThan(AGREE_PM);
            expect(Math.abs(a.fractionTitrated - b.fractionTitrated)).toBeLessThan(1e-9);
            compared++;
          }
        },
      ),
      { seed: 2, numRuns: 400 },
    );
    expect(compared).toBeGreaterThan(2000);
  });

  test("both forms agree on the constants of the knowledge, without its polynuclear species", () => {
    const real = loadKnowledge();
    const single = (s: { readonly components: Readonly<Record<string, number>> }) =>
      ["Zn2+", "Mg2+", "Ca2+"].reduce((sum, id) => sum + (s.components[id] ?? 0), 0) > 1;
    const titration: Titration = {
      ...zincAndCalcium,
      system: prepareSystem(real, ["Zn2+", "Mg2+", "Ca2+", "EDTA", "ammonia"], conditions, {
        ...noSolids,
        exclude: single,
      }),
      sampleMolPerL: { "Zn2+": 0.002, "Mg2+": 0.001, "Ca2+": 0.002 },
    };
    expect(
      whyNotExplicit({
        ...titration,
        system: prepareSystem(real, ["Zn2+", "Mg2+", "Ca2+", "EDTA", "ammonia"], conditions, noSolids),
      }),
    ).toMatch(/holds more than one/);
    for (const follow of ["Zn2+", "Mg2+", "Ca2+"])
      for (const volume of [0, 5, 9.99, 10, 15, 20, 24.99, 25, 25.01, 40]) {
        const a = explicitCurve({ ...titration, follow }).at(volume);
        const b = generalCurve({ ...titration, follow }).at(volume);
        expect(Math.abs(a.pM - b.pM), `${follow} at ${volume} mL`).toBeLessThan(AGREE_PM);
        expect(Math.abs(a.pMTotal - b.pMTotal)).toBeLessThan(AGREE_PM);
      }
  });

  test("the swept volume rises with the free titrant and its points lie on the curve by volume", () => {
    const curve = explicitCurve(zincAndCalcium);
    const points = curve.sweep(-60, -5, 200);
    const inside = points.filter((p) => p.volumeML > 1e-3 && p.volumeML < 100);
    expect(inside.length).toBeGreaterThan(30);
    inside.slice(1).forEach((p, i) => expect(p.volumeML).toBeGreaterThan(inside[i]!.volumeML));
    for (const p of inside) expect(Math.abs(curve.at(p.volumeML).pM - p.pM)).toBeLessThan(AGREE_PM);
  });

  test("atPM finds the volume of a pM on the curve and nothing for one off it", () => {
    const curve = explicitCurve(zincAndCalcium);
    const found = curve.atPM(10)!;
    expectRelative(curve.at(found.volumeML).pM, 10, 1e-9);
    expect(curve.atPM(1)).toBe(null);
  });

  test("titrant that stands in the sample already counts", () => {
    const withSome: Titration = { ...zincAndCalcium, sampleMolPerL: { "Zn2+": 0.004, "Ca2+": 0.003, EDTA: 0.001 } };
    for (const volume of [0, 10, 29.9, 30, 40])
      expect(Math.abs(explicitCurve(withSome).at(volume).pM - generalCurve(withSome).at(volume).pM)).toBeLessThan(
        AGREE_PM,
      );
    expect(explicitCurve(withSome).at(0).fractionTitrated).toBeGreaterThan(0.2);
  });

  test("a metal as titrant of a ligand is followed by its own pM", () => {
    const back: Titration = {
      ...zincAndCalcium,
      sampleMolPerL: { EDTA: 0.005 },
      titrant: { component: "Zn2+", molPerL: 0.01 },
      follow: "Zn2+",
    };
    for (const volume of [1, 20, 25, 25.1, 30]) {
      const a = explicitCurve(back).at(volume);
      const b = generalCurve(back).at(volume);
      expect(Math.abs(a.pM - b.pM)).toBeLessThan(AGREE_PM);
      expect(Math.abs(a.pMTotal - b.pMTotal)).toBeLessThan(AGREE_PM);
      expectRelative(a.fractionTitrated, b.fractionTitrated, 1e-9);
    }
  });

  test("the explicit form is refused where metals deplete a ligand or solids may form, and the general form takes over", () => {
    const depleted: Titration = {
      ...zincAndCalcium,
      sampleMolPerL: { "Zn2+": 0.004, ammonia: 0.004 },
      freeMolPerL: {},
    };
    expect(whyNotExplicit(zincAndCalcium)).toBe(null);
    expect(whyNotExplicit(depleted)).toMatch(/more than one/);
    expect(() => explicitCurve(depleted)).toThrow(/explicit/);
    expect(generalCurve(depleted).at(10).status).toBe("converged");
    const solid: Titration = {
      ...zincAndCalcium,
      system: prepareSystem(knowledge, ["Ca2+", "EDTA", "fluoride"], conditions),
      sampleMolPerL: { "Ca2+": 0.01, fluoride: 0.1 },
      freeMolPerL: {},
      follow: "Ca2+",
    };
    expect(whyNotExplicit(solid)).toBe("solids may form");
    const start = generalCurve(solid).solve(0);
    expect(start.solidsMolPerL[0]! + start.solidsMolPerL[1]!).toBeGreaterThan(0.005);
  });

  test("a series for a figure rises in volume and crowds at the break", () => {
    const points = titrationSeries(zincAndCalcium, 60, 50);
    points.slice(1).forEach((p, i) => expect(p.volumeML).toBeGreaterThanOrEqual(points[i]!.volumeML));
    const steps = points.slice(1).map((p, i) => p.pM - points[i]!.pM);
    expect(Math.max(...steps)).toBeLessThan(0.5);
  });
});
