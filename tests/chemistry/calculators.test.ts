import { describe, expect, test } from "vitest";
import { calculateCurve } from "../../src/chemistry/calculators/curve.ts";
import { calculateEquilibrium } from "../../src/chemistry/calculators/equilibrium.ts";
import { equilibrate } from "../../src/chemistry/equilibrate.ts";
import { expectRelative } from "../expect-relative.ts";
import { zincKnowledge } from "./small-knowledge.ts";

const knowledge = zincKnowledge();
const given = [
  { components: { "Cd2+": 1, EDTA: 1 }, log10Beta: 16.46 },
  { components: { "H+": 1, EDTA: 1 }, log10Beta: 10.24 },
];

describe("calculateEquilibrium", () => {
  test("balances, alphas and conditional constants are those of the solved solution", () => {
    const answer = calculateEquilibrium(
      { pH: 10, totals: { "Zn2+": 0.01, "Ca2+": 0.002, EDTA: 0.011 }, free: { ammonia: 0.1 } },
      knowledge,
    );
    expect(answer.status).toBe("converged");
    for (const component of answer.components) {
      const sum = answer.species.reduce((s, x) => s + (x.components[component.id] ?? 0) * x.molPerL, 0);
      expectRelative(sum, component.totalMolPerL, 1e-9);
      expectRelative(
        component.sideReaction.log10Alpha,
        Math.log10(component.totalMolPerL / component.freeMolPerL),
        1e-9,
      );
    }
    expect(answer.conditional.map((c) => c.metal)).toEqual(["Zn2+", "Ca2+"]);
    const zinc = answer.conditional[0]!;
    const withBoth = (x: { readonly components: Readonly<Record<string, number>> }) =>
      "Zn2+" in x.components && "EDTA" in x.components;
    const amount = (choose: (x: (typeof answer.species)[number]) => boolean) =>
      answer.species.filter(choose).reduce((s, x) => s + x.molPerL, 0);
    const complex = amount(withBoth);
    const metal = amount((x) => "Zn2+" in x.components && !("EDTA" in x.components));
    const ligand = amount((x) => "EDTA" in x.components && !("Zn2+" in x.components));
    expectRelative(zinc.log10ConditionalK, Math.log10(complex / (metal * ligand)), 1e-9);
  });

  test("constants given are used as they are, under any names, without correction", () => {
    const answer = calculateEquilibrium(
      {
        pH: 10,
        titrant: "Y",
        totals: { Q: 0.001, Y: 0.001 },
        constants: [
          { components: { Q: 1, Y: 1 }, log10Beta: 16.46 },
          { components: { "H+": 1, Y: 1 }, log10Beta: 10.24 },
        ],
      },
      knowledge,
    );
    expectRelative(answer.log10H, -10, 1e-12);
    expect(answer.ionicStrengthMolPerL).toBe(0);
    expectRelative(answer.conditional[0]!.log10AlphaLigand, Math.log10(1 + 10 ** 0.24), 1e-9);
    expectRelative(answer.conditional[0]!.log10ConditionalK, 16.46 - Math.log10(1 + 10 ** 0.24), 1e-9);
    expect(answer.species.map((s) => s.source)).toContain("given with the question");
    expect(answer.solids).toEqual([]);
  });

  test("log10H fixes the concentration, pH the activity", () => {
    const ask = (acidity: { readonly pH?: number; readonly log10H?: number }) =>
      calculateEquilibrium({ ...acidity, totals: { EDTA: 0.01 }, ionicStrengthMolPerL: 0.1 }, knowledge).log10H;
    expectRelative(ask({ log10H: -9 }), -9, 1e-12);
    expect(ask({ pH: 9 })).toBeGreaterThan(-8.95);
  });

  test("solids form where they are allowed and quick, and are told in any case", () => {
    const ask = (solids: boolean) =>
      calculateEquilibrium({ pH: 6, totals: { "Ca2+": 0.01, fluoride: 0.03 }, solids }, knowledge);
    const formed = ask(true).solids;
    expect(formed.map((s) => [s.id, s.molPerL > 0, s.mayForm])).toEqual([
      ["CaF2", true, true],
      ["slow CaF2", false, false],
    ]);
    expect(formed[1]!.saturationIndex).toBeGreaterThan(0.5);
    expect(ask(false).solids.every((s) => s.molPerL === 0 && s.saturationIndex > 1)).toBe(true);
  });

  test("a component with a total of zero is answered in the limit of traces, with no value that is not a number", () => {
    const answer = calculateEquilibrium({ pH: 5, titrant: "EDTA", totals: { "Zn2+": 0.001, EDTA: 0 } }, knowledge);
    expect(answer.components.find((c) => c.id === "EDTA")).toMatchObject({ totalMolPerL: 0, freeMolPerL: 0 });
    expect(answer.conditional[0]!.log10ConditionalK).toBeGreaterThan(5);
    expect(JSON.stringify(answer)).not.toMatch(/null/);
  });

  test("components are written as the question wrote them", () => {
    const answer = calculateEquilibrium(
      { pH: 10, totals: { "Zn2+": 0.001, EDTA: 0.001, ammonia: 0.1 }, names: { ammonia: "NH3" } },
      knowledge,
    );
    expect(answer.components.map((c) => c.id)).toEqual(["Zn2+", "EDTA", "NH3"]);
    expect(answer.species.filter((s) => "NH3" in s.components).length).toBeGreaterThan(3);
    expect(answer.species.some((s) => "ammonia" in s.components)).toBe(false);
  });

  test("each constant names its record", () => {
    const answer = calculateEquilibrium({ pH: 5, totals: { "Zn2+": 0.001 } }, knowledge);
    expect(answer.species.find((s) => s.components["Zn2+"] === 1 && s.components["H+"] === -1)!.source).toBe(
      "made-up record 1 (computed)",
    );
  });
});

