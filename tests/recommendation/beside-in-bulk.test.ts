import { beforeAll, describe, expect, it } from "vitest";
import { openEngine } from "../../src/main.ts";
import type { Recommendation } from "../../src/recommendation/contract.ts";

type Engine = Awaited<ReturnType<typeof openEngine>>;
type Row = readonly [string, number];

let engine: Engine;
beforeAll(async () => {
  engine = await openEngine();
});

const mmol = (value: number) => ({ value, unit: "mmol/L" as const });
const ask = (analyte: Row, matrix: readonly Row[], percent: number): Promise<Recommendation> =>
  engine.recommend({
    title: "invented",
    analytes: [{ ion: analyte[0], concentration: mmol(analyte[1]) }],
    matrix: matrix.map(([component, value]) => ({ component, concentration: mmol(value) })),
    portion: { volumeML: 50, titrationVolumeML: 100 },
    requirement: { relativeExpandedUncertaintyPercent: percent },
  });

describe("one analyte beside a metal in bulk", () => {
  // EPA 242.1 / APHA 3500-Mg (memory): magnesium is the difference of total hardness at pH 10 and calcium at pH 12 to 13.
  it("gives magnesium beside calcium as the difference of two portions", async () => {
    const { methods } = await ask(
      ["Mg2+", 1.2],
      [
        ["Ca2+", 2],
        ["HCO3-", 5],
      ],
      5,
    );
    const first = methods[0]!;
    expect(first.mode).toBe("difference");
    expect(first.stages.map((s) => [...s.determines].sort())).toEqual([["Ca2+", "Mg2+"], ["Ca2+"]]);
    expect(first.stages[1]!.pH.target).toBeGreaterThanOrEqual(12);
    expect(first.predicted.perAnalyte.map((p) => p.determines)).toEqual([["Mg2+"]]);
    // JCGM 100: u of the difference is not below u of the sum times sum over difference (3.2 over 1.2).
    expect(first.predicted.relativeExpandedUncertaintyPercent).toBeGreaterThan(1);
  });

  it("does not split what a direct titration settles", async () => {
    const { methods } = await ask(["Zn2+", 8], [["Mg2+", 4]], 1);
    expect(methods.every((m) => m.mode !== "difference")).toBe(true);
  });
});

describe("ligands of the sample", () => {
  // Copper baths are of copper(I) cyanide, which no complexone takes: the cyanide is destroyed first (plating laboratories, memory).
  it("has cyanide destroyed before copper is titrated", async () => {
    const { methods, findings } = await ask(["Cu2+", 5], [["CN-", 15]], 2);
    expect(methods[0]!.stages[0]!.vessel.removed).toEqual(["cyanide"]);
    const left = methods.filter((m) => !m.stages.some((s) => s.vessel.removed.includes("cyanide")));
    expect(left.filter((m) => m.verdict === "fit")).toEqual([]);
    expect(findings.some((f) => f.component === "CN-" && f.as === "complexes-analyte")).toBe(true);
  });

  // log K HgY 21.5, alpha Y(H) 4.65 at pH 6, log beta2 HgCl2 13.2 with 0.005 mol/L chloride: log K' about 8.
  it("titrates mercury that the titrant takes from its chloride without parting the two", async () => {
    const { methods } = await ask(["Hg2+", 2.5], [["Cl-", 5]], 1);
    expect(methods[0]!.stages[0]!.vessel.removed).toEqual([]);
  });
});
