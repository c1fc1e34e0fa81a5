import { describe, expect, it } from "vitest";
import {
  degreesOfFreedomOf,
  effectiveDegreesOfFreedom,
  propagate,
  standardUncertaintyOf,
  type Quantity,
} from "../../src/methods/gum.ts";
import { expectRelative } from "../expect-relative.ts";

const known = (name: string, value: number, standardUncertainty: number, unit = "", degreesOfFreedom = Infinity) =>
  ({ name, value, unit, distribution: "normal", halfWidth: standardUncertainty, degreesOfFreedom }) satisfies Quantity;
const limits = (name: string, value: number, halfWidth: number, distribution: Quantity["distribution"], unit = "mL") =>
  ({ name, value, unit, distribution, halfWidth, degreesOfFreedom: Infinity }) satisfies Quantity;
const share = (p: ReturnType<typeof propagate>, name: string): number =>
  p.inputs.find((q) => q.name === name)!.contribution / p.value;

// EURACHEM/CITAC Guide, Quantifying Uncertainty in Analytical Measurement; inputs and results read in the summary of examples A2 and A3.
const REPEATABILITY_A2 = known("repeatability", 1, 0.0005);
const MASS = known("mass of the phthalate", 0.3888, 0.00013, "g");
const PURITY = known("purity of the phthalate", 1, 0.00029);
const MOLAR_MASS = known("molar mass of the phthalate", 204.2212, 0.0038, "g/mol");

describe("QUAM example A2, sodium hydroxide against potassium hydrogen phthalate (read)", () => {
  const result = propagate(
    [REPEATABILITY_A2, MASS, PURITY, MOLAR_MASS, known("volume", 18.64, 0.013, "mL")],
    ([rep, m, p, M, V]) => (rep! * 1000 * m! * p!) / (M! * V!),
  );
  it("is 0.10214 mol/L with 0.00010 mol/L, 0.097 % relative, as printed", () => {
    expect(result.value.toFixed(5)).toBe("0.10214");
    expect(result.combined.toFixed(5)).toBe("0.00010");
    expect((result.combined / result.value).toFixed(5)).toBe("0.00097");
  });
  it("comes from the volume, the repeatability, the mass, the purity and the molar mass in this order", () => {
    const order = [...result.inputs].sort((a, b) => b.contribution - a.contribution).map((q) => q.name);
    expect(order).toEqual([
      "volume",
      "repeatability",
      "mass of the phthalate",
      "purity of the phthalate",
      "molar mass of the phthalate",
    ]);
    // Relative contributions by hand: 0.013/18.64, 0.00013/0.3888.
    expectRelative(share(result, "volume"), 6.97e-4, 0.005);
    expectRelative(share(result, "mass of the phthalate"), 3.34e-4, 0.005);
  });
  it("has its volume and its mass from their limits (burette and temperature limits of the example recalled)", () => {
    // Burette 0.03 mL triangular, 3 K with 2.1e-4 per K at 95 % over 19 mL; weighing 0.15 mg rectangular, twice.
    const burette = standardUncertaintyOf(limits("burette", 18.64, 0.03, "triangular"));
    const temperature = (19 * 2.1e-4 * 3) / 1.96;
    expect(Math.hypot(burette, temperature).toFixed(3)).toBe("0.014"); // 0.0137; the example rounds 0.012 and 0.006 first, to 0.013
    expect(Math.hypot(0.012, 0.006).toFixed(3)).toBe("0.013");
    const once = standardUncertaintyOf(limits("balance", 0, 0.00015, "rectangular", "g"));
    expect((Math.SQRT2 * once).toFixed(5)).toBe("0.00012"); // 0.000122; the example rounds 0.09 mg first, to 0.13 mg
    expect((Math.SQRT2 * 0.09).toFixed(2)).toBe("0.13");
  });
});

