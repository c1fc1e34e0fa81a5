import { beforeAll, describe, expect, it } from "vitest";
import { type Engine, openEngine } from "../../src/main.ts";
import { figureSeries, type StageSeries } from "../../src/recommendation/calculate-series.ts";
import type { Recommendation } from "../../src/recommendation/contract.ts";
import { expectRelative } from "../expect-relative.ts";

// An invented sample: zinc with calcium, which does not compete at the pH of a zinc titration.
const BRIEF = {
  title: "Zinc beside calcium, an invented sample",
  analytes: [{ ion: "Zn2+", concentration: { value: 8, unit: "mmol/L" } }],
  matrix: [
    { component: "Ca2+", concentration: { value: 4, unit: "mmol/L" } },
    { component: "Cl-", concentration: { value: 24, unit: "mmol/L" } },
  ],
};

describe("figureSeries", () => {
  let engine: Engine;
  let document: Recommendation;
  const seriesOf = (index: number): StageSeries => {
    const series = figureSeries(document, document.methods[index]?.id ?? "", engine.knowledge);
    if (series === null) throw new Error(`no series for method ${index}`);
    return series;
  };
  beforeAll(async () => {
    engine = await openEngine();
    document = await engine.recommend(BRIEF);
  });

  it("computes the end point again where the document has it", () => {
    document.methods.forEach((method, index) => {
      const { endPoint } = seriesOf(index).curve;
      const stage = method.stages[0];
      if (endPoint === null || stage === undefined) throw new Error(method.id);
      // The document is rounded to a microlitre and a hundredth of pM.
      expectRelative(endPoint.volumeML, stage.titreML ?? Number.NaN, 1e-3);
      if (stage.endPoint.pM !== null) expectRelative(endPoint.pM, stage.endPoint.pM, 5e-3);
      expect(endPoint.low).toBeLessThanOrEqual(endPoint.volumeML);
      expect(endPoint.high).toBeGreaterThanOrEqual(endPoint.volumeML);
    });
  });
  it("computes the conditional constants of the figure as the document states them at the target pH", () => {
    const stage = document.methods[0]?.stages[0];
    const { logK } = seriesOf(0);
    const stated = stage?.conditional.find((entry) => entry.metal === "Zn2+")?.log10ConditionalK ?? Number.NaN;
    const target = stage?.pH.target ?? Number.NaN;
    const nearest = logK.pH.reduce(
      (best, pH, i) => (Math.abs(pH - target) < Math.abs((logK.pH[best] ?? 99) - target) ? i : best),
      0,
    );
    const drawn = logK.lines[0]?.values[nearest] ?? Number.NaN;
    expect(Math.abs(drawn - stated)).toBeLessThan(0.5); // a grid of 0.25 in pH, and a little more titrant in the vessel
  });
  it("draws the analyte first, then the metals beside it, over pH 0 to 14", () => {
    const { logK } = seriesOf(0);
    expect(logK.lines.map((line) => line.label)).toEqual(expect.arrayContaining(["Zn2+", "Ca2+"]));
    expect(logK.lines[0]?.label).toBe("Zn2+");
    expect([logK.pH[0], logK.pH.at(-1)]).toEqual([0, 14]);
    for (const line of logK.lines) expect(line.values).toHaveLength(logK.pH.length);
  });
  it("draws a direct titration's curve rising, with points close to equivalence", () => {
    const index = document.methods.findIndex((method) => method.mode === "direct");
    const { curve } = seriesOf(index);
    const values = curve.pM.filter((value) => value !== null);
    expect(values.length).toBeGreaterThan(50);
    expect(values.every((value, i) => i === 0 || value >= (values[i - 1] ?? 0) - 1e-9)).toBe(true);
    expect(curve.volumeML.filter((v) => Math.abs(v / curve.equivalenceML - 1) <= 0.001).length).toBeGreaterThanOrEqual(
      5,
    );
  });
  it("has none for a method that is not in the document", () => {
    expect(figureSeries(document, "no-such-method", engine.knowledge)).toBeNull();
  });
});