describe("calculateCurve", () => {
  test("with constants of its own the curve is the quadratic of the conditional constant", () => {
    const answer = calculateCurve(
      {
        sample: { volumeML: 50, totals: { "Cd2+": 0.005 } },
        titrant: { id: "EDTA", molPerL: 0.01 },
        pH: 10,
        follow: "Cd2+",
        volumesML: [0, 10, 25, 30],
        constants: given,
      },
      knowledge,
    );
    expectRelative(answer.equivalenceML, 25, 1e-12);
    const k = 10 ** 16.46 / (1 + 10 ** 0.24);
    const c = 0.005 * (50 / 75);
    const free = (-1 + Math.sqrt(1 + 4 * k * c)) / (2 * k);
    expectRelative(answer.atEquivalence.pM, -Math.log10(free), 1e-9);
    expectRelative(answer.points[0]!.pM, -Math.log10(0.005), 1e-9);
    expectRelative(answer.points[1]!.fractionTitrated, 0.4, 1e-9);
    expectRelative(answer.points[3]!.pM, 16.46 - Math.log10(1 + 10 ** 0.24) + Math.log10(5 / 25), 1e-6);
  });

  test("from the knowledge each point has its own ionic strength and is the equilibrium of that solution", () => {
    const answer = calculateCurve(
      {
        sample: { volumeML: 50, totals: { "Zn2+": 0.005 } },
        titrant: { id: "EDTA", molPerL: 0.01 },
        pH: 10,
        free: { ammonia: 0.1 },
        follow: "Zn2+",
        volumesML: [0, 20, 25, 40],
      },
      knowledge,
    );
    const last = answer.points[3]!;
    const direct = equilibrate(knowledge, {
      totals: { "Zn2+": 0.25 / 90, EDTA: 0.4 / 90 },
      free: { ammonia: 0.1 },
      pH: 10,
      temperatureC: 25,
      ionicStrength: "auto",
    });
    expect(direct.status).toBe("converged");
    expectRelative(last.pM, -Math.log10(direct.freeMolPerL("Zn2+")), 1e-6);
    expect(last.pM).toBeGreaterThan(last.pMTotal);
    answer.points.slice(1).forEach((p, i) => expect(p.pM).toBeGreaterThan(answer.points[i]!.pM));
  });

  test("a ligand that the metal depletes goes through the general solver", () => {
    const answer = calculateCurve(
      {
        sample: { volumeML: 50, totals: { "Cd2+": 0.005, L: 0.02 } },
        titrant: { id: "EDTA", molPerL: 0.01 },
        log10H: -10,
        follow: "Cd2+",
        volumesML: [0, 30],
        constants: [...given, { components: { "Cd2+": 1, L: 2 }, log10Beta: 8 }],
      },
      knowledge,
    );
    expect(answer.status).toBe("converged");
    expect(answer.points[0]!.pM).toBeGreaterThan(5);
  });

  test("a curve says what precipitates on the way and where it is gone", () => {
    const ask = (fluoride: number) =>
      calculateCurve(
        {
          sample: { volumeML: 50, totals: { "Ca2+": 0.005, fluoride } },
          titrant: { id: "EDTA", molPerL: 0.01 },
          pH: 10,
          follow: "Ca2+",
          volumesML: [0, 10, 30],
        },
        knowledge,
      );
    expect(ask(0.02).notes.join()).toMatch(/CaF2 precipitates.* 10 mL/);
    expect(ask(0.0001).notes).toEqual([]);
  });

  test("what is followed must be in the sample", () => {
    const ask = (follow: string) => () =>
      calculateCurve(
        {
          sample: { volumeML: 50, totals: { "Zn2+": 0.005 } },
          titrant: { id: "EDTA", molPerL: 0.01 },
          pH: 10,
          follow,
          volumesML: [10],
        },
        knowledge,
      );
    expect(ask("Ca2+")).toThrow(/Ca2\+/);
    expect(ask("Zn2+")).not.toThrow();
  });
});
