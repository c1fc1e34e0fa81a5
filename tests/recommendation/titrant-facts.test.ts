import { beforeAll, describe, expect, it } from "vitest";
import { expectRelative } from "../expect-relative.ts";
import { openEngine } from "../../src/main.ts";
import { titrantFacts } from "../../src/recommendation/titrant-facts.ts";
import { backPlan, dye, inventedPlan, inventedTask, KNOWLEDGE } from "../methods/invented.ts";
import { developed } from "./developed.ts";

let engine: Awaited<ReturnType<typeof openEngine>>;
beforeAll(async () => {
  engine = await openEngine();
});

const calciumWith = (titrant: string) =>
  inventedPlan({
    determines: ["Ca2+"],
    titrant: { id: titrant, molPerL: 0.01 },
    pH: 10,
    buffer: { id: "ammonia", molPerL: 0.1 },
    indicator: dye("zincon"),
    chelate: { metal: "Zn2+", ligand: titrant, molPerL: 3e-4 },
  });

describe("what another titrant solves", () => {
  // Handbook tables (Harris; Ringbom): log K of Ca and Mg 10.7 and 8.8 with EDTA, 11.0 and 5.2 with EGTA.
  it("is magnesium left alone by EGTA beside calcium, not by EDTA", () => {
    const task = inventedTask({ "Ca2+": 0.005 }, { "Mg2+": 0.01 });
    const apart = (titrant: string) => titrantFacts(task, developed(task, calciumWith(titrant)), KNOWLEDGE).toldApart;
    expect(apart("EGTA")).toEqual(["Mg2+"]);
    expect(apart("EDTA")).toEqual([]);
    // log K with DTPA 10.8 and 9.3: no better than EDTA.
    expect(apart("DTPA")).toEqual([]);
  });

  it("is nothing where the other metal is masked, removed, or a trace", () => {
    const beside = (mgMolPerL: number, removed: string[]) => {
      const task = inventedTask({ "Ca2+": 0.005 }, { "Mg2+": mgMolPerL });
      return titrantFacts(task, developed(task, { ...calciumWith("EGTA"), removed }), KNOWLEDGE).toldApartCount;
    };
    expect(beside(0.01, [])).toBe(1);
    expect(beside(0.01, ["Mg2+"])).toBe(0);
    expect(beside(1e-5, [])).toBe(0);
  });

  // Pribil 1982 (recalled): aluminium reacts with CDTA in the cold, with EDTA at the boil.
  it("is heat spared for aluminium with CDTA", () => {
    const task = inventedTask({ "Al3+": 0.004 });
    const cold = (titrant: string, preparation: string[]) =>
      titrantFacts(
        task,
        developed(task, { ...backPlan(), determines: ["Al3+"], titrant: { id: titrant, molPerL: 0.01 }, preparation }),
        KNOWLEDGE,
      ).sparesHeat;
    expect(cold("CDTA", ["excess-titrant-first", "wait"])).toBe(true);
    expect(cold("CDTA", ["excess-titrant-first", "boil", "cool"])).toBe(false);
    expect(cold("EDTA", ["excess-titrant-first", "wait"])).toBe(false);
  });

  it("counts a chelate against the analyte", () => {
    const task = inventedTask({ "Ca2+": 0.004 });
    const { chelateToAnalyteRatio } = titrantFacts(task, developed(task, calciumWith("EGTA")), KNOWLEDGE);
    expectRelative(Number(chelateToAnalyteRatio), 3e-4 / 0.001, 1e-6);
  });
});

describe("invented briefs in which another titrant wins", () => {
  const level = (mmolPerL: number) => ({ value: mmolPerL, unit: "mmol/L" });
  const brief = (ion: string, matrix: Readonly<Record<string, number>>, laboratory: object = {}) => ({
    title: `${ion}, an invented sample`,
    analytes: [{ ion, concentration: level(5) }],
    matrix: Object.entries(matrix).map(([component, mM]) => ({ component, concentration: level(mM) })),
    portion: { volumeML: 25, titrationVolumeML: 100 },
    requirement: { relativeExpandedUncertaintyPercent: 1 },
    laboratory,
  });

  // log K of La, Ca and Mg (handbooks): 15.5, 10.7, 8.8 with EDTA; 19.5, 10.8, 9.3 with DTPA.
  it("takes DTPA for lanthanum beside ten times as much calcium and magnesium, and says why", async () => {
    const [first] = (await engine.recommend(brief("La3+", { "Ca2+": 50, "Mg2+": 50, "NO3-": 215 }))).methods;
    expect(first!.titrant.id).toBe("DTPA");
    expect(first!.scores.map((s) => s.rule)).toContain("practicability/titrant-tells-apart");
  });

  it("takes CDTA for aluminium where nothing may be heated, and says why", async () => {
    const [first] = (await engine.recommend(brief("Al3+", { "NO3-": 15 }, { heating: false }))).methods;
    expect(first!.titrant.id).toBe("CDTA");
    expect(first!.scores.map((s) => s.rule)).toContain("practicability/titrant-spares-heat");
  });

  // Trien binds copper (log K 20) and hardly calcium or zinc in weak acid: the special titrant is opened where no usual one may be used.
  it("opens trien for copper where the complexones are to be avoided", async () => {
    const avoid = ["EDTA", "CDTA", "DTPA", "EGTA", "HEDTA", "NTA", "TTHA"];
    const [first] = (await engine.recommend(brief("Cu2+", { "NO3-": 10 }, { avoid }))).methods;
    expect(first!.titrant.id).toBe("trien");
    expect(first!.verdict).toBe("fit");
  });
});