describe("QUAM example A3, hydrochloric acid against the same hydroxide (read)", () => {
  const measurand = ([rep, m, p, V2, V1, M, V]: readonly number[]): number =>
    (rep! * 1000 * m! * p! * V2!) / (V1! * M! * V!);
  const quantities = (repeatability: number): Quantity[] => [
    known("repeatability", 1, repeatability),
    MASS,
    PURITY,
    known("V_T2", 14.89, 0.015, "mL"),
    known("V_T1", 18.64, 0.016, "mL"),
    MOLAR_MASS,
    known("V_HCl", 15, 0.011, "mL"),
  ];
  it("is 0.10139 mol/L, as printed", () =>
    expect(propagate(quantities(0.001), measurand).value.toFixed(5)).toBe("0.10139"));
  it("has 0.00019 mol/L from all its inputs, and the printed 0.00016 (0.16 %) only without the repeatability that it lists", () => {
    const all = propagate(quantities(0.001), measurand);
    expect(all.combined.toFixed(5)).toBe("0.00019");
    expect((all.combined / all.value).toFixed(4)).toBe("0.0019");
    const without = propagate(quantities(0), measurand);
    expect(without.combined.toFixed(5)).toBe("0.00016");
    expect((without.combined / without.value).toFixed(4)).toBe("0.0016");
  });
});

describe("JCGM 100 example H.1, an end gauge (recalled)", () => {
  // l = ls + d - ls (da t + a dt): ls 50.000623 mm (25 nm, 18), d 215 nm (9.7, 25.6), da 0 (0.58e-6, 50), t -0.1 C (0.41), a 11.5e-6 (1.2e-6), dt 0 (0.029, 2).
  const result = propagate(
    [
      known("ls", 50.000623e6, 25, "nm", 18),
      known("d", 215, 9.7, "nm", 25.6),
      known("da", 0, 0.58e-6, "1/K", 50),
      known("t", -0.1, 0.41, "K"),
      known("a", 11.5e-6, 1.2e-6, "1/K"),
      known("dt", 0, 0.029, "K", 2),
    ],
    ([ls, d, da, t, a, dt]) => ls! + d! - ls! * (da! * t! + a! * dt!),
  );
  it("is 50.000838 mm with 32 nm and 16 effective degrees of freedom", () => {
    expect((result.value / 1e6).toFixed(6)).toBe("50.000838");
    expect(result.combined.toFixed(0)).toBe("32");
    expect(Math.floor(result.effectiveDegreesOfFreedom)).toBe(16);
  });
});

describe("the parts of a propagation", () => {
  it("divides limits by root 6 and root 3, and a normal quantity by nothing (JCGM 100, 4.3)", () => {
    expectRelative(standardUncertaintyOf(limits("a", 1, 0.03, "triangular")), 0.012247, 1e-4);
    expectRelative(standardUncertaintyOf(limits("a", 1, 0.03, "rectangular")), 0.017321, 1e-4);
    expect(standardUncertaintyOf(known("a", 1, 0.03))).toBe(0.03);
  });
  it("gives 8 degrees of freedom to a figure known to a quarter (JCGM 100, G.4.2, recalled)", () =>
    expect(degreesOfFreedomOf(0.25)).toBe(8));
  it("has infinite degrees of freedom where every limit is set by a standard, and those of a single term where it stands alone", () => {
    expect(effectiveDegreesOfFreedom([{ contribution: 1, degreesOfFreedom: Infinity }])).toBe(Infinity);
    expectRelative(effectiveDegreesOfFreedom([{ contribution: 0.3, degreesOfFreedom: 5 }]), 5, 1e-12);
  });
  it("leaves a quantity without uncertainty out of the sum", () => {
    const { inputs, combined } = propagate([known("a", 2, 0), known("b", 3, 0.1)], ([a, b]) => a! * b!);
    expect(inputs[0]!.contribution).toBe(0);
    expectRelative(combined, 0.2, 1e-9);
  });
});
