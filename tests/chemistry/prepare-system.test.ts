import { describe, expect, test } from "vitest";
import { prepareSystem } from "../../src/chemistry/prepare-system.ts";
import { expectRelative } from "../expect-relative.ts";
import { zincKnowledge } from "./small-knowledge.ts";

const conditions = { ionicStrengthMolPerL: 0.1, temperatureC: 25 };

describe("prepareSystem", () => {
  test("H+ is column 0, the others keep their order, and the first rows are the free components", () => {
    const system = prepareSystem(zincKnowledge(), ["ammonia", "Zn2+", "H+"], conditions);
    expect(system.components).toEqual(["H+", "ammonia", "Zn2+"]);
    expect(system.species.slice(0, 3).map((s) => s.components)).toEqual([{ "H+": 1 }, { ammonia: 1 }, { "Zn2+": 1 }]);
    expect([...system.problem.lnBeta.slice(0, 3)]).toEqual([0, 0, 0]);
    expectRelative(system.log10Kw, -13.78, 1e-12);
  });

  test("only species made of the components alone are in, hydroxide among them", () => {
    const system = prepareSystem(zincKnowledge(), ["Zn2+"], conditions);
    expect(system.species.map((s) => s.components)).toEqual([
      { "H+": 1 },
      { "Zn2+": 1 },
      { "H+": -1 },
      { "Zn2+": 1, "H+": -1 },
      { "Zn2+": 1, "H+": -2 },
    ]);
  });

  test("masks leave out species and solids, free components never", () => {
    const knowledge = zincKnowledge();
    const all = prepareSystem(knowledge, ["Ca2+", "fluoride"], conditions);
    const some = prepareSystem(knowledge, ["Ca2+", "fluoride"], conditions, {
      solids: (s) => s.pace === "fast",
      exclude: (s) => "Ca2+" in s.components,
    });
    expect(all.solids.map((s) => s.id)).toEqual(["CaF2", "slow CaF2"]);
    expect(some.solids.map((s) => s.id)).toEqual(["CaF2"]);
    expect(some.species.filter((s) => "Ca2+" in s.components).map((s) => s.components)).toEqual([{ "Ca2+": 1 }]);
    expect(some.problem.stoichiometry).toHaveLength(some.species.length * 3);
  });

  test("evidence says record, move and uncertainty for each reaction of a species", () => {
    const system = prepareSystem(zincKnowledge(), ["Zn2+", "EDTA"], { ionicStrengthMolPerL: 0, temperatureC: 25 });
    const complex = system.species.find(
      (s) => s.components["Zn2+"] === 1 && s.components["EDTA"] === 1 && !("H+" in s.components),
    )!;
    expect(complex.evidence).toHaveLength(1);
    expect(complex.evidence[0]!.record.log10K).toBe(16.5);
    expectRelative(complex.evidence[0]!.log10KUsed, complex.log10Beta, 1e-12);
    expectRelative(complex.evidence[0]!.uncertainty, complex.uncertainty, 1e-12);
  });

  test("a system asked for twice is the same, and one beyond 0.5 mol/L says so", () => {
    const knowledge = zincKnowledge();
    const first = prepareSystem(knowledge, ["Zn2+", "EDTA"], conditions);
    const second = prepareSystem(knowledge, ["Zn2+", "EDTA"], conditions);
    expect([...second.problem.lnBeta]).toEqual([...first.problem.lnBeta]);
    expect(first.outOfModelRange).toBe(false);
    expect(prepareSystem(knowledge, ["Zn2+"], { ionicStrengthMolPerL: 0.6, temperatureC: 25 }).outOfModelRange).toBe(
      true,
    );
  });

  test("an unknown component is refused, a known one not", () => {
    const knowledge = zincKnowledge();
    expect(() => prepareSystem(knowledge, ["Xx2+"], conditions)).toThrow(/Xx2\+/);
    expect(() => prepareSystem(knowledge, ["Ca2+"], conditions)).not.toThrow();
  });
});
